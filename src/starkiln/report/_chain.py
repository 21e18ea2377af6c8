"""The path of emcee's walkers, and how long it remembers where it was."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.report._style import ACCENT, GREEN, INK, MODEL, PALE, QUIET, drawing, new_figure
from starkiln.report._text import drawable, star_label
from starkiln.report._view import FitView, view_of

_SYMBOLS = {
    "ln_temperature": r"$\ln T$",
    "ln_diameter": r"$\ln\theta$",
    "av": r"$A_V$ (mag)",
    "ln_misfit": r"$\ln f$",
}
#: Enough walkers to see the ensemble, few enough to see each.
_MOST_WALKERS = 48
_LINES = ((MODEL, "-"), (ACCENT, "--"), (GREEN, "-."), (INK, ":"), (QUIET, (0, (5, 1, 1, 1))))


def chain_figure(fit: Any, *, width: str | float = "one", figure: Any = None) -> Any:
    """Draw the path of every walker in every sampled parameter.

    Shaded: the burn-in that the posterior leaves out. A chain to be trusted looks
    after it like a level band of noise, without drift and without a walker apart.

    Parameters
    ----------
    fit : FitResult or FitView
        A fit of the ensemble engine.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    figure : matplotlib.figure.Figure, optional
        Drawn on instead of a new one.

    Returns
    -------
    matplotlib.figure.Figure
        One axes per parameter.

    Raises
    ------
    InputError
        The fit has no chain.
    """
    view = view_of(fit)
    chain = _chain(view)
    count = chain.shape[2]
    with new_figure(figure, width=width, aspect=0.15 + 0.27 * count) as drawn:
        axes = np.atleast_1d(drawn.subplots(count, 1, sharex=True))
        step = max(1, chain.shape[1] // _MOST_WALKERS)
        for ax, path, name in zip(axes, chain.transpose(2, 0, 1), view.chain_names, strict=True):
            ax.axvspan(0, view.burn_in, color=PALE, lw=0)
            ax.plot(path[:, ::step], color=INK, alpha=0.15, lw=0.3, rasterized=True)
            ax.set_ylabel(_symbol(name))
            ax.set_xlim(0, len(path))
            ax.yaxis.get_major_locator().set_params(nbins=4)
        axes[-1].set_xlabel("step")
        drawn.align_ylabels()
        drawn.suptitle(drawable(star_label(view.name, view.row, 44)), parse_math=False)
    return drawn


def autocorrelation_plot(fit: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw the autocorrelation of each sampled parameter against the lag.

    The average over the walkers after burn-in, with the integrated autocorrelation
    time tau (Sokal 1989, window of 5 tau; Goodman & Weare 2010, Comm. App. Math.
    Comp. Sci. 5, 65) in the legend: a chain of N steps and W walkers holds about
    N W / tau independent draws.

    Parameters
    ----------
    fit : FitResult or FitView
        A fit of the ensemble engine.
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
        The fit has no chain.
    """
    from emcee.autocorr import function_1d, integrated_time

    view = view_of(fit)
    chain = _chain(view)[view.burn_in :]
    tau = integrated_time(chain, tol=0)
    most = int(min(len(chain) - 1, max(10.0, 6.0 * np.nanmax(tau))))
    with drawing(ax, width=width) as axes:
        for index, name in enumerate(view.chain_names):
            color, line = _LINES[index % len(_LINES)]
            curve = np.mean([function_1d(walker) for walker in chain[:, :, index].T], axis=0)
            symbol = _symbol(name).removesuffix(" (mag)")
            label = rf"{symbol}: $\tau$ = {tau[index]:.0f}"
            axes.plot(curve[: most + 1], color=color, ls=line, label=label)
        axes.axhline(0.0, color=QUIET, lw=0.5)
        axes.set(xlim=(0, most), ylim=(-0.25, 1.0), xlabel="lag (steps)", ylabel="autocorrelation")
        axes.set_title(drawable(star_label(view.name, view.row, 44)), parse_math=False)
        axes.legend(loc="upper right")
    return axes


def _chain(view: FitView) -> np.ndarray:
    if view.chain is None:
        raise InputError(
            f"the fit of star {view.name!r} holds no chain: fit the star by itself from Python "
            "with the ensemble engine (a run folder keeps no chains)"
        )
    return np.asarray(view.chain, dtype=float)


def _symbol(name: str) -> str:
    return _SYMBOLS.get(name, name.replace("_", " "))
