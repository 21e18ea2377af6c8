"""Parts of blackbody emission: between two wavelengths, in energy and in photons."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C2, SIGMA_SB, C
from starkiln.errors import InputError
from starkiln.photons._forms import coordinate, give, kelvin
from starkiln.photons._integrals import TOTAL, ZETA_3, band_integral

#: Photons emitted per area and time over T^3: 4 pi c zeta(3) (k / h c)^3, in m-2 s-1 K-3.
PHOTON_SIGMA = 4.0 * np.pi * C.value * ZETA_3 / C2.value**3


def fraction(lower: Any, upper: Any, temperature: Any, *, photons: bool = False) -> np.ndarray:
    """Return the fraction of blackbody emission between two wavelengths.

    Parameters
    ----------
    lower, upper : Quantity or array_like
        Bounds in any spectral unit, m when bare, `lower` below `upper` in the unit
        given. 0 and infinity are allowed as outer bounds.
    temperature : Quantity or array_like
        K, at least 0; all three broadcast.
    photons : bool
        Count photons rather than energy.

    Returns
    -------
    numpy.ndarray
        15 / pi^4 times the integral of x^3 / (exp(x) - 1), or 1 / (2 zeta(3)) times
        that of x^2 / (exp(x) - 1), x = h c / lambda k T; relative accuracy about
        1e-14, of small fractions too. At T = 0 the limit: 1 if `upper` is infinite,
        else 0.

    Raises
    ------
    InputError
        Bounds inverted or equal, negative or of another kind.
    """
    short, long = _bounds(lower, upper)
    temperature_k = kelvin(temperature)
    power = 2 if photons else 3
    with np.errstate(all="ignore"):
        x_low = np.where(np.isinf(long), 0.0, C2.value / (long * temperature_k))
        # From the difference of wavelengths, which subtract exactly, not of exponents.
        relative = np.where(np.isinf(long), 1.0, (long - short) / long)
        width = C2.value * relative / (short * temperature_k)
    x_low, width = np.broadcast_arrays(x_low, width)
    return (
        band_integral(np.atleast_1d(x_low), np.atleast_1d(width), power) / TOTAL[power]
    ).reshape(x_low.shape)[()]


def band_exitance(
    lower: Any,
    upper: Any,
    temperature: Any,
    *,
    photons: bool = False,
    dilution: Any = 1.0,
    unit: Any = None,
) -> Any:
    """Return what a blackbody surface emits between two wavelengths.

    Arguments as for `fraction`; `dilution` is a factor on the emission (a grey
    emissivity). In W m-2, or photons s-1 m-2.
    """
    part = fraction(lower, upper, temperature, photons=photons)
    whole = exitance(temperature, photons=photons, dilution=dilution)
    return give(part * whole.value, str(whole.unit), unit)


def exitance(
    temperature: Any, *, photons: bool = False, dilution: Any = 1.0, unit: Any = None
) -> Any:
    """Return the emission of a blackbody surface over the whole spectrum.

    sigma T^4 in W m-2 (Stefan 1879, Boltzmann 1884), or 1.5205e15 T^3 photons s-1 m-2;
    `dilution` is a factor on it (a grey emissivity).
    """
    temperature_k = kelvin(temperature)
    weight = as_array(dilution, "", "dilution", lower=0.0)
    if photons:
        return give(weight * PHOTON_SIGMA * temperature_k**3, "photon / (s m2)", unit)
    return give(weight * SIGMA_SB.value * temperature_k**4, "W / m2", unit)


def effective_temperature(emitted: Any, *, dilution: Any = 1.0) -> Any:
    """Return the temperature at which a surface emits `emitted` (W m-2); inverse of `exitance`."""
    flux = as_array(emitted, "W / m2", "exitance", lower=0.0)
    weight = as_array(dilution, "", "dilution", lower=0.0, exclusive=True)
    return give((flux / (weight * SIGMA_SB.value)) ** 0.25, "K")


def _bounds(lower: Any, upper: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return both bounds as wavelengths in metres, the shorter first."""
    is_wavelength = [not hasattr(x, "unit") or x.unit.is_equivalent("m") for x in (lower, upper)]
    if is_wavelength[0] != is_wavelength[1]:
        raise InputError("the limits of the band are of two kinds: give both in one unit")
    first, second = _wavelength(lower, "lower limit"), _wavelength(upper, "upper limit")
    short, long = (first, second) if is_wavelength[0] else (second, first)
    if np.any(short >= long):
        raise InputError(
            f"lower limit = {_text(lower)} is not below upper limit = {_text(upper)}: "
            "exchange the two limits of the band"
        )
    return short, long


def _text(bound: Any) -> str:
    return str(bound) if hasattr(bound, "unit") else f"{bound} m"


def _wavelength(value: Any, name: str) -> np.ndarray:
    """Return a bound as a wavelength; here, and only here, 0 is a limit that makes sense."""
    if hasattr(value, "unit") and not value.unit.is_equivalent("m"):
        return coordinate(value, "wavelength", name)
    return as_array(value, "m", name, lower=0.0)
