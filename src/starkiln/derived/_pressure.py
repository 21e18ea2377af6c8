"""From an observed star to its mass, age and share of light: the joint posterior.

The star is taken to be single and on the main sequence. Model coordinates are ln M, u
(the age, see `interiors.Grid`) and ln Z; a fixed set of cells that tile the grid is weighed by
prior and likelihood, points are drawn inside the heavy cells, and weighed again exactly.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np

from starkiln.constants import T_SUN
from starkiln.derived._pressure_cells import (
    Evidence,
    Light,
    cells,
    conflict,
    log_likelihood,
    log_prior,
    near,
    off_grid,
    scatter,
    take,
)
from starkiln.errors import InputError
from starkiln.interiors import MainSequence, load_grid
from starkiln.matter import (
    composition,
    eddington_factor,
    hydrogen_of_metals,
    thomson_opacity,
)

#: Relative scatter of P_rad/P at given mass and age: a choice.
SCATTER_SHARE = 0.02
#: Points drawn; the second number where the first leaves too few effective ones.
_PROPOSALS = (1500, 12000)
_ENOUGH = 400.0
_MOST_CENTRES = 256
#: log10 T and an error that leaves it free.
_ANY_TEMPERATURE = (4.4, 1.0)


@dataclass(frozen=True)
class PressurePosterior:
    """Draws of what follows for one star.

    Attributes
    ----------
    draws : dict of numpy.ndarray
        `mass`, `radius`, `luminosity` (solar), `temperature` (K), `age_fraction` (of the
        main sequence), `age` (1e6 yr), `metals`, `mu` (unburnt), `radiation_fraction` and
        `radiation_to_gas` (volume integrals; with `_core` at the centre, with `_at_Q` at
        mass fraction Q), `gamma_e`. Empty where the star is off the grid.
    n_eff : float
        Effective number of weighted points behind the draws.
    reason : str
        Why the star is off the grid; empty otherwise.
    """

    draws: dict[str, np.ndarray] = field(default_factory=dict)
    n_eff: float = 0.0
    reason: str = ""

    def radiation_fraction_at(self, mass_fraction: float) -> np.ndarray:
        """Return draws of P_rad/P at m/M from 0 to 0.99, between the depths of the grid."""
        depths = (0.0, *load_grid().depths)
        if not 0.0 <= mass_fraction <= depths[-1]:
            raise InputError(
                f"mass fraction = {mass_fraction:g} is out of bounds: give 0 to {depths[-1]:g}"
            )
        names = ["_core", *(f"_at_{depth:g}" for depth in depths[1:])]
        shares = np.stack([self.draws[f"radiation_fraction{name}"] for name in names])
        # Near the centre the run goes as m^(2/3).
        places = np.array(depths) ** (2.0 / 3.0)
        place = mass_fraction ** (2.0 / 3.0)
        above = min(int(np.searchsorted(places, place, side="right")), places.size - 1)
        share = (place - places[above - 1]) / (places[above] - places[above - 1])
        return np.asarray(shares[above - 1] + share * (shares[above] - shares[above - 1]))


def light_from_values(
    temperature: tuple[float, float] | None = None,
    luminosity: tuple[float, float] | None = None,
    radius: tuple[float, float] | None = None,
) -> Light:
    """Return the constraint of measured values, each with its error.

    Parameters
    ----------
    temperature : tuple of float, optional
        K.
    luminosity : tuple of float, optional
        solLum, independent of the others; without a temperature it holds the star alone, or
        gives one together with the radius.
    radius : tuple of float, optional
        solRad; with a temperature the luminosity follows from the two, and errs with
        the temperature.

    Raises
    ------
    InputError
        Fewer than a luminosity, or two of the three.
    """
    zero = 4.0 * np.log10(T_SUN.value)
    if temperature is not None and radius is not None:
        (log_t, e_t), (log_r, e_r) = _log10(temperature), _log10(radius)
        log_l, shared = 2.0 * log_r + 4.0 * log_t - zero, 4.0 * e_t**2
        errors = 4.0 * e_r**2 + 16.0 * e_t**2, e_t**2
    elif luminosity is None:
        raise InputError("a luminosity or a radius must go with the temperature")
    else:
        log_l, e_l = _log10(luminosity)
        shared = 0.0
        if temperature is not None:
            log_t, e_t = _log10(temperature)
        elif radius is not None:
            log_r, e_r = _log10(radius)
            log_t, e_t = 0.25 * (log_l + zero) - 0.5 * log_r, float(np.hypot(e_l, 2 * e_r) / 4)
            shared = e_l**2 / 4.0
        else:
            log_t, e_t = _ANY_TEMPERATURE
        errors = e_l**2, e_t**2
    covariance = np.array([[errors[0], shared], [shared, errors[1]]])
    return Light(np.array([[log_l, log_t]]), covariance)


def light_from_draws(luminosity: np.ndarray, temperature: np.ndarray) -> Light:
    """Return the constraint of posterior draws, their covariance and skewness kept.

    Parameters
    ----------
    luminosity, temperature : numpy.ndarray
        Draws of one posterior, in pairs: solLum and K. Their prior should be wide, as that
        of a fit with its default settings is; it is not divided out.

    Notes
    -----
    A kernel estimate whose centres are drawn in so that mean and covariance stay those of
    the draws: West 1993, J. R. Statist. Soc. B 55, 409.
    """
    points = np.log10(np.stack([luminosity, temperature], axis=-1))
    points = points[np.all(np.isfinite(points), axis=1)]
    if len(points) < 20:
        raise InputError(f"{len(points)} draws are too few: give at least 20 of L and T above 0")
    points = points[np.linspace(0, len(points) - 1, min(len(points), _MOST_CENTRES)).astype(int)]
    spread = points - points.mean(axis=0)
    width = len(points) ** (-1.0 / 6.0)
    covariance = width**2 * (spread.T @ spread) / len(points)
    return Light(points.mean(axis=0) + np.sqrt(1.0 - width**2) * spread, covariance)


def pressure_posterior(
    evidence: Evidence, *, rng: np.random.Generator, size: int = 512
) -> PressurePosterior:
    """Return the joint posterior of mass, age, size and light's share of the pressure.

    Parameters
    ----------
    evidence : Evidence
        At least light or mass.
    rng : numpy.random.Generator
    size : int
        Draws to return.

    Notes
    -----
    Prior: mass function of slope -2.35, star formation even in time, [Fe/H] as given or
    0.0 +- 0.2; X = 0.76 - 3 Z. The scatter of real stars about the models is part of the
    likelihood and of the draws.
    """
    if evidence.light is None and evidence.mass is None:
        raise InputError("give a temperature with luminosity or radius, or a mass")
    tiles = cells()
    reason = off_grid(evidence, tiles)
    if reason:
        return PressurePosterior(reason=reason)
    # Cells are weighed with a simpler likelihood; the points drawn in them with the exact one.
    rough = evidence if evidence.light is None else replace(evidence, light=evidence.light.coarse)
    some = near(rough, tiles)
    point, models = tiles.coordinates[some], take(tiles.models, some)
    likelihood = log_likelihood(rough, point, models, wide=True)
    reason = conflict(rough, point, models, likelihood)
    if reason:
        return PressurePosterior(reason=reason)
    weight = tiles.log_prior[some] + likelihood
    for count in _PROPOSALS:
        chosen = rng.choice(some.size, count, p=_share(weight))
        drawn = point[chosen] + (rng.random((count, 3)) - 0.5) * tiles.size
        found = load_grid().at(*drawn.T)
        exact = log_prior(drawn, found) + log_likelihood(evidence, drawn, found, wide=False)
        importance = _share(exact - weight[chosen])
        n_eff = float(1.0 / np.sum(importance**2))
        if n_eff > _ENOUGH:
            break
    kept = _resample(importance, size, rng)
    draws = _draws(evidence, drawn[kept], take(found, kept), rng)
    return PressurePosterior(draws=draws, n_eff=n_eff)


def _share(log_weight: np.ndarray) -> np.ndarray:
    weight = np.exp(log_weight - log_weight.max())
    return np.asarray(weight / weight.sum())


def _resample(weight: np.ndarray, size: int, rng: np.random.Generator) -> np.ndarray:
    """Return point numbers in proportion to the weights (systematic), in random order."""
    comb = (np.arange(size) + rng.random()) / size
    found = np.minimum(np.searchsorted(np.cumsum(weight), comb), weight.size - 1)
    return rng.permutation(found)


def _draws(
    evidence: Evidence, point: np.ndarray, models: MainSequence, rng: np.random.Generator
) -> dict[str, np.ndarray]:
    mass, metals = np.exp(point[:, 0]), np.exp(point[:, 2])
    log_l, log_t = _true_light(evidence.light, mass, models, rng)
    mu, opacity = _matter(metals)
    error = np.exp(SCATTER_SHARE * rng.standard_normal(mass.size))
    shares = {"": models.share_volume, "_core": models.share_core}
    shares |= {
        f"_at_{depth:g}": models.share_at[:, i] for i, depth in enumerate(load_grid().depths)
    }
    draws = {
        "mass": mass,
        "radius": 10.0 ** (0.5 * log_l - 2.0 * (log_t - np.log10(T_SUN.value))),
        "luminosity": 10.0**log_l,
        "temperature": 10.0**log_t,
        "age_fraction": models.age_fraction,
        "age": models.age_fraction * models.lifetime_myr,
        "metals": metals,
        "mu": mu,
        "gamma_e": eddington_factor(10.0**log_l, mass, opacity),
    }
    for where, share in shares.items():
        # The scatter acts on P_rad/P_gas, so that the share stays below one.
        ratio = share / (1.0 - share) * error
        draws[f"radiation_to_gas{where}"] = ratio
        draws[f"radiation_fraction{where}"] = ratio / (1.0 + ratio)
    return draws


def _matter(metals: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return mu and the opacity of electron scattering; 1/mu and it are linear in Z."""
    ends = np.array([0.0, 0.03])
    low, high = (composition(float(hydrogen_of_metals(z)), float(z)) for z in ends)
    mu = 1.0 / np.interp(metals, ends, [1.0 / low.mu, 1.0 / high.mu])
    return mu, np.interp(metals, ends, [thomson_opacity(low), thomson_opacity(high)])


