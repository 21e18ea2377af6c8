"""Units as observers and archives write them."""

from __future__ import annotations

import warnings
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from starkiln.errors import InputError

__all__ = ["ColumnUnit", "factor_to", "parse_unit"]

_MAGNITUDES = {
    "mag": "",
    "mags": "",
    "magnitude": "",
    "magnitudes": "",
    "abmag": "AB",
    "magab": "AB",
    "stmag": "ST",
    "magst": "ST",
    "vegamag": "Vega",
    "magvega": "Vega",
}
_SPELLINGS = {"jy": "Jy", "jansky": "Jy", "janskys": "Jy", "kelvin": "K", "degk": "K"}
#: How archives write the unit of log g and of [Fe/H].
_DEX = ("dex", "log", "[cm/s2]", "[-]", "[sun]")


@dataclass(frozen=True)
class ColumnUnit:
    """A unit as understood.

    Attributes
    ----------
    text : str
        Normal spelling, in which astropy reads it.
    kind : str
        `mag` (a magnitude), `per wavelength`, `per frequency` (flux densities),
        `dex` (decimal logarithm of a gravity in cgs or of a ratio), `logarithm` (of
        anything else) or `other`.
    factor : float
        One of it in mag, W m-3 or Jy, for the first three kinds; else 1.
    system : str
        `AB`, `ST` or `Vega` where the unit says so, else empty.
    """

    text: str
    kind: str
    factor: float = 1.0
    system: str = ""


@lru_cache(maxsize=256)
def parse_unit(text: str) -> ColumnUnit:
    """Understand the text of a unit.

    Parameters
    ----------
    text : str
        As in a file's header or a column sheet. `A` is read as Angstrom in a
        flux density: nobody measures starlight per ampere.

    Returns
    -------
    ColumnUnit

    Raises
    ------
    InputError
        No such unit.
    """
    words = text.strip().strip("'\"").strip()
    bare = words.casefold()
    for mark in " ()[]_-":
        bare = bare.replace(mark, "")
    if bare in _MAGNITUDES:
        return ColumnUnit("mag", "mag", system=_MAGNITUDES[bare])
    if words.casefold() == "dex" or words.casefold().startswith(_DEX[1:]):
        return ColumnUnit("dex", "dex")
    return _classify(_astropy_unit(_SPELLINGS.get(bare, words)), text)


def factor_to(unit: ColumnUnit, target: str) -> float:
    """Return how many `target` one `unit` is.

    Raises
    ------
    InputError
        The two are not of one kind.
    """
    from astropy import units as u

    if target == "dex":
        if unit.kind == "dex" or unit.text == "":
            return 1.0
    elif unit.kind not in ("dex", "logarithm"):
        try:
            return float(u.Unit(unit.text).to(u.Unit(target or "")))
        except (u.UnitConversionError, TypeError):
            pass
    wanted = target or "a pure number"
    raise InputError(f"unit '{unit.text or 'none'}' cannot be converted to {wanted}")


def _astropy_unit(text: str) -> Any:
    from astropy import units as u

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # astropy grumbles at slashes and old spellings
        for style in (None, "vounit", "cds", "fits"):
            try:
                unit = u.Unit(text, format=style)
            except (ValueError, TypeError):
                continue
            if isinstance(unit, u.UnrecognizedUnit):
                continue
            return unit
    raise InputError(
        f"unit '{text}' is not known; write for example mag, mag(AB), mJy, W m-2 um-1, "
        "erg s-1 cm-2 AA-1, mas, pc, K"
    )


def _classify(unit: Any, text: str) -> ColumnUnit:
    from astropy import units as u

    if isinstance(unit, u.MagUnit):
        raise InputError(f"unit '{text}' is a magnitude of a scale that is not Vega, AB or ST")
    if isinstance(unit, u.function.logarithmic.LogUnit):
        gravity_or_ratio = unit.physical_unit in (u.one, u.cm / u.s**2)
        return ColumnUnit(str(unit), "dex" if gravity_or_ratio else "logarithm")
    if unit.is_equivalent(u.mag):
        return ColumnUnit(str(unit), "mag", factor=float(unit.to(u.mag)))
    if u.A in getattr(unit, "bases", ()):
        power = unit.powers[unit.bases.index(u.A)]
        unit = unit * (u.AA / u.A) ** power
    if unit.is_equivalent(u.W / u.m**3):
        return ColumnUnit(str(unit), "per wavelength", factor=float(unit.to(u.W / u.m**3)))
    if unit.is_equivalent(u.Jy):
        return ColumnUnit(str(unit), "per frequency", factor=float(unit.to(u.Jy)))
    return ColumnUnit(str(unit), "other")
