"""Cells that tile the main-sequence grid, and how well each agrees with a star."""

from __future__ import annotations

from dataclasses import dataclass, fields
from functools import lru_cache

import numpy as np

from starkiln.constants import GM_SUN, R_SUN
from starkiln.interiors import MainSequence, load_grid

#: Slope of the mass function: Salpeter 1955, ApJ 121, 161.
IMF_SLOPE = -2.35
#: Z of [Fe/H] = 0: Asplund et al. 2009, ARA&A 47, 481.
SOLAR_METALS = 0.0134
#: [Fe/H] and its error where none is given: young stars near the Sun, a choice.
USUAL_FEH = (0.0, 0.2)
#: How far real stars scatter about the models, dex: a choice. Above 40 to 60 solar masses
#: published effective temperatures differ by three times as much.
SCATTER_LUMINOSITY, SCATTER_TEMPERATURE, SCATTER_GRAVITY = 0.03, 0.01, 0.03
SCATTER_METALLICITY = 0.05
SCATTER_TEMPERATURE_MASSIVE = 0.03

_CELLS = (220, 36, 14)
#: Variances that make up for the size of a cell: log L, log T, log g, relative mass, [Fe/H].
_CELL_VARIANCE = np.array([0.02, 0.01, 0.02, 0.012, 0.06]) ** 2
#: Mahalanobis distance squared of three sigma in two dimensions.
_FAR = 11.83
_KEEP = 40.0
_WIDER = 1.3


def assumptions() -> dict[str, float]:
    """Return the numbers that were chosen, for the text that goes with the answers."""
    low, high = np.exp(load_grid().log_mass)
    return {
        "imf_slope": IMF_SLOPE,
        "solar_metals": SOLAR_METALS,
        "feh": USUAL_FEH[0],
        "e_feh": USUAL_FEH[1],
        "scatter_luminosity": SCATTER_LUMINOSITY,
        "scatter_temperature": SCATTER_TEMPERATURE,
        "mass_low": float(low),
        "mass_high": float(high),
    }


@dataclass(frozen=True)
class Light:
    """What was measured of luminosity and temperature: equal Gaussians at many centres.

    Attributes
    ----------
    centres : numpy.ndarray
        (n, 2): log10 L (solar) and log10 T (K).
    covariance : numpy.ndarray
        (2, 2), of each Gaussian.
    """

    centres: np.ndarray
    covariance: np.ndarray

    @property
    def mean(self) -> np.ndarray:
        """Mean of all."""
        return np.asarray(self.centres.mean(axis=0))

    @property
    def total_covariance(self) -> np.ndarray:
        """Covariance of all."""
        spread = self.centres - self.mean
        return np.asarray(self.covariance + spread.T @ spread / len(spread))

    @property
    def coarse(self) -> Light:
        """One Gaussian in place of many, a little wider: where to look, not what to believe."""
        if len(self.centres) == 1:
            return self
        return Light(self.mean[None], _WIDER * self.total_covariance)


@dataclass(frozen=True)
class Evidence:
    """What is known of a star; a pair is a value with its standard error.

    Attributes
    ----------
    light : Light or None
        Luminosity and temperature.
    mass, logg, feh : tuple of float, or None
        Dynamical mass (solar), log10 of gravity (cm s-2), [Fe/H].
    """

    light: Light | None = None
    mass: tuple[float, float] | None = None
    logg: tuple[float, float] | None = None
    feh: tuple[float, float] | None = None


@dataclass(frozen=True)
class Cells:
    """The cells, one per row.

    Attributes
    ----------
    coordinates : numpy.ndarray
        (n, 3): the middles in ln M, u and ln Z.
    size : numpy.ndarray
        (3,): the edges.
    models : MainSequence
        The models at the middles.
    log_prior : numpy.ndarray
        Logarithm of the prior density there, without that of Z.
    """

    coordinates: np.ndarray
    size: np.ndarray
    models: MainSequence
    log_prior: np.ndarray


