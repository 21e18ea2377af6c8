"""Figures of light itself: blackbody spectra in any form, and pressure against distance."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.constants import AU, R_SUN
from starkiln.errors import InputError
from starkiln.forces import ABSORBER, MIRROR, isotropic_pressure, star_field, surface_pressure
from starkiln.photons import (
    FORMS,
    VARIABLES,
    effective_temperature,
    peak,
    planck,
    rayleigh_jeans,
    srgb,
    wien,
)
from starkiln.report._style import ACCENT, INK, MODEL, PALE, QUIET, drawing

#: Variable -> (label, symbol, unit of the axis).
_AXES = {
    "wavelength": ("Wavelength", r"\lambda", "um"),
    "frequency": ("Frequency", r"\nu", "THz"),
    "angular_frequency": ("Angular frequency", r"\omega", "rad / ps"),
    "wavenumber": ("Wavenumber", r"\tilde\nu", "cm-1"),
    "energy": ("Photon energy", "E", "eV"),
}
_FORM_LABELS = {
    "radiance": "Radiance $B_{%s}$",
    "exitance": "Exitance $M_{%s}$",
    "energy_density": "Energy density $u_{%s}$",
    "photon_radiance": "Photon radiance $L_{%s}$",
    "photon_exitance": "Photon exitance $N_{%s}$",
    "photon_density": "Photon density $n_{%s}$",
}
#: What the eye sees, in nm (CIE 17-621: limits between 360-400 and 760-830 nm).
_VISIBLE_NM = (380.0, 760.0)
#: Decades drawn below the highest point.
_DECADES = 6.0


def spectra_plot(
    temperatures: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
    unit: Any = None,
    at_unit: Any = None,
    limits: bool = True,
    width: str | float = "one",
    ax: Any = None,
) -> Any:
    """Draw blackbody spectra, with both limits and the visible range.

    Parameters
    ----------
    temperatures : Quantity or array_like
        K, above 0; one line each, in the colour that such a body has to the CIE 1931
        observer, outlined so that white ones show.
    variable, form : str
        As for `starkiln.photons.planck`.
    unit, at_unit : str or Unit, optional
        Of the ordinate, and of the abscissa.
    limits : bool
        Draw Wien's law (dashed) and the Rayleigh-Jeans law (dotted).
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    ax : matplotlib.axes.Axes, optional
        Drawn on instead of a new figure.

    Returns
    -------
    matplotlib.axes.Axes

    Raises
    ------
    InputError
        Unknown variable or form, temperature not above 0, unit that does not fit.
    """
    kelvin = np.sort(np.ravel(_temperatures(temperatures)))[::-1]
    for name, among in ((variable, VARIABLES), (form, FORMS)):
        if name not in among:
            raise InputError(f"{name!r} is unknown: choose one of {', '.join(among)}")
    at = _abscissa(kelvin, variable, at_unit)
    options = {"variable": variable, "form": form, "unit": unit or _ordinate(variable, form, at)}
    curves = [planck(at, t, **options) for t in kelvin]
    title, symbol, _ = _AXES[variable]
    with drawing(ax, width=width) as axes:
        _draw_spectra(axes, at, kelvin, curves)
        if limits:
            _draw_limits(axes, at, kelvin, options)
        _frame(axes, at, curves)
        _mark_visible(axes, at, variable)
        axes.set_xlabel(f"{title} [{at.unit:latex_inline}]")
        axes.set_ylabel(f"{_FORM_LABELS[form] % symbol} [{curves[0].unit:latex_inline}]")
        axes.legend(frameon=True, facecolor="white", edgecolor=PALE, framealpha=0.9)
    return axes


def light_pressure_plot(
    luminosity: Any,
    radius: Any,
    *,
    farthest: Any = 10.0,
    limb_darkening: Sequence[float] = (),
    width: str | float = "one",
    ax: Any = None,
) -> Any:
    """Draw the pressure of a star's light against distance from its centre.

    Parameters
    ----------
    luminosity, radius : Quantity or float
        solLum and solRad when bare.
    farthest : Quantity or float
        End of the abscissa, au when bare; beyond the star's surface.
    limb_darkening : sequence of float
        As for `starkiln.forces.star_field`.
    width : {"one", "two"} or float
        Width of a journal's column, or inches.
    ax : matplotlib.axes.Axes, optional
        Drawn on instead of a new figure.

    Returns
    -------
    matplotlib.axes.Axes
        On a black plate and on a mirror that face the star (lines), as if the star
        were a point (dotted), and the isotropic pressure a T^4 / 3 at the effective
        temperature, to which the photosphere comes near (diamond). The upper axis
        counts stellar radii.
    """
    star_au = as_float(radius, "solRad", "radius", lower=0.0, exclusive=True)
    star_au *= R_SUN.value / AU.value
    end = as_float(farthest, "au", "farthest", lower=star_au, exclusive=True)
    far = np.geomspace(star_au, end, 300)
    field = star_field(luminosity, radius, far, limb_darkening=limb_darkening)
    with drawing(ax, width=width) as axes:
        _draw_pressures(axes, far, field)
        axes.set_xlim(star_au, end)
        axes.set_xlabel("Distance from the star's centre [au]")
        axes.set_ylabel("Pressure of light, face on [Pa]")
        # The upper axis has ticks of its own.
        axes.tick_params(which="both", top=False)
        upper = axes.secondary_xaxis(
            "top", functions=(lambda x: np.asarray(x) / star_au, lambda x: np.asarray(x) * star_au)
        )
        upper.set_xlabel("Distance [stellar radii]")
        axes.legend(frameon=True, facecolor="white", edgecolor=PALE)
    return axes


def _draw_pressures(axes: Any, far: np.ndarray, field: Any) -> None:
    black = field.radial_pressure.value
    warmth = effective_temperature(field.flux[0])
    axes.loglog(far, 2.0 * black, color=MODEL, label="mirror")
    axes.loglog(far, black, color=INK, ls="--", label="black plate")
    label: str | None = "the same, star a point"
    for surface in (MIRROR, ABSORBER):
        point, _ = surface_pressure(field.flux, surface)
        axes.loglog(far, point.value, color=QUIET, ls=":", label=label)
        label = None
    axes.plot(
        [far[0]],
        [isotropic_pressure(warmth).value],
        "D",
        color=ACCENT,
        label=f"isotropic, $aT^4/3$ at {warmth.value:,.0f} K",
        clip_on=False,
        zorder=5,
    )


def _temperatures(temperatures: Any) -> np.ndarray:
    return np.atleast_1d(as_array(temperatures, "K", "temperature", lower=0.0, exclusive=True))


def _abscissa(kelvin: np.ndarray, variable: str, at_unit: Any) -> Any:
    """Return spectral points from well on the Wien side of the hottest to far beyond all."""
    unit = at_unit or _AXES[variable][2]
    ends = [peak(t, variable=variable, unit=unit) for t in (kelvin[0], kelvin[-1])]
    low, high = sorted(e.value for e in ends)
    reach = (0.12, 30.0) if variable == "wavelength" else (0.01, 8.0)
    return np.geomspace(low * reach[0], high * reach[1], 800) * ends[0].unit


def _ordinate(variable: str, form: str, at: Any) -> Any:
    """Return the form's SI unit with the abscissa's own unit for the variable's."""
    from astropy import units as u

    own = u.Unit(VARIABLES[variable])
    return u.Unit(FORMS[form].unit.format(VARIABLES[variable])) * own / at.unit


