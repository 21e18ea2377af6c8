"""Figures of a whole catalogue: Hertzsprung-Russell diagram, residuals by band."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Any

import numpy as np

from starkiln.constants import T_SUN
from starkiln.errors import InputError
from starkiln.report._quantities import printed
from starkiln.report._style import ACCENT, BAND, GREEN, INK, MODEL, QUIET, drawing
from starkiln.report._text import drawable, plain_line
from starkiln.report._ticks import round_ticks
from starkiln.report._tracks import main_sequence_tracks, zero_age_line
from starkiln.report._view import FitView, numbers, run_view

_RADII = (0.01, 0.03, 0.1, 0.3, 1.0, 3.0, 10.0, 30.0, 100.0, 300.0, 1000.0)
#: Draws that a star's median model is taken from.
_MODEL_DRAWS = 32


def hr_plot(run: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw the Hertzsprung-Russell diagram of a run.

    Ellipses hold one standard deviation of each star's posterior of ln T and ln L;
    without kept draws, bars are the 68 per cent intervals. Open points did not
    converge. Dotted lines are of constant radius, the thick line is the zero-age
    main sequence (Tout et al. 1996, MNRAS 281, 257), thin lines are main-sequence
    tracks of the masses that stand at their ends (`starkiln.interiors.load_grid`).

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
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
        No star of the run has a luminosity.
    """
    results = run.results
    rows = _rows_with(results, "temperature", "luminosity")
    if not len(rows):
        raise InputError(
            "no star of this run has a luminosity: give parallax or distance in the catalogue"
        )
    with drawing(ax, width=width, aspect=1.0) as axes:
        limits = _hr_limits(results, rows)
        axes.set(xscale="log", yscale="log", xlim=limits[0][::-1], ylim=limits[1])
        _radius_lines(axes, *limits)
        _theory(axes)
        for row in rows:
            _hr_star(axes, results, row, run.draws(int(row) + 1))
        round_ticks(axes.xaxis, limits[0])
        axes.set_xlabel(printed("temperature").label)
        axes.set_ylabel(printed("luminosity").label)
        missing = len(results) - len(rows)
        title = f"{len(rows)} stars" + (f", {missing} without luminosity" if missing else "")
        axes.set_title(title, loc="left", fontsize="small")
        axes.legend(loc="lower right", bbox_to_anchor=(1.0, 1.0), borderaxespad=0.1)
    return axes


