"""The sums of `starkiln force surface`: pressure of light on a surface or body."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import SIGMA_SB, C
from starkiln.errors import InputError
from starkiln.forces._bodies import force_coefficient, light_to_gravity
from starkiln.forces._inputs import metres, star_radius, watts
from starkiln.forces._starfield import star_field
from starkiln.forces._surface import (
    ABSORBER,
    Surface,
    isotropic_pressure,
    isotropic_wall_pressure,
    surface_pressure,
)
from starkiln.photons import Answer, echo

_MAXWELL = "Maxwell 1873; McInnes 1999, Solar Sailing, sect. 2.6"
_GAS = "Landau & Lifshitz 1980, Statistical Physics, sect. 63"
_DISC = "McInnes & Brown 1990, Celest. Mech. Dyn. Astron. 49, 249"


def light_sums(
    *,
    irradiance: Any = None,
    luminosity: Any = None,
    temperature: Any = None,
    radius: Any = None,
    distance: Any = None,
) -> tuple[list[Answer], Any]:
    """Return the rows of the light that falls on a surface, and its irradiance.

    Parameters
    ----------
    irradiance : float or array_like, optional
        W m-2; or
    luminosity, distance : float or array_like, optional
        solLum and au, with `radius` (solRad) for a star of finite size; or
    temperature, radius, distance : float or array_like, optional
        K, solRad and au of a blackbody star; or
    temperature : float or array_like, optional
        K alone: isotropic radiation, for which the irradiance returned is None.

    Raises
    ------
    InputError
        Not one of these four ways.
    """
    if irradiance is not None:
        _refuse(luminosity=luminosity, temperature=temperature, distance=distance, radius=radius)
        flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
        return [echo("irradiance", flux, "W / m2")], flux
    if temperature is not None and distance is None:
        _refuse(luminosity=luminosity, radius=radius)
        pressure = isotropic_pressure(temperature).value
        return [
            echo("temperature", temperature, "K"),
            Answer("isotropic_pressure", pressure, "Pa", "a T^4 / 3", _GAS),
        ], None
    rows, power = _star_rows(luminosity, temperature, radius)
    if distance is None:
        raise InputError("give the distance of the star too")
    flux = power / (4.0 * math.pi * metres(distance) ** 2)
    rows.append(echo("distance", distance, "au"))
    rows.append(Answer("irradiance", flux, "W / m2", "L / 4 pi r^2", "IAU 2015 Resolution B3"))
    if radius is not None:
        rows += _disc_rows(power, radius, distance)
    return rows, flux


def surface_sums(
    irradiance: Any,
    *,
    surface: Surface = ABSORBER,
    angle: Any = 0.0,
    velocity: Any = 0.0,
    area: Any = None,
    body_mass: Any = None,
    mass: Any = None,
    distance: Any = None,
) -> list[Answer]:
    """Return the pressure of a beam of light on a flat surface, and the force on a body.

    Parameters
    ----------
    irradiance : float or array_like
        W m-2.
    surface : Surface
        Optical coefficients.
    angle, velocity : float or array_like
        Degrees between beam and normal; km/s away from the source.
    area, body_mass : float or array_like, optional
        m2 and kg of a plate: force and acceleration.
    mass, distance : float or array_like, optional
        Of the star, solMass and au: the force over its gravity.
    """
    normal, tangential = surface_pressure(irradiance, surface, angle=angle, velocity=velocity)
    flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
    rows = [
        *(echo(n, getattr(surface, n), "") for n in ("specular", "diffuse", "transmitted")),
        echo("angle", angle, "deg"),
        echo("velocity", velocity, "km / s"),
        Answer("momentum_flux", flux / C.value, "Pa", "F / c", _MAXWELL),
        Answer("normal_pressure", normal.value, "Pa", "flat plate, normal part", _MAXWELL),
        Answer("tangential_pressure", tangential.value, "Pa", "flat plate, along it", _MAXWELL),
    ]
    if area is None:
        return rows
    square_metres = as_array(area, "m2", "area", lower=0.0)
    force = np.hypot(normal.value, tangential.value) * square_metres
    rows += [echo("area", area, "m2"), Answer("force", force, "N", "pressure times area", _MAXWELL)]
    return rows + _moved(force, body_mass, mass, distance)


def _moved(force: Any, body_mass: Any, mass: Any, distance: Any) -> list[Answer]:
    if body_mass is None:
        return []
    kilograms = as_array(body_mass, "kg", "body mass", lower=0.0, exclusive=True)
    rows = [
        echo("body_mass", body_mass, "kg"),
        Answer("acceleration", force / kilograms, "m / s2", "force over mass", _MAXWELL),
    ]
    if mass is not None and distance is not None:
        ratio = light_to_gravity(force, kilograms, distance, mass=mass)
        rows.append(echo("mass", mass, "solMass"))
        rows.append(Answer("force_to_gravity", ratio, "", "force r^2 / G M m", _MAXWELL))
    return rows


def body_sums(
    irradiance: Any,
    *,
    radius: Any,
    albedo: Any = 0.0,
    body_mass: Any = None,
    mass: Any = None,
    distance: Any = None,
) -> list[Answer]:
    """Return what a beam of light does to a sphere: a planet, a spacecraft, a pebble.

    Parameters
    ----------
    irradiance : float or array_like
        W m-2.
    radius : float or array_like
        Of the sphere, m.
    albedo : float or array_like
        Part of the light that it scatters by Lambert's law.
    body_mass, mass, distance
        As for `surface_sums`.
    """
    metres_across = as_array(radius, "m", "body radius", lower=0.0, exclusive=True)
    flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
    coefficient = force_coefficient(albedo)
    section = math.pi * metres_across**2
    force = flux / C.value * section * coefficient
    warmth = ((1.0 - np.asarray(albedo)) * flux / (4.0 * SIGMA_SB.value)) ** 0.25
    return [
        echo("body_radius", radius, "m"),
        echo("albedo", albedo, ""),
        Answer("cross_section", section, "m2", "pi R^2", _MAXWELL),
        Answer("force_coefficient", coefficient, "", "1 + 4 albedo / 9, Lambert sphere", _MAXWELL),
        Answer("force", force, "N", "coefficient times F / c times pi R^2", _MAXWELL),
        Answer(
            "equilibrium_temperature",
            warmth,
            "K",
            "((1 - albedo) F / 4 sigma)^(1/4)",
            "Stefan 1879",
        ),
        *_moved(force, body_mass, mass, distance),
    ]


def wall_sums(temperature: Any, surface: Surface = ABSORBER) -> list[Answer]:
    """Return the pressure of isotropic radiation (K) on a cold wall in front of it."""
    pressure = isotropic_wall_pressure(temperature, surface).value
    return [
        *(echo(n, getattr(surface, n), "") for n in ("specular", "diffuse", "transmitted")),
        Answer("cold_wall_pressure", pressure, "Pa", "u / 6 and what is sent back", _GAS),
    ]


def _star_rows(luminosity: Any, temperature: Any, radius: Any) -> tuple[list[Answer], np.ndarray]:
    if luminosity is not None:
        _refuse(temperature=temperature)
        return [echo("luminosity", luminosity, "solLum")], watts(luminosity)
    if temperature is None or radius is None:
        raise InputError(
            "give the light as an irradiance, as luminosity and distance, as temperature, "
            "radius and distance, or as the temperature of isotropic radiation"
        )
    kelvin = as_array(temperature, "K", "temperature", lower=0.0)
    power = 4.0 * math.pi * star_radius(radius) ** 2 * SIGMA_SB.value * kelvin**4
    return [echo("temperature", temperature, "K")], power


def _disc_rows(power: np.ndarray, radius: Any, distance: Any) -> list[Answer]:
    from astropy import units as u

    field = star_field(power * u.W, radius, distance)
    return [
        echo("radius", radius, "solRad"),
        Answer(
            "disc_pressure",
            field.radial_pressure.value,
            "Pa",
            "uniform disc on a black plate",
            _DISC,
        ),
        Answer("energy_density", field.energy_density.value, "J / m3", "uniform disc", _DISC),
    ]


def _refuse(**given: Any) -> None:
    extra = [name for name, value in given.items() if value is not None]
    if extra:
        raise InputError(f"{' and '.join(extra)} would give the light twice over: leave it out")
