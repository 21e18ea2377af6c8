"""The spectral energy distribution of one star, with the model and what it leaves."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.report._spread import spread
from starkiln.report._style import ACCENT, BAND, INK, MODEL, PALE, QUIET, new_figure
from starkiln.report._text import drawable, plain_line, star_label
from starkiln.report._ticks import round_ticks
from starkiln.report._view import FitView, Measurement, view_of

_PERCENTILES = (2.5, 16.0, 50.0, 84.0, 97.5)
#: Heights of the strip of band names and the three panels, relative to each other.
_HEIGHTS = (0.8, 3.0, 1.0, 1.0)
_MARGINS_INCHES = {"left": 0.58, "right": 0.1, "bottom": 0.4, "top": 0.22}
_LABEL_INCHES = 0.115


def sed_figure(
    fit: Any, *, width: str | float = "one", figure: Any = None, draws: int = 128
) -> Any:
    """Draw photometry, posterior model spectra and residuals of one star.

    Top: wavelength times flux density. Filled points were fitted, open ones left
    out; the bar across a point is the band's width, an arrow a limit. The line is
    the median of the reddened model spectra, the bands hold 68 and 95 per cent of
    them; a diamond is the model seen through the band. Middle: (observed -
    model)/sigma, where sigma joins the quoted error and the misfit f as the
    likelihood does. Bottom: the same in per cent of the model with the quoted
    errors; the grey band is the misfit. What lies outside a residual panel stands
    at its edge as a triangle.

    Parameters
    ----------
    fit : FitResult or FitView
        The fit of one star; `run_view(run, row)` makes one from a run folder.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    figure : matplotlib.figure.Figure, optional
        Drawn on instead of a new one.
    draws : int
        Posterior draws that make the bands.

    Returns
    -------
    matplotlib.figure.Figure
        With four axes: band names, spectrum, residuals in sigma and in per cent.

    Raises
    ------
    InputError
        The star has no photometry to draw, or no draws were kept.
    """
    view = view_of(fit)
    view.need_draws("spectral energy distribution")
    if not view.photometry or view.model is None or view.spectrum is None:
        raise InputError(f"star {view.name!r} (row {view.row}) has no photometry to draw")
    aspect = 0.8 if width == "two" else 1.3
    with new_figure(figure, width=width, aspect=aspect, layout=None) as drawn:
        strip, top, middle, bottom = _panels(drawn)
        sample = view.some_draws(draws)
        limits = wavelength_limits(view.photometry)
        modelled = np.asarray(view.model(sample), dtype=float)
        _draw_spectrum(top, view, limits, view.spectrum, sample)
        _draw_photometry(top, view.photometry, np.median(modelled, axis=0))
        _draw_residuals(middle, bottom, view.photometry, modelled, _misfit(sample))
        _wavelength_axis(bottom, limits)
        _name_bands(strip, view.photometry, limits)
        drawn.suptitle(
            drawable(star_label(view.name, view.row, 44)), y=0.995, va="top", parse_math=False
        )
    return drawn


def wavelength_limits(photometry: Sequence[Measurement]) -> tuple[float, float]:
    """Return the wavelengths in micrometres that a star's spectrum is drawn between."""
    low = min(item.wavelength_um - item.width_um / 2 for item in photometry)
    high = max(item.wavelength_um + item.width_um / 2 for item in photometry)
    margin = max((high / low) ** 0.06, 1.12)
    return low / margin, high * margin


def _misfit(sample: Mapping[str, np.ndarray]) -> float:
    return float(np.median(sample["misfit"])) if "misfit" in sample else 0.0


def _panels(figure: Any) -> Any:
    across, high = figure.get_size_inches()
    margin = _MARGINS_INCHES
    return figure.subplots(
        4, 1, sharex=True, height_ratios=_HEIGHTS,
        gridspec_kw={
            "hspace": 0.06,
            "left": margin["left"] / across,
            "right": 1.0 - margin["right"] / across,
            "bottom": margin["bottom"] / high,
            "top": 1.0 - margin["top"] / high,
        },
    )  # fmt: skip