def misfit_plot(run: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw how far every band lies from the fits, over all stars.

    Box: 16th to 84th percentile of (observed - model)/model in per cent; line: 2.5th
    to 97.5th; points: each star. The thick dash is the median, with its standard
    error (1.25 s/sqrt(n)) as a bar with caps. A median far from 0 in one band, whatever the
    stars, is the mark of a wrong zero point (or of a feature that the emitter
    lacks). In brackets: number of stars.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
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
        No star has kept draws.
    """
    found = band_residuals(run_view(run, row) for row in range(1, len(run.results) + 1))
    if not found:
        raise InputError("no star of this run has kept draws; fit again with --draws 256")
    with drawing(ax, width=width, aspect=0.9) as axes:
        for place, values in enumerate(found.values()):
            _residual_box(axes, place, values)
        names = [f"{drawable(plain_line(band, 16))} ({len(v)})" for band, v in found.items()]
        axes.set_xticks(range(len(names)), names, rotation=90, parse_math=False)
        axes.axhline(0.0, color=MODEL, lw=0.8, zorder=1)
        reach = 1.2 * max(np.abs(np.percentile(v, [2.5, 97.5])).max() for v in found.values())
        axes.set(xlim=(-0.6, len(names) - 0.4), ylim=(-max(reach, 1.0), max(reach, 1.0)))
        axes.tick_params(axis="x", which="both", length=0)
        axes.set_ylabel("(observed \N{MINUS SIGN} model) / model (%)")
    return axes


def band_residuals(views: Iterable[FitView]) -> dict[str, np.ndarray]:
    """Return the residuals in per cent of every band's fitted fluxes, blue to red."""
    found: dict[str, list[float]] = {}
    wavelength: dict[str, float] = {}
    for view in views:
        for item, model in _medians(view):
            if item.used and not item.limit:
                found.setdefault(item.band, []).append(100.0 * (item.flux - model) / model)
                wavelength[item.band] = item.wavelength_um
    return {band: np.array(found[band]) for band in sorted(found, key=lambda b: wavelength[b])}


def _medians(view: FitView) -> Iterator[Any]:
    if view.draws and view.model is not None:
        model = np.median(view.model(view.some_draws(_MODEL_DRAWS)), axis=0)
        yield from zip(view.photometry, model, strict=True)


def _residual_box(ax: Any, place: int, values: np.ndarray) -> None:
    low_95, low, middle, high, high_95 = np.percentile(values, [2.5, 16.0, 50.0, 84.0, 97.5])
    ax.vlines(place, low_95, high_95, color=QUIET, lw=0.7, zorder=2)
    ax.bar(place, high - low, 0.6, low, color=BAND, ec=INK, lw=0.6, zorder=3)
    spread = 1.25 * np.std(values) / np.sqrt(len(values))
    ax.errorbar(place, middle, yerr=spread, fmt="_", ms=11, color=INK, mew=1.2, zorder=5)
    # Golden-ratio steps spread the points evenly without chance.
    shift = (np.arange(len(values)) * 0.618 % 1.0 - 0.5) * 0.5
    ax.plot(place + shift, values, ".", color=INK, ms=1.5, alpha=0.5, zorder=4)


def _rows_with(results: Any, *keys: str) -> np.ndarray:
    if any(key not in results.colnames for key in keys):
        return np.array([], dtype=int)
    columns = [numbers(results[key]) for key in keys]
    return np.flatnonzero(np.all([np.isfinite(c) & (c > 0.0) for c in columns], axis=0))


def _hr_limits(results: Any, rows: np.ndarray) -> tuple[tuple[float, float], tuple[float, float]]:
    ends = {
        key: np.array(
            [np.asarray(results[f"{key}{end}"][rows], dtype=float) for end in ("_lo", "_hi")]
        )
        for key in ("temperature", "luminosity")
    }
    cool, hot = ends["temperature"].min() / 1.15, ends["temperature"].max() * 1.25
    faint, bright = ends["luminosity"].min() / 2.5, ends["luminosity"].max() * 2.5
    return (min(cool, hot / 2.0), hot), (min(faint, bright / 100.0), bright)


def _hr_star(ax: Any, results: Any, row: int, draws: Any) -> None:
    from matplotlib.patches import Polygon

    x, y = (float(results[key][row]) for key in ("temperature", "luminosity"))
    done = str(results["status"][row]) == "ok"
    ax.plot(x, y, "o", ms=2.2, color=INK, mfc=INK if done else "white", mew=0.6, zorder=4)
    if draws is not None and len(draws) > 2:
        outline = posterior_ellipse(draws["temperature"], draws["luminosity"])
        ax.add_patch(Polygon(outline, fc=BAND, ec=MODEL, lw=0.5, alpha=0.6, zorder=3))
        return
    bars = [
        [[value - float(results[f"{key}_lo"][row])], [float(results[f"{key}_hi"][row]) - value]]
        for key, value in (("temperature", x), ("luminosity", y))
    ]
    ax.errorbar(
        x, y, xerr=bars[0], yerr=bars[1], fmt="none", ecolor=MODEL, elinewidth=0.6, capsize=0
    )


def posterior_ellipse(x: Any, y: Any, points: int = 48) -> np.ndarray:
    """Return the outline, shape (points, 2), of one standard deviation of ln x and ln y.

    The ellipse of the sample covariance: it holds 39 per cent of a Gaussian of two
    dimensions, and its extent along each axis is one standard deviation.
    """
    sample = np.log([np.asarray(x, dtype=float), np.asarray(y, dtype=float)])
    values, vectors = np.linalg.eigh(np.cov(sample))
    turn = np.linspace(0.0, 2.0 * np.pi, points, endpoint=False)
    circle = np.array([np.cos(turn), np.sin(turn)]) * np.sqrt(np.maximum(values, 0.0))[:, None]
    return np.exp(np.median(sample, axis=1)[:, None] + vectors @ circle).T


def _radius_lines(ax: Any, temperatures: tuple[float, float], lums: tuple[float, float]) -> None:
    cool, hot = temperatures
    for radius in _RADII:
        line = radius**2 * (np.array([cool, hot]) / T_SUN.value) ** 4
        ax.plot([cool, hot], line, color=QUIET, lw=0.5, ls=":", zorder=1)
        name = f"{radius:g} R$_\\odot$"
        # At the hot edge where the line reaches it, else at the cool edge.
        hot_end = lums[0] * 1.3 < line[1] < lums[1] / 1.3
        if hot_end or lums[0] * 1.3 < line[0] < lums[1] / 1.3:
            ax.annotate(
                name, (hot, line[1]) if hot_end else (cool, line[0]),
                (3, -3) if hot_end else (-3, 1), textcoords="offset points", color=QUIET,
                fontsize=5.5, ha="left" if hot_end else "right", va="top" if hot_end else "bottom",
            )  # fmt: skip


def _theory(ax: Any) -> None:
    temperature, luminosity = zero_age_line()
    ax.plot(temperature, luminosity, color=ACCENT, lw=1.6, zorder=2, label="zero-age main sequence")
    cool, hot = sorted(ax.get_xlim())
    faint, bright = ax.get_ylim()
    for mass, (track_t, track_l) in main_sequence_tracks().items():
        ax.plot(track_t, track_l, color=GREEN, lw=0.7, zorder=2)
        # Named beyond the cool end of the track, clear of the zero-age line.
        end = int(np.argmin(track_t))
        inside = cool * 1.15 < track_t[end] < hot and faint * 1.3 < track_l[end] < bright / 1.5
        if inside:
            ax.annotate(
                rf"{mass:g} M$_\odot$", (track_t[end], track_l[end]), (3, 0),
                textcoords="offset points", color=GREEN, fontsize=5.5, va="center", zorder=2,
            )  # fmt: skip
