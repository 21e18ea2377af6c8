"""Figures of model atmospheres: spectrum, structure, opacity, limb darkening, colours."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from starkiln.atmospheres import Atmosphere, grey_limb_darkening
from starkiln.emitters import AtmosphereEmitter
from starkiln.errors import InputError
from starkiln.matter import ABSORPTION_SOURCES, SCATTERING_SOURCES, ContinuumOpacity
from starkiln.passbands import load_band
from starkiln.photons import planck_wavelength
from starkiln.relations import colour_relations
from starkiln.report._style import ACCENT, BAND, GREEN, INK, MODEL, PALE, QUIET, drawing, new_figure

__all__ = [
    "atmosphere_spectrum_plot",
    "atmosphere_structure_figure",
    "colour_temperature_plot",
    "limb_darkening_plot",
    "opacity_plot",
]

_LINES = ("-", "--", ":", "-.", (0, (5, 1, 1, 1, 1, 1)))
_COLOURS = (MODEL, ACCENT, GREEN, QUIET, INK)


def atmosphere_spectrum_plot(
    model: Atmosphere, *, bands: Sequence[str] = (), ax: Any = None, width: str | float = "one"
) -> Any:
    """Draw a model's spectrum over the blackbody of the same effective temperature.

    Parameters
    ----------
    model : Atmosphere
        From `starkiln.atmospheres.model_atmosphere`.
    bands : sequence of str
        Passbands to shade along the bottom.
    ax : matplotlib.axes.Axes, optional
        Where to draw.
    width : {"one", "two"} or float
        Columns or inches of a new figure.

    Returns
    -------
    matplotlib.axes.Axes
    """
    with drawing(ax, width=width) as axes:
        x = model.wavelength_m * 1e6
        body = np.pi * planck_wavelength(model.wavelength_m, np.asarray(model.temperature))
        peak = (model.wavelength_m * body).max()
        for k, name in enumerate(bands):
            band = load_band(name)
            height = 0.22 * band.response / band.response.max()
            axes.fill_between(band.wavelength_m * 1e6, height, color=BAND, alpha=0.6, lw=0)
            label = name.split()[-1]
            axes.text(band.pivot_m * 1e6, 0.235 + 0.05 * (k % 2), label, ha="center", fontsize=6)
        axes.plot(x, model.wavelength_m * body / peak, color=QUIET, ls="--", label="blackbody")
        axes.plot(
            x, model.wavelength_m * model.surface_flux / peak, color=MODEL, label="atmosphere"
        )
        low, high = 0.09e6 * 2.9e-3 / model.temperature * 2.2, 30.0 * 5772.0 / model.temperature
        axes.set(xscale="log", xlim=(max(low, 0.05), max(high / 3.0, 3.0)), ylim=(0.0, None))
        axes.set(xlabel="wavelength [um]", ylabel="wavelength x flux [blackbody's peak]")
        axes.set_title(_title(model))
        axes.legend(loc="upper right")
    return axes


def atmosphere_structure_figure(
    model: Atmosphere, *, figure: Any = None, width: str | float = "one"
) -> Any:
    """Draw temperature, pressures and the push of light against optical depth.

    Returns
    -------
    matplotlib.figure.Figure
        Three panels with one axis of Rosseland depth.
    """
    with new_figure(figure, width=width, aspect=1.3) as drawn:
        top, middle, bottom = drawn.subplots(3, 1, sharex=True)
        tau = model.tau_rosseland
        top.plot(tau, model.temperature_k, color=MODEL)
        top.axhline(model.temperature, color=PALE, zorder=0)
        top.set(ylabel="temperature [K]", title=_title(model))
        middle.plot(tau, model.gas_pressure_pa, color=MODEL, label="gas")
        middle.plot(tau, model.radiation_pressure_pa, color=ACCENT, ls="--", label="light")
        middle.set(yscale="log", ylabel="pressure [Pa]")
        middle.legend()
        bottom.plot(tau, model.gamma, color=ACCENT)
        bottom.axhline(1.0, color=PALE, zorder=0)
        bottom.set(xscale="log", yscale="log", xlabel="Rosseland optical depth")
        bottom.set_ylim(None, max(2.0, 2.0 * model.gamma.max()))
        bottom.set_ylabel("push of light / gravity")
    return drawn


def opacity_plot(
    model: Atmosphere, *, tau: float = 1.0, ax: Any = None, width: str | float = "one"
) -> Any:
    """Draw the continuous opacity at one depth, source by source, 0.1 to 10 um.

    Parameters
    ----------
    model : Atmosphere
        The model.
    tau : float
        Rosseland optical depth; the nearest depth is taken.

    Returns
    -------
    matplotlib.axes.Axes
        Only sources that reach a thousandth of the total somewhere.

    Raises
    ------
    InputError
        `tau` outside the model.
    """
    low, high = model.tau_rosseland[[0, -1]]
    if not low <= tau <= high:
        raise InputError(f"tau = {tau:g} is outside the model: give {low:.2g} to {high:.3g}")
    depth = int(np.abs(np.log(model.tau_rosseland / tau)).argmin())
    wavelength = np.geomspace(0.1e-6, 10e-6, 1500)
    opacity, gas = ContinuumOpacity(wavelength), model.solution.gas
    sources = {**opacity.absorption_sources(gas), **opacity.scattering_sources(gas)}
    curves = {
        n: sources[n][depth] / gas.density[depth]
        for n in (*ABSORPTION_SOURCES, *SCATTERING_SOURCES)
    }
    total = np.sum(list(curves.values()), axis=0)
    with drawing(ax, width=width, aspect=0.95) as axes:
        axes.plot(wavelength * 1e6, total, color=INK, lw=1.6, label="all")
        shown = [n for n, c in curves.items() if (c / total).max() > 1e-2]
        for k, name in enumerate(shown):
            axes.plot(
                wavelength * 1e6, curves[name], lw=0.9, label=name,
                color=_COLOURS[k % 4], ls=_LINES[(k // 2) % 5],
            )  # fmt: skip
        axes.set(xscale="log", yscale="log", ylim=(1e-3 * total.min(), 10.0 * total.max()))
        axes.set(xlabel="wavelength [um]", ylabel="opacity [m2 kg-1]")
        t = gas.temperature_k[depth]
        axes.set_title(f"{_title(model)}, depth {model.tau_rosseland[depth]:.2g}: {t:.0f} K")
        axes.legend(ncols=2, loc="upper right")
    return axes


def limb_darkening_plot(
    model: Atmosphere,
    *,
    wavelengths_um: Sequence[float] = (0.45, 0.8, 2.2),
    ax: Any = None,
    width: str | float = "one",
) -> Any:
    """Draw the emergent intensity from the disc's centre to its limb.

    Parameters
    ----------
    model : Atmosphere
        The model.
    wavelengths_um : sequence of float
        At most four, in um.

    Returns
    -------
    matplotlib.axes.Axes
        With the exact grey atmosphere for comparison.
    """
    mu = np.linspace(0.05, 1.0, 39)
    rays = model.intensity(mu)
    with drawing(ax, width=width) as axes:
        for k, microns in enumerate(wavelengths_um):
            at = np.array([np.interp(microns * 1e-6, model.wavelength_m, ray) for ray in rays])
            axes.plot(
                mu, at / at[-1], color=_COLOURS[k % 4], ls=_LINES[k % 4], label=f"{microns:g} um"
            )
        axes.plot(mu, grey_limb_darkening(mu), color=INK, lw=0.6, label="grey")
        axes.set(xlim=(1.0, 0.0), ylim=(0.0, 1.05))
        axes.set(xlabel="cosine of the angle to the normal", ylabel="intensity / centre")
        axes.set_title(_title(model))
        axes.legend()
    return axes


def colour_temperature_plot(
    blue: str,
    red: str,
    *,
    feh: float = 0.0,
    observed: Sequence[tuple[float, float]] = (),
    ax: Any = None,
    width: str | float = "one",
) -> Any:
    """Draw temperature against a colour: model atmospheres and published relations.

    Parameters
    ----------
    blue, red : str
        Bands of the colour.
    feh : float
        [Fe/H] of models and relations.
    observed : sequence of (float, float)
        Colour and temperature in K of stars to mark.

    Returns
    -------
    matplotlib.axes.Axes
        Models at log g 4.4 and 2; each relation over its own range, its scatter shaded.
    """
    names = (load_band(blue).name, load_band(red).name)
    with drawing(ax, width=width) as axes:
        for logg, style in ((4.4, "-"), (2.0, "--")):
            t = np.geomspace(4200.0, 9000.0 if logg < 3 else 12000.0, 60)
            axes.plot(
                _colour(names, t, logg, feh), t, color=INK, ls=style, label=f"model, log g {logg:g}"
            )
        chosen = [r for r in colour_relations() if r.bands == names]
        for k, relation in enumerate(chosen):
            x = np.linspace(*relation.colour_range, 80)
            y = np.array([relation.temperature_k(c, feh) for c in x])
            colour = _COLOURS[k % 4]
            label = f"{relation.calibration}, {relation.kind}s"
            axes.plot(x, y, color=colour, ls=_LINES[k % 5], lw=0.8, label=label)
            axes.fill_between(
                x, y - relation.scatter_k, y + relation.scatter_k, color=colour, alpha=0.15, lw=0
            )
        if len(observed):
            axes.plot(*np.transpose(observed), ".", color=QUIET, ms=3, label="stars")
        axes.set(xlabel=f"{names[0]} - {names[1]} [mag]", ylabel="effective temperature [K]")
        axes.legend()
    return axes


def _colour(names: tuple[str, str], t: np.ndarray, logg: float, feh: float) -> np.ndarray:
    magnitudes = []
    for name in names:
        band = load_band(name)
        radiance = AtmosphereEmitter().radiance(
            band.wavelength_m, t, np.full_like(t, logg), np.full_like(t, feh)
        )
        magnitudes.append(-2.5 * np.log10(radiance @ band.weight / band.zero_flux_w_m3()))
    return magnitudes[0] - magnitudes[1]


def _title(model: Atmosphere) -> str:
    return f"{model.temperature:.0f} K, log g {model.logg:g}, [Fe/H] {model.feh:g}"
