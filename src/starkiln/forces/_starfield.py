"""The radiation field near a star of finite size, with limb darkening."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C
from starkiln.errors import InputError
from starkiln.forces._inputs import angle_cosine, give, metres, star_radius, watts

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(96)
_NODES, _WEIGHTS = 0.5 * (1.0 + _NODES), 0.5 * _WEIGHTS


@dataclass(frozen=True, eq=False)
class StarField:
    """Moments of a star's radiation at a distance from its centre.

    Attributes
    ----------
    flux : Quantity
        L / 4 pi r^2, W m-2.
    energy_density : Quantity
        J m-3; more than flux / c, since the light comes from a cone.
    radial_pressure, transverse_pressure : Quantity
        Pa: the components of the pressure tensor along the line to the star and
        across it; their sum, the second twice, is the energy density.
    angular_radius : Quantity
        Of the star's disc, deg.
    """

    flux: Any
    energy_density: Any
    radial_pressure: Any
    transverse_pressure: Any
    angular_radius: Any

    def plate_pressure(self, angle: Any = 0.0) -> tuple[Any, Any]:
        """Return the normal and tangential pressure on a black plate, in Pa.

        A mirror feels twice the normal part and nothing along it. `angle` between the
        plate's normal and the star's centre, degrees when bare; an angle at which the
        plate's plane cuts the star's disc is refused.
        """
        cosine, sine = angle_cosine(angle)
        if np.any(cosine < np.sin(self.angular_radius.to_value("rad")) - 1e-12):
            raise InputError(
                "the plate's plane cuts the star's disc: give an angle of at most "
                "90 degrees less the star's angular radius"
            )
        normal = self.radial_pressure * cosine**2 + self.transverse_pressure * sine**2
        along = (self.radial_pressure - self.transverse_pressure) * cosine * sine
        return normal, along


def star_field(
    luminosity: Any, radius: Any, distance: Any, *, limb_darkening: Sequence[float] = ()
) -> StarField:
    """Return the radiation field of a spherical star.

    Parameters
    ----------
    luminosity, radius, distance : Quantity or array_like
        solLum, solRad and au when bare; the distance from the centre is at least the
        radius. They broadcast.
    limb_darkening : sequence of float
        u_1, u_2, ...: I(mu) = I(1) [1 - sum of u_k (1 - mu)^k]; one coefficient is the
        linear law, two the quadratic. None is a uniform disc.

    Returns
    -------
    StarField

    Notes
    -----
    For a uniform disc the radial pressure is (2/3)(r/R)^2 {1 - [1 - (R/r)^2]^(3/2)}
    times F / c (McInnes & Brown 1990, Celest. Mech. Dyn. Astron. 49, 249): 2/3 at the
    surface, 1 far away.
    """
    power = watts(luminosity)
    size, far = star_radius(radius), metres(distance)
    ratio = size / far
    if np.any(ratio > 1.0 + 1e-12):
        raise InputError(
            f"distance / radius = {1.0 / float(np.max(ratio)):.6g} is out of bounds: "
            "the distance is from the star's centre and at least its radius"
        )
    flux = np.asarray(power / (4.0 * math.pi * far**2))
    over_flux = _moments(np.minimum(ratio, 1.0), _profile(limb_darkening))
    energy, radial = (np.asarray(m) * flux / C.value for m in over_flux)
    return StarField(
        give(flux, "W / m2"),
        give(energy, "J / m3"),
        give(radial, "Pa"),
        give(0.5 * (energy - radial), "Pa"),
        give(np.degrees(np.arcsin(np.minimum(ratio, 1.0))), "deg"),
    )


def _profile(coefficients: Sequence[float]) -> np.ndarray:
    """Return the limb-darkening law as a polynomial in mu, lowest power first."""
    values = as_array(list(coefficients), "", "limb-darkening coefficient")
    law = np.polynomial.Polynomial([1.0])
    for k, coefficient in enumerate(values, start=1):
        law = law - coefficient * np.polynomial.Polynomial([1.0, -1.0]) ** k
    mu = np.linspace(0.0, 1.0, 201)
    if np.any(law(mu) < -1e-12):
        raise InputError(
            "the limb-darkening coefficients make the intensity negative at "
            f"mu = {mu[int(np.argmin(law(mu)))]:.3g}: give a law that stays above 0"
        )
    return np.asarray(law.coef)


def _moments(ratio: np.ndarray, law: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return c u / F and c P_rr / F for R/r = `ratio`.

    Integrals over mu of I mu / cos(theta) and I mu cos(theta), with
    cos(theta)^2 = c^2 + (ratio mu)^2, c^2 = 1 - ratio^2. With ratio mu = c sinh(y) the
    integrand is entire, so that Gauss-Legendre converges from the surface to infinity.
    """
    cosine_limb = np.sqrt((1.0 - ratio) * (1.0 + ratio))
    # At the surface itself the limit of the two integrals is that for a tiny c.
    c = np.maximum(cosine_limb, 1e-9)
    top = np.arcsinh(ratio / c)
    energy = np.zeros_like(ratio)
    radial = np.zeros_like(ratio)
    flux = float(np.sum(law / (np.arange(law.size) + 2.0)))
    for node, weight in zip(_NODES, _WEIGHTS, strict=True):
        y = node * top
        mu = c * np.sinh(y) / ratio
        cosine = c * np.cosh(y)
        step = weight * top / ratio * np.polynomial.polynomial.polyval(mu, law) * mu
        energy = energy + step
        radial = radial + step * cosine**2
    return energy / flux, radial / flux
