"""The shipped grid of main-sequence models, and values between its nodes."""

from __future__ import annotations

import json
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.constants import T_SUN
from starkiln.errors import StorageError
from starkiln.store import data_path

_FILE = "main_sequence.npz"
_REQUIRED = ("description", "reference", "licence", "retrieved")


@dataclass(frozen=True)
class MainSequence:
    """Values of stars on the main sequence; arrays of one shape.

    Attributes
    ----------
    log_luminosity, log_radius, log_temperature : numpy.ndarray
        log10 of solar luminosities, solar radii and kelvins.
    age_fraction : numpy.ndarray
        Age over the length of the main sequence, 0 to 1.
    lifetime_myr : numpy.ndarray
        That length in 1e6 years.
    share_core, share_volume : numpy.ndarray
        P_rad/P at the centre and of the volume integrals.
    share_at : numpy.ndarray
        P_rad/P at the mass fractions `DEPTHS`, on a last axis.
    """

    log_luminosity: np.ndarray
    log_radius: np.ndarray
    log_temperature: np.ndarray
    age_fraction: np.ndarray
    lifetime_myr: np.ndarray
    share_core: np.ndarray
    share_volume: np.ndarray
    share_at: np.ndarray


class Grid:
    """The grid and its splines; made by `load_grid`.

    Coordinates are ln M (solar masses), u from 0 (zero age) to 1 (end) that is even in
    ln(s + shift), s = X_c/X_0, and ln Z.

    Attributes
    ----------
    log_mass, log_metals : tuple of float
        Bounds of ln M and ln Z.
    depths : tuple of float
        Mass fractions of `MainSequence.share_at`.
    """

    def __init__(self, content: Any) -> None:
        header = json.loads(str(content["header"]))
        missing = [key for key in _REQUIRED if not header.get(key)]
        if missing:
            raise StorageError(f"the data file {_FILE} lacks {', '.join(missing)}")
        self.depths = tuple(header["depths"])
        self._shift = float(header["shift"])
        self._stage = content["stage"]
        log_mass, log_metals = np.log(content["mass"]), np.log(content["metals"])
        self.log_mass = float(log_mass[0]), float(log_mass[-1])
        self.log_metals = float(log_metals[0]), float(log_metals[-1])
        table = content["table"].astype(float).transpose(1, 2, 0, 3)
        self._length = _spline((log_mass, log_metals), np.log(table[:, -1, :, 2]))
        table[..., 2] /= table[:, -1:, :, 2]
        stages = np.linspace(0.0, 1.0, self._stage.size)
        self._values = _spline((log_mass, stages, log_metals), table)

    def stage(self, hydrogen_share: Any) -> np.ndarray:
        """Return u of given s = X_c/X_0."""
        span = np.log((self._stage[-1] + self._shift) / (1.0 + self._shift))
        return np.log((np.asarray(hydrogen_share) + self._shift) / (1.0 + self._shift)) / span

    def hydrogen_share(self, stage: Any) -> np.ndarray:
        """Return s = X_c/X_0 of given u."""
        span = np.log((self._stage[-1] + self._shift) / (1.0 + self._shift))
        return (1.0 + self._shift) * np.exp(np.asarray(stage) * span) - self._shift

    def at(self, log_mass: Any, stage: Any, log_metals: Any) -> MainSequence:
        """Return the models at given coordinates, broadcast; no check of bounds."""
        m, u, z = np.broadcast_arrays(log_mass, stage, log_metals)
        values = self._values(np.stack([m, u, z], axis=-1))
        light, radius = values[..., 0], values[..., 1]
        share = 10.0 ** values[..., 3:]
        return MainSequence(
            log_luminosity=light,
            log_radius=radius,
            log_temperature=np.log10(T_SUN.value) + 0.25 * light - 0.5 * radius,
            age_fraction=values[..., 2],
            lifetime_myr=np.exp(self._length(np.stack([m, z], axis=-1))),
            share_core=share[..., 0],
            share_volume=share[..., 1],
            share_at=share[..., 2:],
        )

    def ageing(self, log_mass: Any, stage: Any, log_metals: Any) -> np.ndarray:
        """Return the derivative of the age fraction by u."""
        m, u, z = np.broadcast_arrays(log_mass, stage, log_metals)
        slope = self._values(np.stack([m, u, z], axis=-1), nu=(0, 1, 0))[..., 2]
        return np.maximum(slope, 0.0)

    def stage_of_age(self, log_mass: Any, age_fraction: Any, log_metals: Any) -> np.ndarray:
        """Return u of given age fraction, by bisection of the age's own spline."""
        m, age, z = np.broadcast_arrays(log_mass, age_fraction, log_metals)
        low, high = np.zeros(age.shape), np.ones(age.shape)
        for _ in range(40):
            middle = 0.5 * (low + high)
            young = self._values(np.stack([m, middle, z], axis=-1))[..., 2] < age
            low, high = np.where(young, middle, low), np.where(young, high, middle)
        stage = 0.5 * (low + high)
        return np.where(age <= 0.0, 0.0, np.where(age >= 1.0, 1.0, stage))


@lru_cache(maxsize=1)
def load_grid() -> Grid:
    """Return the shipped grid."""
    with np.load(data_path("interiors", _FILE)) as content:
        return Grid(content)


@lru_cache(maxsize=1)
def zero_age_starts() -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return masses, metal fractions and unknowns (Z, M, 4, point) of zero-age models."""
    with np.load(data_path("interiors", _FILE)) as content:
        starts = content["start"].astype(float)
        return content["start_mass"], content["metals"], starts


def _spline(axes: tuple[np.ndarray, ...], values: np.ndarray) -> Any:
    """Return the cubic tensor spline through the values, the axes first."""
    from scipy.interpolate import NdBSpline, make_interp_spline

    knots = []
    coefficients = values
    for axis, points in enumerate(axes):
        line = make_interp_spline(points, np.moveaxis(coefficients, axis, 0), k=3)
        knots.append(line.t)
        coefficients = np.moveaxis(line.c, 0, axis)
    return NdBSpline(tuple(knots), np.ascontiguousarray(coefficients), 3)
