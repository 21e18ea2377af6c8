"""Prior densities of single parameters: each can be evaluated, drawn from and printed."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Protocol

import numpy as np


class Prior(Protocol):
    """What the posterior, the engines and the figures need of a prior."""

    @property
    def lower(self) -> float:
        """The lower bound."""

    @property
    def upper(self) -> float:
        """The upper bound."""

    def ln_density(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the density, -inf outside the bounds; shape of `x`."""

    def draw(self, rng: np.random.Generator, n: int) -> np.ndarray:
        """Return `n` draws."""

    @property
    def sd(self) -> float:
        """The standard deviation."""

    def describe(self) -> str:
        """Return the prior in words."""


@dataclass(frozen=True)
class Parameter:
    """One dimension that an engine explores.

    Attributes
    ----------
    name : str
        `ln_temperature` (K), `ln_diameter` (mas), `av` (mag), `ln_misfit`, or a
        further parameter of the emitter by its own name.
    prior : Prior
    """

    name: str
    prior: Prior


@dataclass(frozen=True)
class Uniform:
    """Constant between `lower` and `upper`."""

    lower: float
    upper: float

    def ln_density(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the density, -inf outside the bounds; shape of `x`."""
        inside = (x >= self.lower) & (x <= self.upper)
        return np.where(inside, -math.log(self.upper - self.lower), -np.inf)

    def draw(self, rng: np.random.Generator, n: int) -> np.ndarray:
        """Return `n` draws."""
        return rng.uniform(self.lower, self.upper, n)

    @property
    def sd(self) -> float:
        """The standard deviation."""
        return (self.upper - self.lower) / math.sqrt(12.0)

    def describe(self) -> str:
        """Return the prior in words."""
        return f"uniform, {self.lower:.6g} to {self.upper:.6g}"


@dataclass(frozen=True)
class TruncatedNormal:
    """Gaussian of mean `mean` and width `width`, cut at `lower` and `upper`."""

    mean: float
    width: float
    lower: float
    upper: float

    def ln_density(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the density, -inf outside the bounds; shape of `x`."""
        inside = (x >= self.lower) & (x <= self.upper)
        z = (x - self.mean) / self.width
        norm = math.log(self.width) + 0.5 * math.log(2.0 * math.pi) + math.log(self._mass())
        return np.where(inside, -0.5 * z * z - norm, -np.inf)

    def draw(self, rng: np.random.Generator, n: int) -> np.ndarray:
        """Return `n` draws."""
        from scipy.special import ndtr, ndtri

        low, high = (ndtr((edge - self.mean) / self.width) for edge in (self.lower, self.upper))
        x = self.mean + self.width * ndtri(rng.uniform(low, high, n))
        return np.clip(x, self.lower, self.upper)

    @property
    def sd(self) -> float:
        """The standard deviation, by the closed form of the truncated Gaussian."""
        a, b = ((edge - self.mean) / self.width for edge in (self.lower, self.upper))
        pa, pb = (math.exp(-0.5 * z * z) / math.sqrt(2.0 * math.pi) for z in (a, b))
        mass = self._mass()
        shift = (pa - pb) / mass
        return self.width * math.sqrt(max(1.0 + (a * pa - b * pb) / mass - shift * shift, 0.0))

    def describe(self) -> str:
        """Return the prior in words."""
        bounds = f"cut at {self.lower:.6g} and {self.upper:.6g}"
        if self.mean == self.lower:
            return f"half-normal, width {self.width:.6g}, {bounds}"
        return f"Gaussian, {self.mean:.6g} +- {self.width:.6g}, {bounds}"

    def _mass(self) -> float:
        low, high = (
            0.5 * math.erfc(-(edge - self.mean) / self.width / math.sqrt(2.0))
            for edge in (self.lower, self.upper)
        )
        return high - low
