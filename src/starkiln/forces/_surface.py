"""Pressure of light on surfaces: absorbing, reflecting, scattering, re-emitting, at an angle."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.constants import A_RAD, C
from starkiln.errors import InputError
from starkiln.forces._inputs import angle_cosine, give, speed_ratio


@dataclass(frozen=True)
class Surface:
    """Optical coefficients of a flat surface; what is left over is absorbed.

    Parameters
    ----------
    specular, diffuse, transmitted : float
        Fractions of the light reflected as by a mirror, scattered back, and let
        through; each at least 0, their sum at most 1.
    scattering_moment : float
        Mean cosine of the scattered light, B_f: 2/3 for Lambert's law.
    re_emission : float
        Net recoil of re-emitted heat over absorbed momentum, from -1 to 1:
        (e_f B_f - e_b B_b) / (e_f + e_b) with the emissivities and mean cosines of
        front and back; 2/3 for a hot front with a cold back, 0 for equal faces.

    Notes
    -----
    The flat-plate model of McInnes 1999, Solar Sailing, section 2.6.
    """

    specular: float = 0.0
    diffuse: float = 0.0
    transmitted: float = 0.0
    scattering_moment: float = 2.0 / 3.0
    re_emission: float = 0.0

    def __post_init__(self) -> None:
        for name in ("specular", "diffuse", "transmitted", "scattering_moment"):
            as_float(getattr(self, name), "", name, lower=0.0, upper=1.0)
        as_float(self.re_emission, "", "re_emission", lower=-1.0, upper=1.0)
        if self.absorbed < -1e-12:
            raise InputError(
                f"specular + diffuse + transmitted = {1.0 - self.absorbed:.6g} is out of bounds: "
                "fractions of the light add up to at most 1"
            )

    @property
    def absorbed(self) -> float:
        """Fraction absorbed."""
        return 1.0 - self.specular - self.diffuse - self.transmitted

    def coefficients(self, cosine: Any, sine: Any) -> tuple[np.ndarray, np.ndarray]:
        """Return normal and tangential pressure over F / c, F normal to the beam."""
        taken = 1.0 - self.transmitted
        recoil = self.scattering_moment * self.diffuse + self.re_emission * self.absorbed
        normal = cosine * ((taken + self.specular) * cosine + recoil)
        return np.asarray(normal), np.asarray((taken - self.specular) * cosine * sine)


#: A black plate without recoil of its heat, and a perfect mirror.
ABSORBER = Surface()
MIRROR = Surface(specular=1.0)


def surface_pressure(
    irradiance: Any, surface: Surface = ABSORBER, *, angle: Any = 0.0, velocity: Any = 0.0
) -> tuple[Any, Any]:
    """Return the pressure of a beam of light on a flat surface.

    Parameters
    ----------
    irradiance : Quantity or array_like
        Flux through a plane normal to the beam, W m-2 when bare; at least 0.
    surface : Surface
        Optical coefficients.
    angle : Quantity or array_like
        Between the beam and the surface's normal, degrees when bare, 0 to 90.
    velocity : Quantity or array_like
        Of the surface away from the source along the beam, km/s when bare; to first
        order the pressure falls by 1 - 2 v / c.

    Returns
    -------
    normal, tangential : Quantity
        Pa; the normal one pushes into the surface, the tangential one along it, away
        from the source. Head on F / c for a black plate and 2 F / c for a mirror.
    """
    flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
    normal, tangential = surface.coefficients(*angle_cosine(angle))
    momentum = flux / C.value * (1.0 - 2.0 * speed_ratio(velocity))
    return give(momentum * normal, "Pa"), give(momentum * tangential, "Pa")


def isotropic_pressure(temperature: Any, *, dilution: Any = 1.0) -> Any:
    """Return the pressure a T^4 / 3 of isotropic radiation, in Pa.

    Inside a star or a cavity, on a wall that gives back what it gets: a mirror, a
    Lambert reflector, or a black wall at the same temperature. `dilution` multiplies
    the energy density.
    """
    kelvin = as_array(temperature, "K", "temperature", lower=0.0)
    weight = as_array(dilution, "", "dilution", lower=0.0)
    return give(weight * A_RAD.value * kelvin**4 / 3.0, "Pa")


def isotropic_wall_pressure(temperature: Any, surface: Surface = ABSORBER) -> Any:
    """Return the pressure of isotropic radiation from one side on a cold wall, in Pa.

    u / 6 from what arrives and as much again from a mirror's reflection: the mean of
    `surface_pressure` over the hemisphere, without thermal emission of the wall's own
    but with the recoil of absorbed heat that `surface` prescribes.
    """
    kelvin = as_array(temperature, "K", "temperature", lower=0.0)
    recoil = surface.scattering_moment * surface.diffuse + surface.re_emission * surface.absorbed
    # Means of cos^2 and cos over a hemisphere's 2 pi of its 4 pi: 1/6 and 1/4.
    share = (1.0 - surface.transmitted + surface.specular) / 6.0 + recoil / 4.0
    return give(share * A_RAD.value * kelvin**4, "Pa")