def _draw_spectrum(
    ax: Any,
    view: FitView,
    limits: tuple[float, float],
    spectrum: Any,
    sample: Mapping[str, np.ndarray],
) -> None:
    from matplotlib.ticker import NullFormatter

    wavelength_um = np.geomspace(*limits, 240)
    flux = np.asarray(spectrum(wavelength_um * 1e-6, sample)) * wavelength_um
    low_95, low_68, middle, high_68, high_95 = np.percentile(flux, _PERCENTILES, axis=0)
    ax.fill_between(wavelength_um, low_95, high_95, color=PALE, lw=0, label="model, 95%")
    ax.fill_between(wavelength_um, low_68, high_68, color=BAND, lw=0, label="model, 68%")
    ax.plot(wavelength_um, middle, color=MODEL, label="model, median")
    seen = [item.flux * item.wavelength_um for item in view.photometry if item.flux > 0.0]
    modelled = np.interp([item.wavelength_um for item in view.photometry], wavelength_um, middle)
    everything = [*seen, *modelled[modelled > 0.0]]
    ax.set(xscale="log", yscale="log")
    low, high = min(everything) / 2.5, max([*everything, middle.max()]) * 2.0
    # At least 1.3 decades, so that the axis has a labelled tick.
    ax.set_ylim(min(low, high / 20.0), high)
    ax.yaxis.set_minor_formatter(NullFormatter())
    _label(ax, r"$\lambda F_\lambda$ ($\mathrm{W\,m^{-2}}$)")


def _label(ax: Any, text: str, *, small: bool = False) -> None:
    inches = ax.get_position().width * ax.figure.get_size_inches()[0]
    ax.set_ylabel(text, fontsize="small" if small else "medium")
    ax.yaxis.set_label_coords(-0.42 / inches, 0.5)


def _draw_photometry(ax: Any, photometry: Sequence[Measurement], modelled: np.ndarray) -> None:
    names = {"fitted": "fitted", "left out": "left out", "limit": "limit"}
    for item, model in zip(photometry, modelled, strict=True):
        kind = "limit" if item.limit else "fitted" if item.used else "left out"
        _draw_point(ax, item, names.pop(kind, None))
        if np.isfinite(model) and model > 0.0:
            ax.plot(item.wavelength_um, model * item.wavelength_um, marker="D", ms=4.5,
                    mfc="none", mec=MODEL, mew=0.6, ls="none", zorder=4)  # fmt: skip
    ax.legend(loc="best", handlelength=1.6, labelspacing=0.3)


def _look(item: Measurement) -> dict[str, Any]:
    color = ACCENT if item.limit else INK if item.used else QUIET
    return {"color": color, "mfc": color if item.used else "white", "mec": color, "zorder": 5,
            "mew": 0.7, "ms": 3.4, "elinewidth": 0.7, "ls": "none"}  # fmt: skip


def _draw_point(ax: Any, item: Measurement, label: str | None) -> None:
    x, y = item.wavelength_um, item.flux * item.wavelength_um
    half = item.width_um / 2.0
    if item.flux <= 0.0:
        # No place on a logarithmic axis: it stands at the foot.
        ax.plot(x, 0.03, transform=ax.get_xaxis_transform(), marker="v", ms=4,
                color=_look(item)["color"], mfc="white", ls="none", label=label)  # fmt: skip
        return
    error = None
    if not item.limit and np.isfinite(item.e_flux):
        # A lower bar that reaches 0 or less would pull the axis down without end.
        low = min(item.e_flux * x, 0.9 * y)
        error = [[low], [item.e_flux * x]]
    marker = "_" if item.limit else "o"
    ax.errorbar(x, y, xerr=half, yerr=error, marker=marker, label=label, **_look(item))
    if item.limit:
        down = item.limit == "upper"
        ax.annotate(
            "", (x, y), (0, -13 if down else 13), textcoords="offset points",
            arrowprops={"arrowstyle": "<-", "color": ACCENT, "lw": 0.9, "shrinkA": 0, "shrinkB": 0},
        )  # fmt: skip


