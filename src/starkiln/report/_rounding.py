"""A value and its two errors, rounded by the usual rule."""

from __future__ import annotations

import math
from dataclasses import dataclass


@dataclass(frozen=True)
class Rounded:
    """Value, upper and lower error as texts with the same decimals; exponent in common."""

    value: str
    plus: str
    minus: str
    exponent: int = 0


def decimals_of_error(error: float) -> int:
    """Return the decimals to which an error is printed (negative: tens, hundreds).

    The rule of the Particle Data Group (Review of Particle Physics, Introduction,
    "Rounding"; from memory): three leading digits 100 to 354 keep two digits, 355
    to 949 one digit, 950 to 999 are rounded up to 1000 and keep two.
    """
    exponent = math.floor(math.log10(error))
    leading = round(error / 10.0 ** (exponent - 2))
    if leading >= 1000:
        exponent, leading = exponent + 1, 100
    if leading >= 950:
        return -exponent
    return 1 - exponent if leading <= 354 else -exponent


def round_asymmetric(value: float, low: float, high: float) -> Rounded | None:
    """Round a median and its 16th and 84th percentiles.

    Parameters
    ----------
    value, low, high : float
        Median and the ends of the interval, in one unit.

    Returns
    -------
    Rounded or None
        The smaller error sets the decimals of all three. Numbers of 1e5 and more,
        and below 1e-3, carry a common power of ten. None where a number is missing.
    """
    if not all(math.isfinite(number) for number in (value, low, high)):
        return None
    exponent = _common_exponent(value)
    scale = 10.0**-exponent
    errors = [abs(high - value) * scale, abs(value - low) * scale]
    positive = [error for error in errors if error > abs(value) * scale * 1e-12]
    decimals = decimals_of_error(min(positive)) if positive else _decimals_of_value(value * scale)
    texts = [_fixed(number, decimals) for number in (value * scale, *errors)]
    return Rounded(texts[0], texts[1], texts[2], exponent)


def _common_exponent(value: float) -> int:
    if value == 0.0 or 1e-3 <= abs(value) < 1e5:
        return 0
    return math.floor(math.log10(abs(value)))


def _decimals_of_value(value: float) -> int:
    return 5 - math.floor(math.log10(abs(value))) if value else 0


def _fixed(number: float, decimals: int) -> str:
    text = f"{round(number, decimals):.{max(decimals, 0)}f}"
    return text.removeprefix("-") if float(text) == 0.0 else text
