"""Values that a Python user hands over, with or without units."""

from __future__ import annotations

import difflib
import math
from collections.abc import Mapping
from typing import Any

from starkiln._units import as_float
from starkiln.errors import BandError, InputError
from starkiln.observations._measure import SATURATED, Measurement, Reading, measure
from starkiln.observations._quantities import BY_NAME, Known
from starkiln.observations._units_of_columns import ColumnUnit, parse_unit
from starkiln.passbands import band_names, match_band

__all__ = ["check_value", "known_values", "nearest", "read_photometry"]

_MAG = ColumnUnit("mag", "mag")


def nearest(word: str, words: Any, count: int = 1) -> list[str]:
    """Return the `count` nearest of `words`, most similar first; may be empty."""
    folded = {str(known).casefold(): str(known) for known in words}
    close = difflib.get_close_matches(word.casefold(), list(folded), n=count, cutoff=0.5)
    return [folded[key] for key in close]


def read_photometry(
    photometry: Mapping[str, Any], label: str, *, limit_sigma: float, saturated: str
) -> tuple[list[Measurement], tuple[tuple[str, str], ...]]:
    """Return the measurements, and each band left out with the reason."""
    sigma = as_float(limit_sigma, "", "limit_sigma", lower=0.0, exclusive=True)
    if saturated not in SATURATED:
        raise InputError(f"saturated = {saturated!r} is none of {', '.join(SATURATED)}")
    found: dict[str, Measurement] = {}
    left_out = []
    for text, entry in photometry.items():
        band = match_band(text)
        if band is None:
            near = ", ".join(nearest(text, band_names(), 3)) or ", ".join(band_names())
            raise BandError(f"{label}: no band is called {text!r}; nearest: {near}")
        if band in found:
            raise InputError(f"{label}: {band} is given twice")
        try:
            outcome = _one_band(band, entry, sigma, saturated)
        except InputError as error:
            raise InputError(f"{label}, {band}: {error}") from error
        if isinstance(outcome, str):
            left_out.append((band, outcome))
        else:
            found[band] = outcome
    return list(found.values()), tuple(left_out)


def _one_band(band: str, entry: Any, sigma: float, saturated: str) -> Measurement | str:
    first, second = _pair(entry)
    if isinstance(first, str):
        if first not in ("<", ">"):
            raise InputError(f"{first!r} is no limit flag; write '<' or '>' before the number")
        number, unit = _split(second)
        reading = Reading(band, unit, limit_sigma=sigma, saturated=saturated)
        return measure(reading, number, None, first)
    if second is None:
        raise InputError("an error is needed: give (value, error)")
    number, unit = _split(first)
    error, error_unit = _split(second) if _has_unit(second) else (_float(second), None)
    reading = Reading(band, unit, _error_unit(unit, error_unit), "", sigma, 0.0, saturated)
    return measure(reading, number, error)


def _error_unit(unit: ColumnUnit, error_unit: ColumnUnit | None) -> ColumnUnit | None:
    if error_unit is not None and error_unit.kind != unit.kind:
        raise InputError(
            f"the error is in '{error_unit.text}' and the value in '{unit.text}'; "
            "give both in one kind of unit"
        )
    return error_unit


def known_values(known: Mapping[str, Any], label: str) -> dict[str, float]:
    """Return the attributes of a star for keywords such as `parallax=(2.3, 0.1)`."""
    values: dict[str, float] = {}
    for name, entry in known.items():
        if entry is None:
            continue
        if name not in BY_NAME:
            near = nearest(name, BY_NAME)
            hint = f"; did you mean {near[0]}?" if near else ""
            raise InputError(
                f"{label}: {name} is not known of a star{hint} (known: {', '.join(BY_NAME)})"
            )
        values |= _one_known(BY_NAME[name], entry, label)
    if "parallax_mas" in values and "distance_pc" in values:
        raise InputError(f"{label}: give a parallax or a distance, not both")
    return values


def _one_known(known: Known, entry: Any, label: str) -> dict[str, float]:
    first, second = _pair(entry)
    unit = "" if known.unit == "dex" and not _has_unit(first) else known.unit
    value = as_float(first, unit, f"{label}: {known.name}")
    error = None if second is None else as_float(second, unit, f"{label}: e_{known.name}")
    try:
        check_value(known, value)
        check_error_of(known, value, error)
    except InputError as problem:
        raise InputError(f"{label}: {problem}") from problem
    pair = {known.field: value}
    return pair if error is None else pair | {f"e_{known.field}": error}


def check_value(known: Known, value: float) -> None:
    """Refuse a value of a known quantity that is not finite or out of bounds."""
    low = value <= known.lower if known.strict else value < known.lower
    if not math.isfinite(value) or low or value > known.upper:
        bounds = f"{'above' if known.strict else 'at least'} {known.lower:g} and at most "
        raise InputError(
            f"{known.name} = {value:g} {known.unit}".rstrip()
            + f" is out of bounds ({bounds}{known.upper:g}); if it means missing, leave it "
            f"empty or say so in a column sheet: missing = [{value:g}]"
        )


def check_error_of(known: Known, value: float, error: float | None) -> None:
    """Refuse an error of a known quantity that cannot be, or its absence where it is needed."""
    if error is None:
        if known.error == "required":
            raise InputError(
                f"{known.name} = {value:g} {known.unit} has no error; give e_{known.name}"
            )
        return
    if known.error == "none":
        raise InputError(f"{known.name} takes no error")
    if not math.isfinite(error) or error < 0.0 or (error == 0.0 and known.error != "exact"):
        raise InputError(f"e_{known.name} = {error:g} {known.unit} is not above zero and finite")


def _pair(entry: Any) -> tuple[Any, Any]:
    if _has_unit(entry):
        return (entry[0], entry[1]) if getattr(entry, "shape", ()) == (2,) else (entry, None)
    if isinstance(entry, str) or not hasattr(entry, "__len__"):
        return entry, None
    if len(entry) != 2:
        raise InputError(f"give (value, error), not {len(entry)} numbers")
    return entry[0], entry[1]


def _has_unit(value: Any) -> bool:
    return hasattr(value, "unit") and hasattr(value, "to_value")


def _split(value: Any) -> tuple[float, ColumnUnit]:
    if not _has_unit(value):
        return _float(value), _MAG
    unit = parse_unit(str(value.unit))
    if unit.kind not in ("mag", "per wavelength", "per frequency"):
        raise InputError(f"'{value.unit}' is neither a magnitude nor a flux density")
    return float(value.value), unit


def _float(value: Any) -> float:
    return as_float(value, "", "value")