def _draw_residuals(
    sigma_ax: Any,
    cent_ax: Any,
    photometry: Sequence[Measurement],
    modelled: np.ndarray,
    misfit: float,
) -> None:
    model = np.median(modelled, axis=0)
    left = np.array([item.flux for item in photometry]) - model
    error = np.array([item.e_flux for item in photometry])
    sigma = left / np.hypot(error, misfit * model)
    cent, cent_error = 100.0 * left / model, 100.0 * error / model
    solid = np.array([item.used and not item.limit for item in photometry])
    reach = np.nanmax(np.abs(sigma[solid]), initial=2.4) * 1.25
    _residual_panel(sigma_ax, photometry, sigma, None, reach)
    for level in (-1.0, 1.0):
        sigma_ax.axhline(level, color=QUIET, lw=0.5, ls=":", zorder=1)
    _label(sigma_ax, "residual (\N{GREEK SMALL LETTER SIGMA})", small=True)
    tall = np.abs(cent[solid]) + np.nan_to_num(cent_error[solid])
    reach = max(np.nanmax(tall, initial=1.0), 100.0 * misfit) * 1.25
    cent_ax.axhspan(-100.0 * misfit, 100.0 * misfit, color=PALE, lw=0, zorder=0)
    _residual_panel(cent_ax, photometry, cent, cent_error, reach)
    _label(cent_ax, "residual (%)", small=True)


def _residual_panel(
    ax: Any,
    photometry: Sequence[Measurement],
    values: np.ndarray,
    errors: np.ndarray | None,
    reach: float,
) -> None:
    ax.set_ylim(-reach, reach)
    ax.axhline(0.0, color=MODEL, lw=0.8, zorder=1)
    for index, item in enumerate(photometry):
        value = values[index]
        if not np.isfinite(value):
            continue
        look, x = _look(item), item.wavelength_um
        outside = abs(value) > reach
        if outside or item.limit:
            up = item.limit == "lower" if item.limit else value > 0.0
            look |= {"marker": "^" if up else "v", "ms": 4.0}
            ax.errorbar(x, np.clip(value, -0.88 * reach, 0.88 * reach), **look)
        else:
            bar = None if errors is None else errors[index]
            ax.errorbar(x, value, yerr=bar, marker="o", **look)


def _wavelength_axis(ax: Any, limits: tuple[float, float]) -> None:
    ax.set_xlim(*limits)
    round_ticks(ax.xaxis, limits)
    ax.set_xlabel("wavelength (\N{MICRO SIGN}m)")


def _name_bands(strip: Any, photometry: Sequence[Measurement], limits: tuple[float, float]) -> None:
    """Write each band's name upright over its point, apart from its neighbours."""
    strip.set_axis_off()
    strip.set_ylim(0.0, 1.0)
    inches = strip.get_position().width * strip.figure.get_size_inches()[0]
    log_low, log_high = np.log(limits)
    gap = _LABEL_INCHES / inches * (log_high - log_low)
    bands = {item.band: item.wavelength_um for item in photometry}
    places = np.exp(
        spread(np.log(list(bands.values())), gap, log_low + gap / 2, log_high - gap / 2)
    )
    for (band, wavelength_um), place in zip(bands.items(), places, strict=True):
        strip.plot([wavelength_um, place, place], [0.0, 0.16, 0.2], color=QUIET, lw=0.4)
        strip.text(
            place, 0.23, drawable(plain_line(band, 16)), rotation=90, ha="center", va="bottom",
            fontsize=5.8, parse_math=False,
        )  # fmt: skip
