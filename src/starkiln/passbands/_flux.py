"""Magnitudes and flux densities of any unit to the one flux of the inside: W m-3."""

from __future__ import annotations

import math
import re
import warnings
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.constants import C
from starkiln.errors import InputError
from starkiln.passbands._band import Band
from starkiln.passbands._library import load_band

__all__ = ["flux_from", "flux_unit_kind"]

_EXAMPLES = "mag, mag(AB), Jy, mJy, W m-2 um-1, erg s-1 cm-2 Angstrom-1 or erg s-1 cm-2 Hz-1"
_MAG_TO_LN = 0.4 * math.log(10.0)
#: Unit strings of magnitudes and the system that each states, None being the band's own.
_MAGNITUDES = {
    "mag": None,
    "magnitude": None,
    "mag(ab)": "AB",
    "abmag": "AB",
    "mag(st)": "ST",
    "stmag": "ST",
    "mag(vega)": "Vega",
    "vegamag": "Vega",
}


def flux_unit_kind(unit: Any) -> str:
    """Return what kind of photometry a unit is of.

    Parameters
    ----------
    unit : str or astropy.units.Unit
        `mag`, `mag(AB)`, `mag(ST)`, `mag(Vega)`, or a flux density of any unit
        that astropy understands (`mJy`, `erg / (s cm2 Angstrom)`).

    Returns
    -------
    {"magnitude", "per wavelength", "per frequency"}

    Raises
    ------
    InputError
        Neither a magnitude nor a flux density.
    """
    return _unit(str(unit))[0]


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
        wavelength, exactly; the error of a magnitude is 0.4 ln(10) F e.

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
    kind, factor, stated = _unit(str(unit))
    if kind == "magnitude":
        zero = passband.zero_flux_w_m3(stated or magnitude_system)
        flux = zero * np.exp(-_MAG_TO_LN * value)
        return flux, _MAG_TO_LN * flux * error
    if kind == "per frequency":
        factor *= C.value / passband.pivot_m**2
    return value * factor, error * factor


@lru_cache(maxsize=64)
def _unit(text: str) -> tuple[str, float, str | None]:
    """Kind of a unit, its factor to SI, and the magnitude system that it states."""
    plain = text.replace(" ", "").lower()
    if plain in _MAGNITUDES:
        return "magnitude", 1.0, _MAGNITUDES[plain]
    from astropy import units as u

    # In a flux density A is the Angstrom of many tables, never the ampere.
    spelt = re.sub(r"(?<![A-Za-z])A(?![A-Za-z])", "Angstrom", text)
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", u.UnitsWarning)
            unit = u.Unit(spelt)
    except ValueError as error:
        raise InputError(f"unknown unit '{text}': use {_EXAMPLES}") from error
    for kind, base in (("per wavelength", u.W / u.m**3), ("per frequency", u.W / u.m**2 / u.Hz)):
        if unit.is_equivalent(base):
            return kind, float(unit.to(base)), None
    raise InputError(f"the unit '{text}' is no flux density: use {_EXAMPLES}")
