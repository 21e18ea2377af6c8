"""The sums of `starkiln force`: Eddington limit, grains, sails.

Inputs are floats, or arrays of draws, in the unit that each function states.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.constants import L_SUN
from starkiln.errors import ConvergenceError, InputError
from starkiln.forces import _eddington as eddington
from starkiln.forces._bodies import equilibrium_temperature, irradiance
from starkiln.forces._grains import blowout_size, drag_time, grain_beta
from starkiln.forces._sails import (
    critical_loading,
    fly_sail,
    lightness_number,
    sail_acceleration,
)
from starkiln.forces._surface import MIRROR, Surface, surface_pressure
from starkiln.photons import Answer, echo

_EDDINGTON = "Eddington 1926, The Internal Constitution of the Stars"
_BURNS = "Burns, Lamy & Soter 1979, Icarus 40, 1"
_SAIL = "McInnes 1999, Solar Sailing"


def eddington_sums(
    *,
    mass: Any = None,
    luminosity: Any = None,
    temperature: Any = None,
    logg: Any = None,
    hydrogen: Any = 0.7,
    opacity: Any = None,
) -> list[Answer]:
    """Return the Eddington limit and factor of a star.

    Parameters
    ----------
    mass, luminosity : float or array_like, optional
        solMass and solLum: limit, and factor where both are given.
    temperature, logg : float or array_like, optional
        Effective temperature in K and log g in cgs: factor at the surface.
    hydrogen : float or array_like
        Mass fraction, for the opacity of free electrons.
    opacity : float or array_like, optional
        cm2 g-1, in place of the electrons'.

    Raises
    ------
    InputError
        Neither a mass nor temperature with log g.
    """
    if (temperature is None) != (logg is None):
        raise InputError("give temperature and log g together")
    if mass is None and temperature is None:
        raise InputError("give a mass (and luminosity), or temperature and log g")
    if mass is None and luminosity is not None:
        raise InputError("a luminosity needs the mass too")
    rows = _opacity_rows(hydrogen, opacity)
    matter = {"hydrogen": hydrogen, "opacity": opacity}
    if mass is not None:
        limit = eddington.eddington_luminosity(mass, **matter).value
        rows += [
            echo("mass", mass, "solMass"),
            _limit("eddington_luminosity", limit, "W", "4 pi G M c / kappa"),
            _limit(
                "eddington_luminosity_solar", limit / L_SUN.value, "solLum", "4 pi G M c / kappa"
            ),
        ]
    if luminosity is not None:
        factor = eddington.eddington_factor(luminosity, mass, **matter)
        rows.append(echo("luminosity", luminosity, "solLum"))
        rows.append(_limit("eddington_factor", factor, "", "kappa L / 4 pi G M c"))
    if temperature is not None:
        rows += _surface_rows(temperature, logg, matter)
    return rows


def _limit(quantity: str, value: Any, unit: str, formula: str) -> Answer:
    return Answer(quantity, value, unit, formula, _EDDINGTON)


def _opacity_rows(hydrogen: Any, opacity: Any) -> list[Answer]:
    if opacity is not None:
        return [echo("opacity", opacity, "cm2 / g")]
    kappa = eddington.electron_opacity(hydrogen).to_value("cm2 / g")
    return [
        echo("hydrogen", hydrogen, ""),
        Answer("opacity", kappa, "cm2 / g", "Thomson scattering, electrons counted", "CODATA 2022"),
    ]


def _surface_rows(temperature: Any, logg: Any, matter: dict[str, Any]) -> list[Answer]:
    gravity = 10.0 ** (np.asarray(logg, dtype=float) - 2.0)
    factor = eddington.surface_eddington_factor(temperature, gravity, **matter)
    limit = eddington.eddington_temperature(gravity, **matter).value
    return [
        echo("temperature", temperature, "K"),
        echo("logg", logg, "dex(cm / s2)"),
        _limit("surface_gravity", gravity, "m / s2", "10^log g"),
        _limit("radiative_acceleration", factor * gravity, "m / s2", "kappa sigma T^4 / c"),
        _limit("surface_eddington_factor", factor, "", "kappa sigma T^4 / c g"),
        _limit("eddington_temperature", limit, "K", "(c g / kappa sigma)^(1/4)"),
    ]


def grain_sums(
    *,
    size: Any,
    density: Any,
    efficiency: Any = 1.0,
    luminosity: Any = 1.0,
    mass: Any = 1.0,
    distance: Any = 1.0,
    eccentricity: Any = 0.0,
) -> list[Answer]:
    """Return what starlight does to a spherical dust grain.

    Parameters
    ----------
    size, density : float or array_like
        Radius in um, density in g cm-3.
    efficiency : float or array_like
        Q_pr.
    luminosity, mass, distance : float or array_like
        solLum, solMass, au.
    eccentricity : float or array_like
        Of the parent body that frees the grain at its periastron.
    """
    star = {"efficiency": efficiency, "luminosity": luminosity, "mass": mass}
    beta = grain_beta(size, density, **star)
    gravity = eddington.gravity_at(mass, distance).value
    blowout = blowout_size(density, eccentricity=eccentricity, **star).value
    warmth = equilibrium_temperature(distance, luminosity=luminosity).value
    rows = [
        echo("size", size, "um"),
        echo("density", density, "g / cm3"),
        echo("efficiency", efficiency, ""),
        *_star(luminosity, mass, distance),
        echo("eccentricity", eccentricity, ""),
        Answer("beta", beta, "", "3 L Q / 16 pi G M c rho s", _BURNS),
        Answer("light_acceleration", beta * gravity, "m / s2", "beta G M / r^2", _BURNS),
        Answer("gravity", gravity, "m / s2", "G M / r^2", "IAU 2015 Resolution B3"),
        Answer("blowout_size", blowout, "um", "beta = (1 - e) / 2", _BURNS),
        Answer("black_grain_temperature", warmth, "K", "(F / 4 sigma)^(1/4)", "Stefan 1879"),
    ]
    # A grain beyond beta = 1 has no orbit to spiral from, one without force never spirals.
    bound = (beta > 0.0) & (beta < 1.0)
    years = drag_time(distance, np.where(bound, beta, 0.5), mass=mass).value
    years = np.where(bound, years, np.where(beta > 0.0, np.nan, np.inf))
    formula = "Poynting-Robertson time c r^2 / 4 G M beta"
    return [*rows, Answer("drag_time", years, "yr", formula, _BURNS)]


def sail_sums(
    *,
    loading: Any,
    distance: Any = 1.0,
    cone_angle: Any = 0.0,
    surface: Surface = MIRROR,
    luminosity: Any = 1.0,
    mass: Any = 1.0,
    until: Any = None,
    time_limit: float = 100.0,
) -> list[Answer]:
    """Return what starlight does to a flat sail.

    Parameters
    ----------
    loading : float or array_like
        Total mass over area, g m-2.
    distance, luminosity, mass : float or array_like
        au, solLum, solMass; a flight starts from the circular orbit there.
    cone_angle : float or array_like
        Degrees, -90 to 90, positive forward along the orbit.
    surface : Surface
        Optical coefficients.
    until : float or "escape", optional
        Distance in au to fly to at this angle, or until the sail escapes; then the
        inputs must be single numbers.
    time_limit : float
        Longest flight, yr.

    Raises
    ------
    ConvergenceError
        The flight did not get there in time.
    """
    star = {"luminosity": luminosity, "mass": mass}
    radial, transverse = sail_acceleration(
        loading, distance, surface=surface, cone_angle=cone_angle, luminosity=luminosity
    )
    head_on, _ = surface_pressure(irradiance(luminosity, distance), surface)
    characteristic, _ = sail_acceleration(loading, surface=surface, luminosity=luminosity)
    rows = [
        echo("loading", loading, "g / m2"),
        *_star(luminosity, mass, distance),
        echo("cone_angle", cone_angle, "deg"),
        echo("specular", surface.specular, ""),
        echo("diffuse", surface.diffuse, ""),
        _sail("critical_loading", critical_loading(**star).value, "g / m2", "L / 2 pi G M c"),
        _sail("lightness_number", lightness_number(loading, **star), "", "L / 2 pi G M c loading"),
        _sail("pressure_head_on", head_on.value, "Pa", "flat plate, no angle"),
        _sail("characteristic_acceleration", characteristic.value, "mm / s2", "at 1 au, no angle"),
        _sail("radial_acceleration", radial.value, "mm / s2", "flat plate at the cone angle"),
        _sail("forward_acceleration", transverse.value, "mm / s2", "flat plate at the cone angle"),
    ]
    if until is None:
        return rows
    flight = {"loading": loading, "cone_angle": cone_angle, "start": distance, "surface": surface}
    return rows + _flight_rows(until, time_limit=time_limit, **flight, **star)


def _flight_rows(until: Any, **flight: Any) -> list[Answer]:
    wanted, target = ("escape", None) if until == "escape" else ("target", until)
    end = fly_sail(target=target, **flight)
    if end.reached != wanted:
        raise ConvergenceError(
            f"the sail does not reach its {wanted} (ended by: {end.reached}, after "
            f"{end.time.value:.6g} yr at {end.distance.value:.6g} au): change the cone angle "
            "or the loading, or raise the time limit",
            end,
        )
    formula = "equations of motion integrated"
    return [
        *([] if target is None else [echo("target", target, "au")]),
        _sail(f"{wanted}_time", end.time.value, "yr", formula),
        _sail(f"{wanted}_distance", end.distance.value, "au", formula),
        _sail(f"{wanted}_speed", end.speed.value, "km / s", formula),
        _sail(f"{wanted}_turns", end.turns, "", formula),
    ]


def _sail(quantity: str, value: Any, unit: str, formula: str) -> Answer:
    return Answer(quantity, value, unit, formula, _SAIL)


def _star(luminosity: Any, mass: Any, distance: Any) -> list[Answer]:
    return [
        echo("luminosity", luminosity, "solLum"),
        echo("mass", mass, "solMass"),
        echo("distance", distance, "au"),
    ]
