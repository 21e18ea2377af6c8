"""The posterior of one star's distance, by quadrature in one dimension.

The band fluxes depend on the angular diameter, the parallax on the distance; with
independent priors their posteriors are independent, so the distance needs no
Markov chain: its cumulative distribution is integrated on a grid fine enough for
the sharpest parallax and inverted.

The parallax is data, not a distance: likelihood Gaussian in parallax, prior in
distance (Bailer-Jones 2015, PASP 127, 994; Luri et al. 2018, A&A 616, A9).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from starkiln.errors import InputError
from starkiln.inference._settings import Settings

_NODES = 4001
#: ln of the density, below its largest, at which a tail is cut.
_DEPTH = 40.0


@dataclass(frozen=True)
class DistancePosterior:
    """Nodes of the distance and its cumulative probability.

    Attributes
    ----------
    distance_pc, cumulative : numpy.ndarray
        Shape (n,), rising; one node where the distance is exact.
    description : str
        Prior and likelihood in words.
    prior_sd, sd : float
        Standard deviation of ln distance before and after the data; NaN where no
        prior enters.
    """

    distance_pc: np.ndarray
    cumulative: np.ndarray
    description: str
    prior_sd: float
    sd: float

    def draw(
        self, rng: np.random.Generator, n: int, levels: np.ndarray | None = None
    ) -> np.ndarray:
        """Return `n` draws in pc, in random order, stratified to lower their noise.

        With `levels` between 0 and 1, shape (n,), the draws are those at these levels.
        """
        if self.distance_pc.size == 1:
            return np.full(n, self.distance_pc[0])
        if levels is None:
            levels = (rng.permutation(n) + rng.uniform(size=n)) / n
        return np.interp(levels, self.cumulative, self.distance_pc)


def from_parallax(
    parallax_mas: float, e_parallax_mas: float, settings: Settings
) -> DistancePosterior:
    """Return the distance posterior of a parallax, which may be negative.

    Parameters
    ----------
    parallax_mas, e_parallax_mas : float
        Measured parallax and its error, above 0, in mas.
    settings : Settings
        Distance prior, its length, the zero point and the error's factor.

    Returns
    -------
    DistancePosterior

    Raises
    ------
    InputError
        The error is not above 0.
    """
    if not e_parallax_mas > 0.0:
        raise InputError(f"e_parallax = {e_parallax_mas:g} mas must be above 0")
    measured = parallax_mas - settings.parallax_zero_point
    error = e_parallax_mas * settings.parallax_error_factor
    length = settings.distance_length

    def ln_density(distance_pc: np.ndarray) -> np.ndarray:
        misfit = (1000.0 / distance_pc - measured) / error
        return _ln_prior(distance_pc, settings) - 0.5 * misfit * misfit

    reach = (60.0 if settings.distance_prior == "exponential" else 10.0) * length
    coarse = np.geomspace(length * 1e-7, reach, 2000)
    peak = measured + error * np.linspace(-9.0, 9.0, 181)
    near = 1000.0 / peak[peak > 1000.0 / reach]
    cumulative, distance, sd = _integrate(ln_density, np.unique(np.concatenate([coarse, near])))
    _, _, prior_sd = _integrate(lambda d: _ln_prior(d, settings), coarse)
    return DistancePosterior(
        distance,
        cumulative,
        f"Gaussian in parallax, {measured:.6g} +- {error:.4g} mas (zero point "
        f"{settings.parallax_zero_point:g} mas subtracted, error factor "
        f"{settings.parallax_error_factor:g}); prior {describe_prior(settings)}",
        prior_sd,
        sd,
    )


def from_distance(distance_pc: float, e_distance_pc: float | None) -> DistancePosterior:
    """Return the distribution of a distance that is given: Gaussian, cut at 0, or exact."""
    if not distance_pc > 0.0:
        raise InputError(f"distance = {distance_pc:g} pc must be above 0")
    if not e_distance_pc:
        exact = np.array([distance_pc])
        return DistancePosterior(exact, np.ones(1), "distance taken as exact", np.nan, 0.0)
    low = max(distance_pc - 9.0 * e_distance_pc, distance_pc * 1e-6)
    grid = np.linspace(low, distance_pc + 9.0 * e_distance_pc, _NODES)
    cumulative, distance, sd = _integrate(
        lambda d: -0.5 * ((d - distance_pc) / e_distance_pc) ** 2, grid
    )
    text = f"Gaussian, {distance_pc:.6g} +- {e_distance_pc:.4g} pc as given, cut at 0"
    return DistancePosterior(distance, cumulative, text, np.nan, sd)


def describe_prior(settings: Settings) -> str:
    """Return the distance prior in words, with its source."""
    length = settings.distance_length
    if settings.distance_prior == "exponential":
        return (
            f"p(d) ~ d^2 exp(-d/L), L = {length:g} pc (Bailer-Jones 2015, PASP 127, 994; "
            "L = 1350 pc: Astraatmadja & Bailer-Jones 2016, ApJ 833, 119)"
        )
    return f"p(d) ~ d^2 out to {10.0 * length:g} pc (constant density of stars)"


def _ln_prior(distance_pc: np.ndarray, settings: Settings) -> np.ndarray:
    volume = 2.0 * np.log(distance_pc)
    if settings.distance_prior == "exponential":
        return volume - distance_pc / settings.distance_length
    return np.where(distance_pc <= 10.0 * settings.distance_length, volume, -np.inf)


def _integrate(
    ln_density: Callable[[np.ndarray], np.ndarray], grid: np.ndarray
) -> tuple[np.ndarray, np.ndarray, float]:
    """Find the range that matters on `grid`, integrate there finely in ln d."""
    height = ln_density(grid) + np.log(grid)
    inside = np.flatnonzero(height > height.max() - _DEPTH)
    low, high = max(inside[0] - 1, 0), min(inside[-1] + 1, grid.size - 1)
    ln_d = np.union1d(
        np.linspace(np.log(grid[low]), np.log(grid[high]), _NODES), np.log(grid[low : high + 1])
    )
    height = ln_density(np.exp(ln_d)) + ln_d
    density = np.exp(height - height.max())
    steps = 0.5 * (density[1:] + density[:-1]) * np.diff(ln_d)
    cumulative = np.concatenate([[0.0], np.cumsum(steps)])
    cumulative /= cumulative[-1]
    weight = np.diff(cumulative)
    middle = 0.5 * (ln_d[1:] + ln_d[:-1])
    mean = weight @ middle
    return cumulative, np.exp(ln_d), float(np.sqrt(weight @ (middle - mean) ** 2))