@lru_cache(maxsize=1)
def cells() -> Cells:
    """Return the cells of the shipped grid."""
    grid = load_grid()
    bounds = np.array([grid.log_mass, (0.0, 1.0), grid.log_metals])
    size = (bounds[:, 1] - bounds[:, 0]) / np.array(_CELLS)
    axes = [
        low + (np.arange(count) + 0.5) * step
        for (low, _), count, step in zip(bounds, _CELLS, size, strict=True)
    ]
    middles = np.stack([a.ravel() for a in np.meshgrid(*axes, indexing="ij")], axis=-1)
    models = grid.at(*middles.T)
    prior = log_prior(middles, models)
    kept = np.isfinite(prior)
    return Cells(middles[kept], size, take(models, kept), prior[kept])


def take(models: MainSequence, rows: np.ndarray) -> MainSequence:
    """Return some of the models."""
    return MainSequence(*(getattr(models, item.name)[rows] for item in fields(models)))


def log_prior(point: np.ndarray, models: MainSequence) -> np.ndarray:
    """Return the log density in (ln M, u) of the mass function and of even star formation.

    Stars born evenly in time are found alive in proportion to M^slope dM dt, so that
    short-lived masses are rarer by their lifetime. Models whose envelopes swell at the limit
    of light, cooler than 1e4 K above 30 solar masses, have no meaning and no weight.
    """
    ageing = load_grid().ageing(*point.T)
    with np.errstate(divide="ignore"):
        log_time = np.log(models.lifetime_myr * ageing)
    swollen = (models.log_temperature < 4.0) & (point[:, 0] > np.log(30.0))
    return np.where(swollen, -np.inf, (IMF_SLOPE + 1.0) * point[:, 0] + log_time)


def log_likelihood(
    evidence: Evidence, point: np.ndarray, models: MainSequence, *, wide: bool
) -> np.ndarray:
    """Return the log likelihood of models, with the prior of Z.

    Parameters
    ----------
    evidence : Evidence
    point : numpy.ndarray
        (n, 3): ln M, u, ln Z.
    models : MainSequence
        The models there.
    wide : bool
        Add variances that make up for the size of a cell.
    """
    extra = _CELL_VARIANCE if wide else np.zeros(5)
    mass = np.exp(point[:, 0])
    total = np.zeros(mass.size)
    if evidence.light is not None:
        total += _light(evidence.light, mass, models, extra[:2])
    for distance, variance in _others(evidence, point, models, extra):
        total += _normal(distance, variance)
    return total


def conflict(
    evidence: Evidence, point: np.ndarray, models: MainSequence, log_total: np.ndarray
) -> str:
    """Return a reason if nothing agrees with all that is given, or an empty text.

    `log_total` is the wide log likelihood of all evidence. The best model may fall short
    of a perfect one for mass, gravity and metallicity by four sigma.
    """
    perfect = 0.0
    if evidence.light is not None:
        mass = np.exp(point[:, 0])
        perfect = float(_light(evidence.light, mass, models, _CELL_VARIANCE[:2]).max())
    for _, variance in _others(evidence, point, models, _CELL_VARIANCE):
        perfect -= 0.5 * np.log(variance)
    if perfect - log_total.max() < 8.0:
        return ""
    if evidence.light is None:
        return "the mass lies outside the models, 1.6 to 120 solMass"
    return "mass, gravity, metallicity, luminosity and temperature contradict one another"


def _others(
    evidence: Evidence, point: np.ndarray, models: MainSequence, extra: np.ndarray
) -> list[tuple[np.ndarray, float]]:
    """Return distance and variance of gravity, mass and metallicity, as far as given."""
    mass = np.exp(point[:, 0])
    value, error = evidence.feh or USUAL_FEH
    metallicity = point[:, 2] / np.log(10.0) - np.log10(SOLAR_METALS)
    pairs = [(metallicity - value, error**2 + SCATTER_METALLICITY**2 + extra[4])]
    if evidence.logg is not None:
        value, error = evidence.logg
        distance = log_gravity(mass, models.log_radius) - value
        pairs.append((distance, error**2 + SCATTER_GRAVITY**2 + extra[2]))
    if evidence.mass is not None:
        value, error = evidence.mass
        pairs.append((mass - value, error**2 + extra[3] * value**2))
    return pairs


