"""The one door to tabulated band fluxes, whatever the emitter."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np

from starkiln.dust import Dust
from starkiln.emitters import AtmosphereEmitter, BlackbodyEmitter, Emitter
from starkiln.forward._build import band_coefficients, ln_temperature_range, rv_range
from starkiln.forward._node_table import NodeFluxTable
from starkiln.forward._table import BandFluxTable, stacked_coefficients
from starkiln.passbands import Band, load_band

__all__ = ["band_fluxes", "extrapolated_bands"]


def band_fluxes(
    emitter: Emitter, bands: Sequence[str | Band], dust: Dust, *, free_rv: bool = False
) -> BandFluxTable | NodeFluxTable:
    """Return the table of band fluxes, building what is not in memory or cache yet.

    Parameters
    ----------
    emitter : Emitter
        The surface.
    bands : sequence of str or Band
        Bands, or their names.
    dust : Dust
        Law and R_V; its prior does not matter here. An R_V other than 3.1 makes the
        table of all R_V once (some seconds, kept on disk), and every R_V then costs
        nothing.
    free_rv : bool
        Whether R_V is an argument of the table, over the law's whole range.

    Returns
    -------
    BandFluxTable or NodeFluxTable
        Both answer `ln_flux(x, av)`, the columns of x being ln of the temperature and
        the emitter's other parameters. From direct integration over the emitter's range
        and av of 0 to 10 mag a blackbody's differs by less than 1e-5 in ln flux, an
        atmosphere's by less than 1e-3, in GALEX NUV by 4e-3 and in GALEX FUV by 0.1. An
        atmosphere whose log g and [Fe/H] are given has a table of temperature alone.

    Raises
    ------
    BandError, DustError
        A band is unknown, the law does not reach it, or it has no free R_V.
    """
    loaded = tuple(load_band(band) if isinstance(band, str) else band for band in bands)
    if not isinstance(emitter, AtmosphereEmitter):
        return _chebyshev_table(emitter, loaded, dust, free_rv)
    if emitter.logg is not None and emitter.feh is not None:
        return _atmosphere_table(emitter, loaded, dust, free_rv).at(emitter.logg, emitter.feh)
    return _atmosphere_table(emitter, loaded, dust, free_rv)


def extrapolated_bands(bands: Sequence[str], dust: Dust) -> tuple[str, ...]:
    """Return those of the bands that reach beyond the dust law's published range."""
    return tuple(b for b in bands if np.any(dust.extrapolated(load_band(b).wavelength_m)))


def _chebyshev_table(
    emitter: Emitter, bands: tuple[Band, ...], dust: Dust, free_rv: bool
) -> BandFluxTable:
    stacked = _stacked(emitter, bands, dust, free_rv)
    return BandFluxTable(
        tuple(band.name for band in bands),
        ln_temperature_range(emitter),
        stacked,
        rv_range(dust) if free_rv else None,
    )


def _atmosphere_table(
    emitter: AtmosphereEmitter, bands: tuple[Band, ...], dust: Dust, free_rv: bool
) -> NodeFluxTable:
    # The prior has no part in a table.
    law = Dust(law=dust.law, rv=dust.rv, f_a=dust.f_a)
    blackbody = _chebyshev_table(BlackbodyEmitter(), bands, law, free_rv)
    return NodeFluxTable(emitter, blackbody, _ratios(bands, law, free_rv))


@lru_cache(maxsize=16)
def _ratios(bands: tuple[Band, ...], dust: Dust, free_rv: bool) -> np.ndarray:
    # Some megabytes, the same for every star with these bands.
    return _stacked(AtmosphereEmitter(), bands, dust, free_rv)


def _stacked(emitter: Emitter, bands: tuple[Band, ...], dust: Dust, free_rv: bool) -> np.ndarray:
    per_band = [band_coefficients(emitter, band, dust, free_rv=free_rv) for band in bands]
    stacked = stacked_coefficients(per_band)
    return stacked.reshape(*stacked.shape[:2], -1)
