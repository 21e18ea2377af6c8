"""Photometry of any unit to and from the one flux of the inside: band mean, W m-3."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln.passbands._band import Band
from starkiln.passbands._library import load_band
from starkiln.passbands._photometric_units import flux_unit_kind, parse_unit

__all__ = ["flux_from", "flux_to", "flux_unit_kind"]

_MAG_TO_LN = 0.4 * math.log(10.0)


def flux_from(
    value: Any,
    error: Any,
    unit: Any,
    band: Band | str,
    magnitude_system: str | None = None,
) -> tuple[np.ndarray, np.ndarray]:
    """Turn photometry of one band into band means of F_lambda with their errors.

    Parameters
    ----------
    value, error : float or array_like
        In `unit`; a magnitude's error in mag.
    unit : str or astropy.units.Unit
        See `flux_unit_kind`.
    band : Band or str
        The passband.
    magnitude_system : {"Vega", "AB", "ST"}, optional
        Of a magnitude whose unit states none; default: the catalogue's own
        (`Band.zero_flux_w_m3`).

    Returns
    -------
    flux, error : numpy.ndarray
        Shape of `value`, W m-3. F_nu turns into F_lambda at the band's pivot
        wavelength, photons at the mean wavelength of the band's photons, both
        exactly for any source. The error of a magnitude is 0.4 ln(10) F e, of an
        asinh magnitude that of its derivative (Lupton, Gunn & Szalay 1999,
        AJ 118, 1406, eq. 3: F = 2 b F0 sinh(-0.4 ln(10) m - ln b)).

    Raises
    ------
    InputError
        The unit is no flux density.
    BandError
        The magnitude system is unknown, or the band has no zero point in it.
    """
    passband = load_band(band) if isinstance(band, str) else band
    value = np.asarray(value, dtype=float)
    error = np.broadcast_to(np.asarray(error, dtype=float), value.shape)
    parsed = parse_unit(str(unit))
    if parsed.kind == "magnitude":
        zero = passband.zero_flux_w_m3(parsed.system or magnitude_system)
        flux = zero * np.exp(-_MAG_TO_LN * value)
        return flux, _MAG_TO_LN * flux * error
    if parsed.kind == "asinh magnitude":
        softening = parsed.asinh_softening(passband)
        scale = 2.0 * softening * passband.zero_flux_w_m3()
        argument = -_MAG_TO_LN * value - math.log(softening)
        return scale * np.sinh(argument), _MAG_TO_LN * scale * np.cosh(argument) * error
    factor = parsed.flux_factor(passband)
    return value * factor, error * factor


def flux_to(
    flux: Any,
    error: Any,
    unit: Any,
    band: Band | str,
    magnitude_system: str | None = None,
) -> tuple[np.ndarray, np.ndarray]:
    """Turn band means of F_lambda, W m-3, into photometry: the inverse of `flux_from`.

    Returns
    -------
    value, error : numpy.ndarray
        Shape of `flux`, in `unit`. NaN for the magnitude of a flux that is not
        positive; an asinh magnitude has none such.

    Raises
    ------
    InputError, BandError
        As `flux_from`.
    """
    passband = load_band(band) if isinstance(band, str) else band
    flux = np.asarray(flux, dtype=float)
    error = np.broadcast_to(np.asarray(error, dtype=float), flux.shape)
    parsed = parse_unit(str(unit))
    if parsed.kind == "magnitude":
        zero = passband.zero_flux_w_m3(parsed.system or magnitude_system)
        positive = np.where(flux > 0.0, flux, np.nan)
        return -np.log(positive / zero) / _MAG_TO_LN, error / (_MAG_TO_LN * positive)
    if parsed.kind == "asinh magnitude":
        softening = parsed.asinh_softening(passband)
        ratio = flux / (2.0 * softening * passband.zero_flux_w_m3())
        slope = _MAG_TO_LN * 2.0 * softening * passband.zero_flux_w_m3() * np.hypot(1.0, ratio)
        return -(np.arcsinh(ratio) + math.log(softening)) / _MAG_TO_LN, error / slope
    factor = parsed.flux_factor(passband)
    return flux / factor, error / factor