def log_gravity(mass: np.ndarray, log_radius: np.ndarray) -> np.ndarray:
    """Return log10 of G M/R^2 in cm s-2 from solar units."""
    return np.log10(mass * GM_SUN.value / R_SUN.value**2 * 100.0) - 2.0 * log_radius


def scatter(mass: np.ndarray) -> np.ndarray:
    """Return the variances (n, 2) of log L and log T about the models."""
    rise = np.clip((mass - 40.0) / 20.0, 0.0, 1.0)
    warm = SCATTER_TEMPERATURE + rise * (SCATTER_TEMPERATURE_MASSIVE - SCATTER_TEMPERATURE)
    return np.stack([np.full(mass.shape, SCATTER_LUMINOSITY**2), warm**2], axis=-1)


def distance_squared(light: Light, which: Cells, covariance: np.ndarray) -> np.ndarray:
    """Return the Mahalanobis distance squared of every cell from the mean of the light."""
    d_l = which.models.log_luminosity - light.mean[0]
    d_t = which.models.log_temperature - light.mean[1]
    return _quadratic(d_l, d_t, covariance[..., 0, 0], covariance[..., 0, 1], covariance[..., 1, 1])


def near(evidence: Evidence, which: Cells) -> np.ndarray:
    """Return the numbers of the cells that are worth weighing."""
    if evidence.light is None:
        return np.arange(which.log_prior.size)
    own = np.array([SCATTER_LUMINOSITY, SCATTER_TEMPERATURE_MASSIVE]) ** 2 + _CELL_VARIANCE[:2]
    covariance = evidence.light.total_covariance + np.diag(own)
    return np.flatnonzero(distance_squared(evidence.light, which, covariance) < _KEEP)


def off_grid(evidence: Evidence, which: Cells) -> str:
    """Return why no model agrees with luminosity and temperature, or an empty text."""
    if evidence.light is None:
        return ""
    own = scatter(np.exp(which.coordinates[:, 0]))
    covariance = evidence.light.total_covariance + own[:, :, None] * np.eye(2)
    distance = distance_squared(evidence.light, which, covariance)
    if distance.min() < _FAR:
        return ""
    log_l, log_t = evidence.light.mean
    same = np.abs(which.models.log_luminosity - log_l) < 0.05
    if not np.any(same):
        return (
            "brighter than the main sequence at 120 solMass"
            if log_l > 3.0
            else "fainter than the main sequence at 1.6 solMass"
        )
    if log_t > which.models.log_temperature[same].max():
        return "hotter than the main sequence at its luminosity (a white dwarf or stripped star?)"
    return "cooler than the end of the main sequence at its luminosity (a giant or supergiant?)"


def _light(light: Light, mass: np.ndarray, models: MainSequence, extra: np.ndarray) -> np.ndarray:
    own = scatter(mass) + extra
    a = light.covariance[0, 0] + own[:, :1]
    b = light.covariance[0, 1]
    c = light.covariance[1, 1] + own[:, 1:]
    d_l = models.log_luminosity[:, None] - light.centres[:, 0]
    d_t = models.log_temperature[:, None] - light.centres[:, 1]
    each = -0.5 * _quadratic(d_l, d_t, a, b, c)
    top = each.max(axis=1)
    mean = np.log(np.mean(np.exp(each - top[:, None]), axis=1))
    return np.asarray(top + mean - 0.5 * np.log(a * c - b**2)[:, 0])


def _quadratic(
    d_l: np.ndarray, d_t: np.ndarray, a: np.ndarray, b: np.ndarray, c: np.ndarray
) -> np.ndarray:
    return np.asarray((c * d_l**2 - 2.0 * b * d_l * d_t + a * d_t**2) / (a * c - b**2))


def _normal(distance: np.ndarray, variance: float) -> np.ndarray:
    return np.asarray(-0.5 * (distance**2 / variance + np.log(variance)))
