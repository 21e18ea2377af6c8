"""Coefficients of one band's tabulated flux, from memory, disk or integration."""

from __future__ import annotations

import hashlib
import math
from dataclasses import replace
from functools import lru_cache

import numpy as np

from starkiln._version import __version__
from starkiln.dust import DEFAULT_RV, Dust
from starkiln.emitters import AtmosphereEmitter, BlackbodyEmitter, Emitter
from starkiln.errors import DustError
from starkiln.forward._cache import cached_array
from starkiln.forward._direct import extinguished_mean
from starkiln.forward._kernels import at_point, chebyshev_fit, chebyshev_nodes, trimmed
from starkiln.passbands import Band

__all__ = ["AV_RANGE", "band_coefficients", "ln_temperature_range", "nodes_within", "rv_range"]

#: Extinction that the tables cover, mag at 0.55 um.
AV_RANGE = (0.0, 10.0)

#: Terms in ln T, in extinction and in R_V that every band is fitted with. Most need half
#: of them; SDSS u needs nearly all, for at high extinction its red leak takes over.
_TERMS = (32, 24, 16)

#: Trailing terms that add up to less than this in ln flux are dropped, band by band.
_DROPPED = 1e-7

#: To be raised whenever the numbers of a table change.
_FORMAT = 1

#: The same for the model atmospheres, in the mean over the nodes: far below the error of
#: interpolating between models.
_DROPPED_ATMOSPHERE = 1e-5


def band_coefficients(emitter: Emitter, band: Band, dust: Dust, *, free_rv: bool) -> np.ndarray:
    """Return the Chebyshev coefficients of ln band flux.

    Parameters
    ----------
    emitter : Emitter
        A blackbody, or the model atmospheres with all their parameters free.
    band : Band
        The passband.
    dust : Dust
        Law and R_V; its prior does not matter.
    free_rv : bool
        Whether R_V is a third axis.

    Returns
    -------
    numpy.ndarray, shape (n_t, n_a) or (n_t, n_a, n_r)
        In ln T over the emitter's range, av over `AV_RANGE` and R_V over the law's
        range, each scaled to [-1, 1]. Of the model atmospheres the first axis is that
        of the spline coefficients on their nodes, and the series that of ln of the
        ratio to a blackbody of the same temperature behind the same dust.
    """
    usual = Dust(law=dust.law, f_a=dust.f_a)
    if not free_rv and (dust.rv == DEFAULT_RV or dust.rv_range is None):
        return _kept(emitter, band, usual, False)
    whole = _kept(emitter, band, usual, True)
    if free_rv:
        return whole
    # Any other R_V is a cut through the table of all: stars with R_V of their own would
    # otherwise each make one.
    low, high = rv_range(dust)
    return at_point(whole, (dust.rv - low) * (2.0 / (high - low)) - 1.0)


def ln_temperature_range(emitter: Emitter) -> tuple[float, float]:
    """Return the range of ln T that the table of an emitter covers."""
    low, high = emitter.bounds["temperature"]
    return math.log(low), math.log(high)


def rv_range(dust: Dust) -> tuple[float, float]:
    """Return the range of R_V of the dust's law.

    Raises
    ------
    DustError
        The law is a single average.
    """
    if dust.rv_range is None:
        raise DustError(f"the law {dust.law} is a single average: its R_V cannot be free")
    return dust.rv_range


@lru_cache(maxsize=1024)
def _kept(emitter: Emitter, band: Band, dust: Dust, free_rv: bool) -> np.ndarray:
    key = _key(emitter, band, dust, free_rv)
    coefficients = cached_array(key, lambda: _integrated(emitter, band, dust, free_rv))
    coefficients.flags.writeable = False
    return coefficients


def _integrated(emitter: Emitter, band: Band, dust: Dust, free_rv: bool) -> np.ndarray:
    if isinstance(emitter, AtmosphereEmitter):
        return _on_nodes(emitter, band, dust, free_rv)
    temperature_k = np.exp(nodes_within(ln_temperature_range(emitter), _TERMS[0]))
    radiance = emitter.radiance(band.wavelength_m, temperature_k)
    return trimmed(chebyshev_fit(_behind_dust(radiance, band, dust, free_rv)), _DROPPED)


def _on_nodes(emitter: AtmosphereEmitter, band: Band, dust: Dust, free_rv: bool) -> np.ndarray:
    nodes = emitter.grid.nodes
    radiance = emitter.radiance(band.wavelength_m, *nodes.T)
    blackbody = BlackbodyEmitter().radiance(band.wavelength_m, nodes[:, 0])
    ln_ratio = _behind_dust(radiance, band, dust, free_rv)
    ln_ratio -= _behind_dust(blackbody, band, dust, free_rv)
    series = chebyshev_fit(ln_ratio, range(1, ln_ratio.ndim))
    kept = trimmed(np.abs(series).mean(axis=0), _DROPPED_ATMOSPHERE).shape
    series = series[(slice(None), *(slice(n) for n in kept))]
    return np.ascontiguousarray(emitter.grid.prefilter(series))


def _behind_dust(radiance: np.ndarray, band: Band, dust: Dust, free_rv: bool) -> np.ndarray:
    """Return ln of the band means at the Chebyshev points of av, and of R_V where free."""
    av = nodes_within(AV_RANGE, _TERMS[1])

    def ln_flux(law: Dust) -> np.ndarray:
        return extinguished_mean(radiance, law.curve(band.wavelength_m), band.weight, av)

    if not free_rv:
        return ln_flux(dust)
    laws = [replace(dust, rv=float(rv)) for rv in nodes_within(rv_range(dust), _TERMS[2])]
    return np.stack([ln_flux(law) for law in laws], axis=-1)


def nodes_within(bounds: tuple[float, float], n: int) -> np.ndarray:
    """Return the n Chebyshev points of the first kind between two bounds."""
    low, high = bounds
    return low + 0.5 * (high - low) * (chebyshev_nodes(n) + 1.0)


def _key(emitter: Emitter, band: Band, dust: Dust, free_rv: bool) -> str:
    """Digest of all that the coefficients follow from."""
    from importlib.metadata import version

    law = (dust.law, free_rv, dust.f_a, version("dust_extinction"))
    settings = (_FORMAT, __version__, _TERMS, _DROPPED, AV_RANGE, repr(emitter), law)
    digest = hashlib.sha256(repr(settings).encode())
    if isinstance(emitter, AtmosphereEmitter):
        digest.update(repr((_DROPPED_ATMOSPHERE, emitter.table_digest)).encode())
    for array in (band.wavelength_m, band.weight):
        digest.update(np.ascontiguousarray(array).tobytes())
    return digest.hexdigest()
