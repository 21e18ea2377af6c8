"""A spacecraft or planet in starlight: force, its ratio to gravity, temperature."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import SIGMA_SB, C
from starkiln.forces._inputs import give, gm, irradiance_at, metres


def irradiance(luminosity: Any, distance: Any) -> Any:
    """Return L / 4 pi r^2 in W m-2; solLum and au when bare."""
    return give(irradiance_at(luminosity, distance), "W / m2")


def force_coefficient(albedo: Any = 0.0, *, hot_side_emits: bool = False) -> np.ndarray:
    """Return the force on a sphere over F / c times its cross-section.

    Parameters
    ----------
    albedo : float or array_like
        Part of the light that its surface scatters by Lambert's law, 0 to 1.
    hot_side_emits : bool
        Whether absorbed heat leaves at once where it came in, rather than evenly from
        the whole sphere.

    Returns
    -------
    numpy.ndarray
        1 + 4 albedo / 9, or 1 + 4/9 if the heat leaves the lit side: the normal recoil
        2/3 cos(angle) of Lambert's law averaged over a lit hemisphere. A perfectly
        black or mirroring sphere has 1.
    """
    a = as_array(albedo, "", "albedo", lower=0.0, upper=1.0)
    return np.asarray(1.0 + 4.0 / 9.0 * (np.ones_like(a) if hot_side_emits else a))


def light_force(area: Any, distance: Any, *, luminosity: Any = 1.0, coefficient: Any = 1.0) -> Any:
    """Return the force of starlight on a body, in N.

    Parameters
    ----------
    area : Quantity or array_like
        Cross-section, m2 when bare.
    distance, luminosity : Quantity or array_like
        au and solLum when bare.
    coefficient : float or array_like
        Force over F / c times area: 1 for a black body, 2 for a mirror head on,
        `force_coefficient` for a sphere.
    """
    square_metres = as_array(area, "m2", "area", lower=0.0)
    factor = as_array(coefficient, "", "coefficient", lower=0.0)
    return give(irradiance_at(luminosity, distance) / C.value * square_metres * factor, "N")


def light_to_gravity(force: Any, body_mass: Any, distance: Any, *, mass: Any = 1.0) -> np.ndarray:
    """Return a force (N) on a body (kg) over the star's gravity; au and solMass when bare."""
    newtons = as_array(force, "N", "force")
    kilograms = as_array(body_mass, "kg", "body mass", lower=0.0, exclusive=True)
    return np.asarray(newtons * metres(distance) ** 2 / (gm(mass) * kilograms))


def equilibrium_temperature(
    distance: Any,
    *,
    luminosity: Any = 1.0,
    albedo: Any = 0.0,
    emissivity: Any = 1.0,
    area_ratio: Any = 4.0,
) -> Any:
    """Return the temperature at which a body emits what it absorbs, in K.

    Parameters
    ----------
    distance, luminosity : Quantity or array_like
        au and solLum when bare.
    albedo, emissivity : float or array_like
        Bond albedo, 0 to 1, and emissivity, above 0 to 1.
    area_ratio : float or array_like
        Emitting over absorbing area: 4 for a sphere of one temperature, 2 for a flat
        plate or a lit hemisphere, 1 for a plate with an insulated back.

    Returns
    -------
    Quantity
        [(1 - A) F / (area_ratio emissivity sigma)]^(1/4); 278.3 K at 1 au.
    """
    a = as_array(albedo, "", "albedo", lower=0.0, upper=1.0)
    e = as_array(emissivity, "", "emissivity", lower=1e-12, upper=1.0)
    ratio = as_array(area_ratio, "", "area ratio", lower=0.0, exclusive=True)
    flux = irradiance_at(luminosity, distance)
    return give(((1.0 - a) * flux / (ratio * e * SIGMA_SB.value)) ** 0.25, "K")
