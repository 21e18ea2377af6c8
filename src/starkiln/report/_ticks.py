"""Round numbers on a logarithmic axis, never so many that they touch."""

from __future__ import annotations

from typing import Any

import numpy as np

#: Marks within a decade, from many to few.
_STEPS = ((1, 1.5, 2, 3, 4, 5, 6, 8), (1, 2, 3, 5), (1, 2, 5), (1, 3), (1,))


def round_ticks(axis: Any, limits: tuple[float, float], most: int = 7) -> None:
    """Mark a logarithmic axis between `limits` by at most `most` plain round numbers."""
    from matplotlib.ticker import FixedLocator, FuncFormatter, NullFormatter

    marks = _choose(*limits, most)
    axis.set_major_locator(FixedLocator(marks))
    axis.set_major_formatter(
        FuncFormatter(lambda value, _: np.format_float_positional(value, trim="-"))
    )
    axis.set_minor_formatter(NullFormatter())


def _choose(low: float, high: float, most: int) -> list[float]:
    from matplotlib.ticker import MaxNLocator

    decades = range(int(np.floor(np.log10(low))), int(np.ceil(np.log10(high))) + 1)
    for steps in _STEPS:
        marks = [float(f"{step}e{power}") for power in decades for step in steps]
        inside = [mark for mark in marks if low <= mark <= high]
        if len(inside) <= most:
            break
    if len(inside) < 3:
        even = MaxNLocator(4, steps=[1, 2, 5, 10]).tick_values(low, high)
        inside = [round(float(mark), 12) for mark in even if low <= mark <= high]
    return inside