def _true_light(
    light: Light | None, mass: np.ndarray, models: MainSequence, rng: np.random.Generator
) -> tuple[np.ndarray, np.ndarray]:
    """Return draws of the star's own log L and log T, given its model and the measurement."""
    model = np.stack([models.log_luminosity, models.log_temperature], axis=-1)
    own = scatter(mass)
    if light is None:
        truth = model + np.sqrt(own) * rng.standard_normal(model.shape)
        return truth[:, 0], truth[:, 1]
    spread = light.covariance + own[:, :, None] * np.eye(2)
    inverse = np.linalg.inv(spread)
    off = light.centres[None] - model[:, None]
    each = -0.5 * np.einsum("nki,nij,nkj->nk", off, inverse, off)
    each += rng.gumbel(size=each.shape)
    off = off[np.arange(mass.size), each.argmax(axis=1)]
    # The Gaussian of the scatter times that of the chosen centre.
    gain = own[:, :, None] * np.eye(2) @ inverse
    mean = model + np.einsum("nij,nj->ni", gain, off)
    left = own[:, :, None] * np.eye(2) - gain @ (own[:, :, None] * np.eye(2))
    root = np.linalg.cholesky(left + 1e-14 * np.eye(2))
    truth = mean + np.einsum("nij,nj->ni", root, rng.standard_normal(mean.shape))
    return truth[:, 0], truth[:, 1]


def _log10(pair: tuple[float, float]) -> tuple[float, float]:
    value, error = pair
    return float(np.log10(value)), float(error / value / np.log(10.0))
