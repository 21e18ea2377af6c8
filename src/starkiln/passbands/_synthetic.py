"""Synthetic photometry: any tabulated spectrum through a band."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C
from starkiln.errors import BandError, InputError
from starkiln.passbands._band import Band
from starkiln.passbands._kernels import spectrum_mean
from starkiln.passbands._library import load_band

__all__ = ["synthetic_flux", "synthetic_magnitude"]

#: Share of a band's response that a spectrum may leave uncovered.
_MAX_MISSING = 1e-4


def synthetic_flux(
    wavelength: Any, flux: Any, band: Band | str, *, max_missing: float = _MAX_MISSING
) -> Any:
    """Return the band mean of a tabulated spectrum.

    Parameters
    ----------
    wavelength : astropy.units.Quantity or array_like, shape (n,)
        Wavelengths, strictly monotonic; bare numbers are um.
    flux : astropy.units.Quantity or array_like, shape (n,)
        Flux densities per wavelength or frequency; bare numbers are W m-2 um-1.
        The spectrum is taken to be linear between its samples.
    band : Band or str
        The passband.
    max_missing : float
        Share of the band's response that may lie outside the spectrum, which is
        zero there.

    Returns
    -------
    astropy.units.Quantity
        Band mean of F_lambda, W m-2 um-1.

    Raises
    ------
    BandError
        The spectrum covers too little of the band; the message says how much.
    InputError
        The spectrum is not a spectrum.
    """
    from astropy import units as u

    passband = load_band(band) if isinstance(band, str) else band
    mean = _mean_w_m3(wavelength, flux, passband, max_missing)
    return u.Quantity(mean * 1e-6, "W / (m2 um)")


def synthetic_magnitude(
    wavelength: Any,
    flux: Any,
    band: Band | str,
    *,
    system: str | None = None,
    max_missing: float = _MAX_MISSING,
) -> float:
    """Return the magnitude of a tabulated spectrum in a band.

    Parameters
    ----------
    wavelength, flux, band, max_missing
        See `synthetic_flux`.
    system : {"Vega", "AB", "ST"}, optional
        Magnitude system; default: the catalogue's own.

    Returns
    -------
    float
        NaN where the band mean is not positive.
    """
    passband = load_band(band) if isinstance(band, str) else band
    mean = _mean_w_m3(wavelength, flux, passband, max_missing)
    zero = passband.zero_flux_w_m3(system)
    return -2.5 * math.log10(mean / zero) if mean > 0.0 else math.nan


def _mean_w_m3(wavelength: Any, flux: Any, band: Band, max_missing: float) -> float:
    wavelength_m, flux_w_m3 = _spectrum(wavelength, flux)
    inside = (band.wavelength_m >= wavelength_m[0]) & (band.wavelength_m <= wavelength_m[-1])
    missing = float(band.weight[~inside].sum())
    if missing > max_missing:
        raise BandError(
            f"the spectrum covers {wavelength_m[0] * 1e6:.5g} to {wavelength_m[-1] * 1e6:.5g} um "
            f"and misses {missing:.2%} of {band.name} ({band.range_m[0] * 1e6:.5g} to "
            f"{band.range_m[1] * 1e6:.5g} um): extend it, or accept that with max_missing"
        )
    curve = (band.wavelength_m, band.response)
    photon = band.response_kind == "photon"
    return spectrum_mean(curve, (wavelength_m, flux_w_m3), photon=photon)


def _spectrum(wavelength: Any, flux: Any) -> tuple[np.ndarray, np.ndarray]:
    from astropy import units as u

    wavelength_m = 1e-6 * as_array(wavelength, "um", "wavelength", lower=0.0, exclusive=True)
    if getattr(flux, "unit", None) is not None and flux.unit.is_equivalent(u.Jy):
        per_frequency = as_array(flux, "W / (m2 Hz)", "flux")
        flux_w_m3 = per_frequency * C.value / np.square(wavelength_m)
    else:
        flux_w_m3 = 1e6 * as_array(flux, "W / (m2 um)", "flux")
    if wavelength_m.ndim != 1 or wavelength_m.shape != flux_w_m3.shape or wavelength_m.size < 2:
        raise InputError(
            f"a spectrum is two columns of one length, not {wavelength_m.shape} wavelengths "
            f"and {flux_w_m3.shape} fluxes"
        )
    if wavelength_m[0] > wavelength_m[-1]:
        wavelength_m, flux_w_m3 = wavelength_m[::-1], flux_w_m3[::-1]
    if np.any(np.diff(wavelength_m) <= 0.0):
        row = int(np.flatnonzero(np.diff(wavelength_m) <= 0.0)[0])
        raise InputError(
            f"the wavelengths of the spectrum are not monotonic near {wavelength_m[row] * 1e6:g} um"
        )
    return wavelength_m, flux_w_m3