def _draw_spectra(axes: Any, at: Any, kelvin: np.ndarray, curves: Sequence[Any]) -> None:
    from matplotlib.patheffects import withStroke

    outline = [withStroke(linewidth=2.4, foreground=INK)]
    for t, curve, colour in zip(kelvin, curves, srgb(kelvin), strict=True):
        name = f"{t:,.6g} K"
        axes.loglog(at.value, curve.value, color=colour, lw=1.5, path_effects=outline, label=name)
        _name_peak(axes, at, curve, name)


def _draw_limits(axes: Any, at: Any, kelvin: np.ndarray, options: dict[str, Any]) -> None:
    for law, style, name in ((wien, "--", "Wien"), (rayleigh_jeans, ":", "Rayleigh-Jeans")):
        for index, t in enumerate(kelvin):
            label = name if index == 0 else None
            values = law(at, t, **options).value
            axes.loglog(at.value, values, ls=style, color=QUIET, lw=0.7, label=label)


def _name_peak(axes: Any, at: Any, curve: Any, name: str) -> None:
    from matplotlib.patheffects import withStroke

    # Cold bodies are all of one red and the Sun is near white: colour alone names no line.
    top = int(np.argmax(curve.value))
    axes.annotate(
        name,
        (at.value[top], curve.value[top]),
        xytext=(0, 5),
        textcoords="offset points",
        ha="center",
        fontsize="small",
        color=INK,
        path_effects=[withStroke(linewidth=2.0, foreground="white")],
    )


def _frame(axes: Any, at: Any, curves: Sequence[Any]) -> None:
    """Show the given number of decades below the highest peak, and no empty sides."""
    values = np.max([curve.value for curve in curves], axis=0)
    floor = np.max(values) * 10.0**-_DECADES
    shown = at.value[values > floor]
    axes.set_ylim(floor, np.max(values) * 5.0)
    axes.set_xlim(np.min(shown), np.max(shown))


def _mark_visible(axes: Any, at: Any, variable: str) -> None:
    from astropy import units as u
    from matplotlib.patheffects import withStroke

    target = u.rad / u.s if variable == "angular_frequency" else at.unit
    ends = (_VISIBLE_NM * u.nm).to("Hz" if target != at.unit else at.unit, u.spectral())
    if variable == "angular_frequency":
        ends = (ends.value * 2.0 * np.pi * target).to(at.unit)
    low, high = sorted(ends.value)
    left, right = axes.get_xlim()
    if high < left or low > right:
        return
    axes.axvspan(low, high, color=PALE, zorder=0, lw=0)
    axes.text(
        np.sqrt(max(low, left) * min(high, right)),
        0.02,
        "visible",
        transform=axes.get_xaxis_transform(),
        ha="center",
        va="bottom",
        fontsize="small",
        color=INK,
        path_effects=[withStroke(linewidth=2.0, foreground="white")],
    )
