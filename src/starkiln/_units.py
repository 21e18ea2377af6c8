"""The door between quantities and floats.

Public functions take astropy quantities or bare numbers in the unit that their
docstring states; everything behind the door is a float or an array of floats in
one fixed unit. astropy is imported only when a quantity or a unit string is met.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln.errors import InputError

__all__ = ["as_array", "as_float"]


def as_array(
    value: Any,
    unit: str,
    name: str,
    *,
    lower: float = -math.inf,
    upper: float = math.inf,
    exclusive: bool = False,
    equivalencies: Any = (),
) -> np.ndarray:
    """Return `value` as an array of floats in `unit`, checked against bounds.

    Parameters
    ----------
    value : astropy.units.Quantity, float or array_like
        A bare number is taken to be in `unit`.
    unit : str
        Any unit string that astropy understands; `""` for a pure number.
    name : str
        What the value is, for the error message.
    lower, upper : float
        Bounds in `unit`; a value on a bound is accepted unless `exclusive`.
    exclusive : bool
        Refuse a value that equals a bound.
    equivalencies : list
        Passed to astropy's conversion, for example `astropy.units.spectral()`.

    Returns
    -------
    numpy.ndarray
        Shape of `value`, float64.

    Raises
    ------
    InputError
        Not a number, of an incompatible unit, or out of bounds.
    """
    plain = _strip_unit(value, unit, name, equivalencies)
    low_bad = plain <= lower if exclusive else plain < lower
    high_bad = plain >= upper if exclusive else plain > upper
    bad = np.isnan(plain) | low_bad | high_bad
    if np.any(bad):
        first = float(plain[bad].flat[0])
        label = f" {unit}" if unit else ""
        raise InputError(
            f"{name} = {first:.6g}{label} is out of bounds: give a number "
            f"{_bounds_text(lower, upper, exclusive)}{label}"
        )
    return plain


def as_float(value: Any, unit: str, name: str, **bounds: Any) -> float:
    """Return a scalar `value` as one float in `unit`; see `as_array`."""
    plain = as_array(value, unit, name, **bounds)
    if plain.shape != ():
        raise InputError(f"{name} must be one number, not an array of shape {plain.shape}")
    return float(plain)


def _strip_unit(value: Any, unit: str, name: str, equivalencies: Any) -> np.ndarray:
    if hasattr(value, "unit") and hasattr(value, "to_value"):
        from astropy import units as u

        try:
            return np.asarray(value.to_value(unit or u.one, equivalencies), dtype=float)
        except u.UnitConversionError as error:
            raise InputError(
                f"{name} is given in '{value.unit}', which cannot be converted to "
                f"'{unit or 'a pure number'}'"
            ) from error
    try:
        return np.asarray(value, dtype=float)
    except (TypeError, ValueError) as error:
        label = f" in {unit}" if unit else ""
        raise InputError(f"{name} = {value!r} is not a number{label}") from error


def _bounds_text(lower: float, upper: float, exclusive: bool) -> str:
    if lower == -math.inf and upper == math.inf:
        return "that is not NaN"
    if upper == math.inf:
        return f"{'above' if exclusive else 'of at least'} {lower:g}"
    if lower == -math.inf:
        return f"{'below' if exclusive else 'of at most'} {upper:g}"
    return f"{'strictly ' if exclusive else ''}between {lower:g} and {upper:g}"
