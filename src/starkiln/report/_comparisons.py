"""Results against what is known from elsewhere: published temperatures, theory."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.report._style import ACCENT, INK, MODEL, PALE, new_figure
from starkiln.report._ticks import round_ticks
from starkiln.report._view import numbers


def temperature_figure(
    results: Any,
    published: Any,
    e_published: Any = None,
    *,
    width: str | float = "one",
    figure: Any = None,
) -> Any:
    """Draw fitted temperatures against published ones.

    Top: one against the other, with the line of equality. Bottom: the difference in
    per cent of the published value, its bars joining both errors; the line is the
    median, the grey band the 16th to 84th percentile.

    Parameters
    ----------
    results : astropy.table.Table
        Results of a run.
    published, e_published : array_like
        Published temperature and its error in K, one per row; NaN or masked where
        there is none.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    figure : matplotlib.figure.Figure, optional
        Drawn on instead of a new one.

    Returns
    -------
    matplotlib.figure.Figure
        With two axes.

    Raises
    ------
    InputError
        No row has both temperatures.
    """
    known = numbers(published)
    if known.shape != (len(results),):
        raise InputError(
            f"{known.size} published temperatures for {len(results)} rows: give one each"
        )
    error = np.zeros_like(known) if e_published is None else np.nan_to_num(numbers(e_published))
    found, low, high = (numbers(results[f"temperature{end}"]) for end in ("", "_lo", "_hi"))
    both = np.isfinite(known) & np.isfinite(found) & (known > 0.0)
    if not both.any():
        raise InputError("no star has both a fitted and a published temperature")
    known, error, found, low, high = (x[both] for x in (known, error, found, low, high))
    with new_figure(figure, width=width, aspect=1.15) as drawn:
        top, bottom = drawn.subplots(2, 1, sharex=True, height_ratios=(2.0, 1.0))
        _against(top, known, error, found, found - low, high - found)
        _difference(bottom, known, error, found, found - low, high - found)
        ends = (min(known.min(), found.min()) / 1.08, max(known.max(), found.max()) * 1.08)
        for axis in (top.xaxis, top.yaxis):
            round_ticks(axis, ends)
        top.set(xlim=ends, ylim=ends, ylabel="fitted temperature (K)")
        bottom.set(xlabel="published temperature (K)", ylabel="difference (%)")
        drawn.align_ylabels()
    return drawn


def _against(ax: Any, known: Any, error: Any, found: Any, minus: Any, plus: Any) -> None:
    ax.set(xscale="log", yscale="log")
    ax.axline((1e3, 1e3), (1e4, 1e4), color=MODEL, lw=0.8, label="equal")
    ax.errorbar(known, found, xerr=error, yerr=[minus, plus], fmt="o", color=INK, ms=2.6,
                elinewidth=0.6, capsize=0, label=f"{len(known)} stars")  # fmt: skip
    ax.legend(loc="upper left")


def _difference(ax: Any, known: Any, error: Any, found: Any, minus: Any, plus: Any) -> None:
    cent = 100.0 * (found / known - 1.0)
    bars = [100.0 / known * np.hypot(side, error) for side in (minus, plus)]
    low, middle, high = np.percentile(cent, [16.0, 50.0, 84.0])
    ax.axhspan(low, high, color=PALE, lw=0)
    ax.axhline(
        middle, color=ACCENT, lw=0.9, label=f"median {middle:+.1f}%".replace("-", "\N{MINUS SIGN}")
    )
    ax.axhline(0.0, color=MODEL, lw=0.8)
    ax.errorbar(known, cent, yerr=bars, fmt="o", color=INK, ms=2.6, elinewidth=0.6, capsize=0)
    below, above = ax.get_ylim()
    ax.set_ylim(below, above + 0.3 * (above - below))
    ax.legend(loc="upper left")
