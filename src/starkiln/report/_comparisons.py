"""Results against what is known from elsewhere: published temperatures, theory."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.interiors import standard_model
from starkiln.report._style import ACCENT, INK, MODEL, PALE, QUIET, drawing, new_figure
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


def pressure_plot(table: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw the ratio of radiation to gas pressure against mass.

    Points: the ratio of the volume integrals, with the ends of the interval where
    the table has them; lines: Eddington's standard model for the table's smallest
    and largest mean particle weight (1926, The Internal Constitution of the Stars,
    section 84).

    Parameters
    ----------
    table : astropy.table.Table
        With the columns `mass` (solMass), `mu` and `radiation_to_gas` of `starkiln
        pressure`, and where known their `_lo` and `_hi`.
    ax : matplotlib.axes.Axes, optional
        Drawn on instead of a new one.
    width : {"one", "two"} or float
        Width of a new figure.

    Returns
    -------
    matplotlib.axes.Axes
        The axes drawn on.

    Raises
    ------
    InputError
        A column is missing, or no row has a mass and a ratio.
    """
    missing = [key for key in ("mass", "mu", "radiation_to_gas") if key not in table.colnames]
    if missing:
        raise InputError(f"the table has no column {missing[0]!r}: give one of starkiln pressure")
    mass, ratio, mu = (numbers(table[key]) for key in ("mass", "radiation_to_gas", "mu"))
    good = np.isfinite(mass) & np.isfinite(ratio) & (mass > 0.0) & (ratio > 0.0)
    if not good.any():
        raise InputError("no row has both a mass and a ratio of radiation to gas pressure")
    with drawing(ax, width=width) as axes:
        axes.set(xscale="log", yscale="log")
        ends = (mass[good].min() / 1.5, mass[good].max() * 1.5)
        grid = np.geomspace(*ends, 100)
        for weight, line in zip(
            sorted({mu[good].min(), mu[good].max()}), ("-", "--"), strict=False
        ):
            light, gas = standard_model(grid, weight)
            label = rf"standard model, $\mu$ = {weight:.3g}"
            axes.plot(grid, light / gas, color=MODEL, ls=line, label=label)
        bars = [_bars(table, key, good) for key in ("mass", "radiation_to_gas")]
        axes.errorbar(mass[good], ratio[good], xerr=bars[0], yerr=bars[1], fmt="o", color=INK, ms=3,
                      elinewidth=0.7, label=f"{int(good.sum())} stars")  # fmt: skip
        axes.axhline(1.0, color=QUIET, lw=0.5, ls=":")
        axes.set_xlim(*ends)
        round_ticks(axes.xaxis, ends)
        axes.set_xlabel(r"$M$ ($\mathrm{M_\odot}$)")
        axes.set_ylabel(r"$P_\mathrm{rad}/P_\mathrm{gas}$")
        axes.legend(loc="lower right")
    return axes


def _bars(table: Any, key: str, good: np.ndarray) -> Any:
    if f"{key}_lo" not in table.colnames:
        return None
    value, low, high = (numbers(table[f"{key}{end}"])[good] for end in ("", "_lo", "_hi"))
    return np.nan_to_num([value - low, high - value])
