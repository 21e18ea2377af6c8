"""Whether the data moved the prior, and whether the model could have made the data."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.report._quantities import FITTED, Printed, printed
from starkiln.report._style import BAND, INK, MODEL, PALE, QUIET, drawing, new_figure
from starkiln.report._text import drawable, plain_line, star_label
from starkiln.report._view import FitView, view_of

#: Replicated data come from a fixed stream: the same posterior gives the same picture.
_SEED = 20150813


def prior_figure(fit: Any, *, width: str | float = "two", figure: Any = None) -> Any:
    """Draw the posterior of each quantity over its prior.

    Steps: posterior draws. Dashed line: prior density, on the same scale. Where the
    two agree, the data say nothing of the quantity and the prior is the answer. A
    prior that the run folder does not hold (a row's own dust or distance) is left
    out, and the panel says so.

    Parameters
    ----------
    fit : FitResult or FitView
        The fit of one star.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    figure : matplotlib.figure.Figure, optional
        Drawn on instead of a new one.

    Returns
    -------
    matplotlib.figure.Figure
        One axes per quantity.
    """
    view = view_of(fit)
    view.need_draws("comparison with the prior")
    shown = [printed(key) for key in FITTED if key in view.draws and np.ptp(view.draws[key]) > 0.0]
    if not shown:
        raise InputError(f"star {view.name!r} has no quantity that was left free")
    across = min(3 if width == "two" else 2, len(shown))
    down = -(-len(shown) // across)
    with new_figure(figure, width=width, aspect=(0.34 if across == 3 else 0.5) * down) as drawn:
        axes = np.atleast_1d(drawn.subplots(down, across)).ravel()
        for ax, item in zip(axes, shown, strict=False):
            _draw_prior(ax, item, view)
        for ax in axes[len(shown) :]:
            ax.set_axis_off()
        axes[0].legend(loc="best", handlelength=1.6)
        drawn.suptitle(drawable(star_label(view.name, view.row)), parse_math=False)
    return drawn


def _draw_prior(ax: Any, item: Printed, view: FitView) -> None:
    values = np.asarray(view.draws[item.key], dtype=float)
    low, high = np.percentile(values, [0.2, 99.8])
    low, high = low - 0.35 * (high - low), high + 0.35 * (high - low)
    if values.min() >= 0.0:
        low = max(low, 0.0)
    counts, edges = np.histogram(values, bins=24, range=(low, high), density=True)
    ax.stairs(counts, edges, color=MODEL, fill=True, facecolor=BAND, label="posterior", lw=0.9)
    ax.set_xlim(low, high)
    ax.set_ylim(0.0, 1.3 * counts.max())
    ax.set_xlabel(item.label)
    ax.set_yticks([])
    ax.xaxis.get_major_locator().set_params(nbins=4)
    density = view.priors.get(item.key)
    if density is None:
        ax.text(
            0.97, 0.95, "prior not in the run folder", transform=ax.transAxes, ha="right",
            va="top", fontsize="x-small", color=QUIET,
        )  # fmt: skip
        return
    grid = np.linspace(low, high, 400)
    ax.plot(grid, density(grid), color=INK, ls="--", label="prior")


def predictive_plot(fit: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw each observed flux among those that the posterior predicts.

    Flux over the median prediction, by band from blue to red. Bands: 68 and 95 per
    cent of replicated data (a draw of the model, with an error drawn from the quoted
    one and the misfit together); points: observed, with the quoted error. The number
    p is the share of replications that lie further from their model than the data
    do (Gelman, Meng & Stern 1996, Statistica Sinica 6, 733): near 0 the model fails
    in spite of its misfit, near 1 the errors are too large.

    Parameters
    ----------
    fit : FitResult or FitView
        The fit of one star.
    ax : matplotlib.axes.Axes, optional
        Drawn on instead of a new one.
    width : {"one", "two"} or float
        Width of a new figure.

    Returns
    -------
    matplotlib.axes.Axes
        The axes drawn on.
    """
    view = view_of(fit)
    view.need_draws("predictive check")
    order = sorted(
        (index for index, item in enumerate(view.photometry) if item.used and not item.limit),
        key=lambda index: view.photometry[index].wavelength_um,
    )
    if not order or view.model is None:
        raise InputError(f"star {view.name!r} (row {view.row}) has no fitted flux to check")
    observed = np.array([view.photometry[index].flux for index in order])
    error = np.array([view.photometry[index].e_flux for index in order])
    model = np.asarray(view.model(view.draws))[:, order]
    replicated, share = _replicate(model, view.draws, observed, error)
    with drawing(ax, width=width, aspect=0.85) as axes:
        _draw_predictive(axes, replicated, observed, error)
        names = [drawable(plain_line(view.photometry[index].band, 16)) for index in order]
        axes.set_xticks(range(len(names)), names, rotation=90)
        axes.set_ylabel("flux over median prediction")
        title = f"{star_label(view.name, view.row, 36)}: p = {share:.2f}"
        axes.set_title(drawable(title), parse_math=False)
        low, high = axes.get_ylim()
        axes.set_ylim(low, high + 0.16 * (high - low))
        axes.legend(
            loc="upper center", ncols=3, handlelength=1.0, columnspacing=0.9, handletextpad=0.4
        )
    return axes


def _replicate(
    model: np.ndarray, draws: Mapping[str, np.ndarray], observed: np.ndarray, error: np.ndarray
) -> tuple[np.ndarray, float]:
    """Return replicated data, shape (n_draws, n_bands), and the predictive p."""
    misfit = np.asarray(draws.get("misfit", np.zeros(len(model))))[:, None]
    sigma = np.hypot(error, misfit * model)
    noise = np.random.default_rng(_SEED).standard_normal(model.shape)
    further = np.sum(noise**2, axis=1) > np.sum(((observed - model) / sigma) ** 2, axis=1)
    return model + sigma * noise, float(np.mean(further))


def _draw_predictive(
    ax: Any, replicated: np.ndarray, observed: np.ndarray, error: np.ndarray
) -> None:
    low_95, low_68, middle, high_68, high_95 = np.percentile(
        replicated, [2.5, 16.0, 50.0, 84.0, 97.5], axis=0
    )  # fmt: skip
    place = np.arange(len(middle))
    for low, high, color, label in (
        (low_95, high_95, PALE, "predicted, 95%"), (low_68, high_68, BAND, "predicted, 68%")
    ):  # fmt: skip
        ax.bar(place, (high - low) / middle, 0.7, low / middle, color=color, label=label)
    ax.axhline(1.0, color=MODEL, lw=0.8)
    ax.errorbar(place, observed / middle, yerr=error / middle, fmt="o", color=INK, ms=3.4,
                elinewidth=0.7, label="observed")  # fmt: skip
    ax.set_xlim(-0.6, len(middle) - 0.4)
    ax.tick_params(axis="x", which="both", length=0)
