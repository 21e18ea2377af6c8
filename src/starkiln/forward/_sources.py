"""Stated source spectra: extinction ratios, and conversion from one band to another."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.dust import Dust
from starkiln.emitters import BlackbodyEmitter, Emitter
from starkiln.errors import InputError
from starkiln.forward._direct import band_flux_direct
from starkiln.passbands import (
    Band,
    Conversion,
    flux_from,
    flux_to,
    flux_unit_kind,
    load_band,
    synthetic_flux,
)

__all__ = ["Source", "convert_between", "extinction_ratio", "spectrum_source", "star_source"]

#: A source's band mean of F_lambda through any band, on a scale of its own.
Source = Callable[[Band], float]

_MAG_TO_LN = 0.4 * math.log(10.0)


def extinction_ratio(
    band: Band | str,
    temperature: Any,
    av: Any,
    *,
    dust: Dust | None = None,
    emitter: Emitter | None = None,
) -> np.ndarray:
    """Return A_band / A(0.55 um) of a star behind dust.

    Parameters
    ----------
    band : Band or str
        The passband.
    temperature : astropy.units.Quantity or array_like
        K.
    av : astropy.units.Quantity or array_like
        A(0.55 um), mag, at least 0; broadcast against `temperature`. At 0 the limit.
    dust : Dust, optional
        Law and R_V; default `Dust()`.
    emitter : Emitter, optional
        Of one parameter; default a blackbody.

    Returns
    -------
    numpy.ndarray
        -2.5 log10(<F 10^(-0.4 A)> / <F>) / av, the means through the band.

    Raises
    ------
    DustError
        The law does not reach the band.
    """
    passband = load_band(band) if isinstance(band, str) else band
    emitter, dust = emitter or BlackbodyEmitter(), dust or Dust()
    temperature_k, av_mag = np.broadcast_arrays(
        as_array(temperature, "K", "temperature", lower=0.0, exclusive=True),
        as_array(av, "mag", "av", lower=0.0),
    )
    flux = emitter.radiance(passband.wavelength_m, temperature_k.ravel()) * passband.weight
    share = flux / flux.sum(axis=1, keepdims=True)
    curve = dust.curve(passband.wavelength_m)
    amount = np.maximum(av_mag.ravel(), 1e-12)
    # expm1 and log1p keep the limit of little dust exact.
    lost = np.sum(share * np.expm1(-_MAG_TO_LN * amount[:, None] * curve), axis=1)
    return (-np.log1p(lost) / (_MAG_TO_LN * amount)).reshape(av_mag.shape)


def star_source(
    temperature: Any,
    *,
    av: Any = 0.0,
    dust: Dust | None = None,
    emitter: Emitter | None = None,
) -> Source:
    """Return a star of one temperature (K) behind dust (av in mag) as a source."""
    surface, law = emitter or BlackbodyEmitter(), dust or Dust()
    x = np.log([[as_float(temperature, "K", "temperature", lower=0.0, exclusive=True)]])
    amount = np.array([as_float(av, "mag", "av", lower=0.0)])
    return lambda band: float(np.exp(band_flux_direct(surface, band, law, x, amount)[0]))


def spectrum_source(wavelength: Any, flux: Any) -> Source:
    """Return a tabulated spectrum as a source; see `starkiln.passbands.synthetic_flux`."""
    return lambda band: float(synthetic_flux(wavelength, flux, band).value)


def convert_between(
    value: Any,
    from_band: Band | str,
    to_band: Band | str,
    source: Source,
    *,
    unit: Any,
    to: Any = None,
    error: Any = None,
) -> Conversion:
    """Convert photometry of one band to another band, for a stated source spectrum.

    Parameters
    ----------
    value, error : float or array_like
        Photometry in `unit`, see `starkiln.passbands.flux_from`.
    from_band, to_band : Band or str
        The passbands.
    source : Source
        `star_source(...)` or `spectrum_source(...)`.
    unit, to : str or astropy.units.Unit
        Unit of `value`, and the unit wanted (default the same).

    Returns
    -------
    Conversion
        The error is that of the value alone: the source is taken to be exact.

    Raises
    ------
    InputError
        The source has no flux in the first band.
    """
    first = load_band(from_band) if isinstance(from_band, str) else from_band
    second = load_band(to_band) if isinstance(to_band, str) else to_band
    wanted = unit if to is None else to
    flux_unit_kind(wanted)
    there, here = source(second), source(first)
    if not here > 0.0:
        raise InputError(f"the source has no flux in {first.name}: choose another source")
    flux, flux_error = flux_from(value, 0.0 if error is None else error, unit, first)
    new, new_error = flux_to(flux * there / here, flux_error * there / here, wanted, second)
    return Conversion(new, None if error is None else new_error, str(wanted))
