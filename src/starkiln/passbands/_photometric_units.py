"""What a unit of photometry is: its kind, its scale, and how it is written."""

from __future__ import annotations

import re
import warnings
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from starkiln.constants import C, H
from starkiln.errors import BandError, InputError
from starkiln.passbands._band import Band

__all__ = ["EXAMPLES", "PhotometricUnit", "flux_unit_kind", "parse_unit"]

EXAMPLES = "mag, mag(AB), Jy, mJy, W m-2 um-1, erg s-1 cm-2 Angstrom-1 or erg s-1 cm-2 Hz-1"

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
_ASINH = ("mag(asinh)", "asinhmag", "luptitude")


@dataclass(frozen=True)
class PhotometricUnit:
    """One unit.

    Attributes
    ----------
    text : str
        As written.
    kind : str
        See `flux_unit_kind`.
    si : float
        Factor to the SI unit of its kind; 1 for magnitudes.
    system : str or None
        Magnitude system that the unit states.
    """

    text: str
    kind: str
    si: float = 1.0
    system: str | None = None

    def flux_factor(self, band: Band) -> float:
        """Return what a value is multiplied by to give the band mean of F_lambda, W m-3."""
        if self.kind == "per wavelength":
            return self.si
        if self.kind == "per frequency":
            return self.si * C.value / band.pivot_m**2
        per_photon = self.si * H.value * C.value / band.photon_mean_m
        return (
            per_photon if self.kind == "photons per wavelength" else per_photon / band.rate_width_m
        )

    def asinh_softening(self, band: Band) -> float:
        """Return the softening of the band's asinh magnitudes.

        Raises
        ------
        BandError
            The survey has none.
        """
        if band.asinh_softening is None:
            raise BandError(f"{band.name} has no asinh magnitudes: only the SDSS bands have")
        return band.asinh_softening


def flux_unit_kind(unit: Any) -> str:
    """Return what kind of photometry a unit is of.

    Parameters
    ----------
    unit : str or astropy.units.Unit
        `mag`, `mag(AB)`, `mag(ST)`, `mag(Vega)`; `mag(asinh)` or `luptitude`; a flux
        density of any unit that astropy understands (`mJy`,
        `erg / (s cm2 Angstrom)`); a flux of photons (`photon / (s cm2 Angstrom)`,
        `photon / (s cm2)`).

    Returns
    -------
    {"magnitude", "asinh magnitude", "per wavelength", "per frequency",
    "photons per wavelength", "photons"}

    Raises
    ------
    InputError
        None of these.
    """
    return parse_unit(str(unit)).kind


@lru_cache(maxsize=64)
def parse_unit(text: str) -> PhotometricUnit:
    """Return what `text` means; see `flux_unit_kind`."""
    plain = text.replace(" ", "").lower()
    if plain in _MAGNITUDES:
        return PhotometricUnit(text, "magnitude", system=_MAGNITUDES[plain])
    if plain in _ASINH:
        return PhotometricUnit(text, "asinh magnitude")
    from astropy import units as u

    # In a flux density A is the Angstrom of many tables, never the ampere.
    spelt = re.sub(r"(?<![A-Za-z])A(?![A-Za-z])", "Angstrom", text)
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", u.UnitsWarning)
            unit = u.Unit(spelt)
    except ValueError as error:
        raise InputError(f"unknown unit '{text}': use {EXAMPLES}") from error
    area_time = u.m**2 * u.s
    for kind, base in (
        ("per wavelength", u.W / u.m**3),
        ("per frequency", u.W / u.m**2 / u.Hz),
        ("photons per wavelength", u.photon / area_time / u.m),
        ("photons", u.photon / area_time),
    ):
        if unit.is_equivalent(base):
            return PhotometricUnit(text, kind, float(unit.to(base)))
    raise InputError(f"the unit '{text}' is no flux density: use {EXAMPLES}")
