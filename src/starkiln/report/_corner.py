"""The corner plot of one star's posterior."""

from __future__ import annotations

import warnings
from collections.abc import Sequence
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.report._quantities import FITTED, Printed, printed
from starkiln.report._rounding import Rounded, round_asymmetric
from starkiln.report._style import INK, MODEL, new_figure, width_inches
from starkiln.report._text import drawable, star_label
from starkiln.report._view import FitView, view_of

#: One and two standard deviations of a Gaussian of two dimensions enclose these shares.
LEVELS = (1.0 - np.exp(-0.5), 1.0 - np.exp(-2.0))


def corner_figure(
    fit: Any,
    *,
    quantities: Sequence[str] | None = None,
    width: str | float = "two",
    figure: Any = None,
) -> Any:
    """Draw every pair of quantities of a posterior, and each by itself.

    Diagonal panels: the draws of one quantity, with the median and the 16th and
    84th percentile as dashed lines and as the panel's title. The others: draws as
    dots, with contours that hold 39 and 86 per cent of them (one and two standard
    deviations of a Gaussian of two dimensions).

    Parameters
    ----------
    fit : FitResult or FitView
        The fit of one star; `run_view(run, row)` makes one from a run folder.
    quantities : sequence of str, optional
        Which, and in which order; by default all that were fitted.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    figure : matplotlib.figure.Figure, optional
        Drawn on instead of a new one.

    Returns
    -------
    matplotlib.figure.Figure
        The figure drawn on.

    Raises
    ------
    InputError
        No draws were kept, or a quantity is not among them.
    """
    import corner

    view = view_of(fit)
    view.need_draws("corner plot")
    shown = _choose(view, quantities)
    sample = np.column_stack([np.asarray(view.draws[item.key], dtype=float) for item in shown])
    with new_figure(figure, width=width, aspect=1.0, layout=None) as drawn:
        with warnings.catch_warnings():
            # A contour that encloses all of a few draws has no line; corner warns of it.
            warnings.filterwarnings("ignore", message="Too few points to create valid contours")
            corner.corner(sample, fig=drawn, **_options(shown, sample))
        inches = width_inches(width) if figure is None else figure.get_size_inches()[0]
        _finish(drawn, view, shown, inches)
        drawn.suptitle(
            drawable(star_label(view.name, view.row)), parse_math=False, x=0.99, ha="right"
        )
    return drawn


def _choose(view: FitView, wanted: Sequence[str] | None) -> list[Printed]:
    if wanted is None:
        keys = [key for key in FITTED if key in view.draws and np.ptp(view.draws[key]) > 0.0]
    else:
        keys = list(wanted)
    for key in keys:
        printed(key)
        if key not in view.draws:
            raise InputError(
                f"the draws of star {view.name!r} hold no {key!r}: "
                f"they hold {', '.join(view.draws)}"
            )
        if not np.ptp(view.draws[key]) > 0.0:
            raise InputError(
                f"the draws of {key!r} of star {view.name!r} are all the same: "
                "it was held fixed, so leave it out"
            )
    if not keys:
        raise InputError(f"star {view.name!r} has no quantity that was left free")
    return [printed(key) for key in keys]


def _options(shown: Sequence[Printed], sample: np.ndarray) -> dict[str, Any]:
    few = len(sample) < 2000
    return {
        "bins": 16 if few else 30,
        "smooth": 1.0,
        "levels": LEVELS,
        "color": INK,
        "labels": [item.label for item in shown],
        "max_n_ticks": 3,
        "plot_density": False,
        "fill_contours": False,
        "no_fill_contours": True,
        "hist_kwargs": {"color": MODEL, "linewidth": 0.9},
        "contour_kwargs": {"colors": [MODEL], "linewidths": 0.9},
        "data_kwargs": {"color": INK, "ms": 1.6 if few else 0.8, "alpha": 0.35},
        "range": [_range(column) for column in sample.T],
    }


def _range(column: np.ndarray) -> tuple[float, float]:
    low, high = np.percentile(column, [0.5, 99.5])
    margin = 0.1 * (high - low)
    return low - margin, high + margin


def _finish(figure: Any, view: FitView, shown: Sequence[Printed], inches: float) -> None:
    """Mark intervals, and set margins and label places in inches for any width."""
    count = len(shown)
    left, right, gap = 0.62, 0.1, 0.07
    panel = (inches - left - right) / count - gap
    figure.subplots_adjust(
        left=left / inches, bottom=left / inches, right=1 - right / inches,
        top=1 - (right + 0.26) / inches, wspace=gap / panel, hspace=gap / panel,
    )  # fmt: skip
    panels = np.array(figure.axes[: count * count]).reshape(count, count)
    place = -0.45 / panel
    for index, item in enumerate(shown):
        middle, low, high = view.interval(item.key)
        for value in (low, middle, high):
            panels[index, index].axvline(value, color=INK, ls="--", lw=0.9)
        title = _title(item, round_asymmetric(middle, low, high))
        panels[index, index].set_title(title, fontsize=7, pad=4)
        panels[-1, index].xaxis.set_label_coords(0.5, place)
        panels[index, 0].yaxis.set_label_coords(place, 0.5)
    for axes in panels.flat:
        axes.tick_params(labelrotation=40, labelsize=6, pad=1)


def _title(item: Printed, rounded: Rounded | None) -> str:
    if rounded is None:
        return item.symbol
    text = rf"{rounded.value}^{{+{rounded.plus}}}_{{-{rounded.minus}}}"
    power = rf" \times 10^{{{rounded.exponent}}}" if rounded.exponent else ""
    return f"{item.symbol} = ${text}{power}$ {item.unit}".rstrip()
