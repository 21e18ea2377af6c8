"""Polytropes: spheres in hydrostatic balance with P = K rho^(1 + 1/n)."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_float
from starkiln.constants import M_SUN, R_SUN, G
from starkiln.errors import InputError
from starkiln.interiors import _lane_emden


@dataclass(frozen=True)
class PolytropeProfile:
    """A polytrope of given mass and radius, from the centre to the surface.

    Attributes
    ----------
    radius, mass, density, pressure : astropy.units.Quantity
        One value per point: solRad, solMass, kg m-3, Pa.
    theta : numpy.ndarray
        The Lane-Emden function, (rho/rho_c)^(1/n).
    """

    radius: Any
    mass: Any
    density: Any
    pressure: Any
    theta: np.ndarray


class Polytrope:
    """A polytrope of index `n`.

    Parameters
    ----------
    n : float
        0 <= n < 5; at n = 5 the radius is infinite.

    Attributes
    ----------
    n : float
        The index.
    xi_1 : float
        First zero of the Lane-Emden function.
    omega : float
        -xi^2 dtheta/dxi at the surface: the dimensionless mass.
    density_ratio : float
        Central over mean density, xi_1^3/(3 omega).
    radius_coefficient : float
        N of K = N G M^((n-1)/n) R^((3-n)/n); NaN at n = 0, where K has no meaning.
    pressure_coefficient : float
        W of P_c = W G M^2/R^4.

    Notes
    -----
    Chandrasekhar 1939, An Introduction to the Study of Stellar Structure, IV,
    eqs. 63-94. Relative error below 1e-11 for n <= 4.9.

    Raises
    ------
    InputError
        n out of bounds.
    """

    def __init__(self, n: float) -> None:
        self.n = as_float(n, "", "polytropic index n", lower=0.0)
        if self.n >= 5.0:
            raise InputError(
                f"polytropic index n = {self.n:g} is out of bounds: give 0 <= n < 5 "
                f"(from n = 5 on a polytrope has no surface)"
            )
        self._solution = _lane_emden.solve(self.n)
        self.xi_1 = self._solution.surface_xi
        self.omega = self._solution.surface_mass

    def __repr__(self) -> str:
        return f"Polytrope(n={self.n:g})"

    @property
    def density_ratio(self) -> float:
        """Central over mean density."""
        return self.xi_1**3 / (3.0 * self.omega)

    @property
    def radius_coefficient(self) -> float:
        """N of K = N G M^((n-1)/n) R^((3-n)/n)."""
        n = self.n
        if n == 0.0:
            return math.nan
        scale = (4.0 * math.pi) ** (1.0 / n) / (n + 1.0)
        return scale * self.omega ** ((1.0 - n) / n) * self.xi_1 ** ((n - 3.0) / n)

    @property
    def pressure_coefficient(self) -> float:
        """W of P_c = W G M^2/R^4."""
        slope = self.omega / self.xi_1**2
        return 1.0 / (4.0 * math.pi * (self.n + 1.0) * slope**2)

    def gravitational_energy(self, mass: Any, radius: Any) -> Any:
        """Return -3/(5 - n) G M^2/R in joules (Betti; Ritter 1880).

        Parameters
        ----------
        mass, radius : astropy.units.Quantity or float
            Bare numbers in solMass and solRad.
        """
        from astropy import units as u

        mass_kg, radius_m = _star(mass, radius)
        return u.Quantity(-3.0 / (5.0 - self.n) * G.value * mass_kg**2 / radius_m, "J")

    def profile(self, mass: Any, radius: Any, points: int = 200) -> PolytropeProfile:
        """Return the run of radius, mass, density and pressure.

        Parameters
        ----------
        mass, radius : astropy.units.Quantity or float
            Bare numbers in solMass and solRad.
        points : int
            How many, at least 10.
        """
        from astropy import units as u

        if points < 10:
            raise InputError(f"points = {points} is out of bounds: give at least 10")
        mass_kg, radius_m = _star(mass, radius)
        xi, theta, omega = _lane_emden.profile(self._solution, points)
        mean = 3.0 * mass_kg / (4.0 * math.pi * radius_m**3)
        density = self.density_ratio * mean * theta**self.n
        pressure = self.pressure_coefficient * G.value * mass_kg**2 / radius_m**4
        return PolytropeProfile(
            radius=u.Quantity(xi / self.xi_1 * radius_m / R_SUN.value, "solRad"),
            mass=u.Quantity(omega / self.omega * mass_kg / M_SUN.value, "solMass"),
            density=u.Quantity(density, "kg m-3"),
            pressure=u.Quantity(pressure * theta ** (self.n + 1.0), "Pa"),
            theta=theta,
        )


def _star(mass: Any, radius: Any) -> tuple[float, float]:
    mass_sun = as_float(mass, "solMass", "mass", lower=0.0, exclusive=True)
    radius_sun = as_float(radius, "solRad", "radius", lower=0.0, exclusive=True)
    return mass_sun * M_SUN.value, radius_sun * R_SUN.value
