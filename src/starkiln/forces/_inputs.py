"""How the functions of this room read stars and their surroundings.

Bare numbers: luminosity in solLum, mass in solMass, stellar radius in solRad,
distance in au. SI floats inside; a mass is turned into G M with the nominal solar
value, which is known a million times better than G.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import AU, GM_SUN, L_SUN, R_SUN, C
from starkiln.errors import InputError

#: First-order formulas in v/c are refused above this speed ratio (errors of order 1e-2).
LARGEST_BETA = 0.1


def watts(luminosity: Any) -> np.ndarray:
    """Return a luminosity, bare in nominal solar luminosities, in W."""
    return as_array(luminosity, "solLum", "luminosity", lower=0.0) * L_SUN.value


def gm(mass: Any) -> np.ndarray:
    """Return G M in m3 s-2 of a mass, bare in solar masses."""
    return as_array(mass, "solMass", "mass", lower=0.0, exclusive=True) * GM_SUN.value


def star_radius(radius: Any) -> np.ndarray:
    """Return a stellar radius, bare in nominal solar radii, in m."""
    return as_array(radius, "solRad", "radius", lower=0.0, exclusive=True) * R_SUN.value


def metres(distance: Any, name: str = "distance") -> np.ndarray:
    """Return a distance from the star's centre, bare in au, in m."""
    return as_array(distance, "au", name, lower=0.0, exclusive=True) * AU.value


def angle_cosine(angle: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return cosine and sine of an angle of incidence, bare in degrees, 0 to 90."""
    radians = np.radians(as_array(angle, "deg", "angle", lower=0.0, upper=90.0))
    return np.cos(radians), np.sin(radians)


def speed_ratio(velocity: Any, name: str = "velocity") -> np.ndarray:
    """Return v/c, bare v in km/s, refused where a first-order formula would not hold."""
    ratio = as_array(velocity, "km / s", name) * (1e3 / C.value)
    if np.any(np.abs(ratio) > LARGEST_BETA):
        worst = float(np.max(np.abs(ratio)))
        raise InputError(
            f"{name} = {worst:.3g} c is out of bounds: the formula is of first order in v/c; "
            f"give at most {LARGEST_BETA:g} c"
        )
    return ratio


def irradiance_at(luminosity: Any, distance: Any) -> np.ndarray:
    """Return L / 4 pi r^2 in W m-2."""
    return watts(luminosity) / (4.0 * math.pi * metres(distance) ** 2)


def give(value: Any, unit: str) -> Any:
    """Return `value` in `unit` as a Quantity."""
    from astropy import units as u

    return u.Quantity(np.asarray(value), unit)
