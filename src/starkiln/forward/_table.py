"""Band fluxes of an emitter behind dust, tabulated as Chebyshev series."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from starkiln.dust import Dust
from starkiln.emitters import Emitter
from starkiln.errors import InputError
from starkiln.forward._direct import extinguished_mean
from starkiln.forward._kernels import chebyshev_fit, chebyshev_nodes, evaluate, evaluate_slope
from starkiln.passbands import load_band

__all__ = ["AV_RANGE", "BandFluxTable", "band_fluxes", "extrapolated_bands"]

#: Extinction that the tables cover, mag at 0.55 um.
AV_RANGE = (0.0, 10.0)

#: Terms in ln T and in extinction that every band is fitted with. Most need half of
#: them; SDSS u needs nearly all, for at high extinction its red leak takes over.
_TERMS = (32, 24)

#: Trailing terms that add up to less than this in ln flux are dropped, band by band.
_DROPPED = 1e-7


@dataclass(frozen=True, eq=False)
class BandFluxTable:
    """Band fluxes of one emitter behind one dust law, as functions of x and av.

    Attributes
    ----------
    bands : tuple of str
        Names of the bands, the order of the columns.
    ln_temperature : tuple of float
        Lowest and highest ln of the temperature in K.
    coefficients : numpy.ndarray, shape (n_t, n_av, n_bands)
        Chebyshev coefficients in ln T and av.

    Notes
    -----
    A point's value does not depend on how many points are evaluated with it, nor
    on its place among them, for the same tuple of bands. Callers need do nothing
    for that; they should pass many points at once, for a call costs as much as
    64 points.
    """

    bands: tuple[str, ...]
    ln_temperature: tuple[float, float]
    coefficients: np.ndarray

    def ln_flux(self, x: np.ndarray, av: np.ndarray) -> np.ndarray:
        """Return the ln band means of B_lambda 10^(-0.4 av k(lambda)).

        Parameters
        ----------
        x : numpy.ndarray, shape (n, 1)
            ln of the temperature in K.
        av : numpy.ndarray, shape (n,)
            A(0.55 um), mag.

        Returns
        -------
        numpy.ndarray, shape (n, n_bands)
            In W m-3 sr-1.

        Raises
        ------
        InputError
            A point is outside the table or NaN: check the bounds first.
        """
        return evaluate(self.coefficients, *self._scaled(x, av))

    def ln_flux_and_slope(self, x: np.ndarray, av: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return `ln_flux` and its derivative with respect to av, per mag."""
        value, slope = evaluate_slope(self.coefficients, *self._scaled(x, av))
        return value, slope * (2.0 / (AV_RANGE[1] - AV_RANGE[0]))

    def _scaled(self, x: np.ndarray, av: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        x, av = np.asarray(x, dtype=float), np.asarray(av, dtype=float)
        if x.ndim != 2 or x.shape[1] != 1 or av.shape != x.shape[:1]:
            raise InputError(
                f"x must have shape (n, 1) and av shape (n,), not {x.shape} and {av.shape}"
            )
        t = _to_unit(x[:, 0], self.ln_temperature, "ln of the temperature in K")
        return t, _to_unit(av, AV_RANGE, "av in mag")


def band_fluxes(emitter: Emitter, bands: tuple[str, ...], dust: Dust) -> BandFluxTable:
    """Return the table of band fluxes, building what is not in memory yet.

    Parameters
    ----------
    emitter : Emitter
        The surface; one of one parameter.
    bands : tuple of str
        Names of bands.
    dust : Dust
        Law and R_V; its prior does not matter here.

    Returns
    -------
    BandFluxTable
        From direct integration by less than 1e-5 in ln flux, over the emitter's
        range of temperature and av of 0 to 10 mag.

    Raises
    ------
    BandError, DustError
        A band is unknown, or the law does not reach it.
    """
    names = tuple(load_band(band).name for band in bands)
    per_band = [_band_coefficients(emitter, name, dust.law, dust.rv) for name in names]
    shape = np.max([c.shape for c in per_band], axis=0) if per_band else np.ones(2, dtype=int)
    coefficients = np.zeros((*shape, len(names)))
    for k, own in enumerate(per_band):
        coefficients[: own.shape[0], : own.shape[1], k] = own
    return BandFluxTable(names, _ln_range(emitter), coefficients)


def extrapolated_bands(bands: tuple[str, ...], dust: Dust) -> tuple[str, ...]:
    """Return those of the bands that reach beyond the dust law's published range."""
    return tuple(b for b in bands if np.any(dust.extrapolated(load_band(b).wavelength_m)))


@lru_cache(maxsize=1024)
def _band_coefficients(emitter: Emitter, name: str, law: str, rv: float) -> np.ndarray:
    band = load_band(name)
    ratio = Dust(law=law, rv=rv).curve(band.wavelength_m)
    low, high = _ln_range(emitter)
    temperature_k = np.exp(low + 0.5 * (high - low) * (chebyshev_nodes(_TERMS[0]) + 1.0))
    av = AV_RANGE[0] + 0.5 * (AV_RANGE[1] - AV_RANGE[0]) * (chebyshev_nodes(_TERMS[1]) + 1.0)
    radiance = emitter.radiance(band.wavelength_m, temperature_k)
    coefficients = _trimmed(chebyshev_fit(extinguished_mean(radiance, ratio, band.weight, av)))
    coefficients.flags.writeable = False
    return coefficients


def _trimmed(coefficients: np.ndarray) -> np.ndarray:
    for axis in (0, 1):
        size = np.abs(coefficients).sum(axis=1 - axis)
        tail = np.cumsum(size[::-1])[::-1]
        # The recurrences start from two terms.
        keep = max(2, int(np.count_nonzero(tail > _DROPPED)))
        coefficients = coefficients[:keep] if axis == 0 else coefficients[:, :keep]
    return np.ascontiguousarray(coefficients)


def _ln_range(emitter: Emitter) -> tuple[float, float]:
    low, high = emitter.bounds["temperature"]
    return math.log(low), math.log(high)


def _to_unit(value: np.ndarray, bounds: tuple[float, float], what: str) -> np.ndarray:
    low, high = bounds
    if value.size and not (value.min() >= low and value.max() <= high):
        bad = value[~((value >= low) & (value <= high))][0]
        raise InputError(f"{what} = {bad:.6g} is outside the table: {low:.6g} to {high:.6g}")
    return (value - low) * (2.0 / (high - low)) - 1.0
