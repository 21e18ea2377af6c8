"""Eddington's standard model: a polytrope of index 3 with a constant share of light."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import A_RAD, K_B, M_SUN, M_U, G
from starkiln.interiors._polytropes import Polytrope, PolytropeProfile

#: ln q stays finite for every mass that a float can hold.
_MAX_NEWTON = 60


@dataclass(frozen=True)
class StandardProfile(PolytropeProfile):
    """A standard model of given mass and radius; adds the temperature in K."""

    temperature: Any


@lru_cache(maxsize=1)
def mass_scale() -> float:
    """Return C of M mu^2 = C sqrt(1 - beta)/beta^2, in solar masses (18.287).

    Eddington 1926, The Internal Constitution of the Stars, section 84, with mu in
    units of the atomic mass constant. C = 4 pi omega_3 (pi G)^(-3/2)
    (3/a)^(1/2) (k/m_u)^2.
    """
    return _scale(4.0 * math.pi * Polytrope(3.0).omega * math.pi**-1.5)


def limit_scale() -> float:
    """Return C* = (6/pi)^(1/2) (3/a)^(1/2) (k/m_u)^2 G^(-3/2) in solar masses (5.549)."""
    return _scale(math.sqrt(6.0 / math.pi))


def standard_model(mass: Any, mu: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return 1 - beta (light's share of the pressure) and beta (the gas's share).

    Parameters
    ----------
    mass : astropy.units.Quantity or array_like
        Bare numbers in solMass; any size above 0.
    mu : array_like
        Mean particle weight in units of the atomic mass constant; broadcast.

    Returns
    -------
    tuple of numpy.ndarray
        Both with full relative precision, however small either is.

    Notes
    -----
    1 - beta = (M mu^2/C)^2 beta^4 (Eddington 1926, section 84), `mass_scale`.
    """
    return _solve(*_checked(mass, mu), mass_scale())


def central_light_limit(mass: Any, mu: Any) -> np.ndarray:
    """Return the largest 1 - beta that the centre of a star of this mass can have.

    Chandrasekhar 1939, An Introduction to the Study of Stellar Structure, III
    eq. 32: in a star whose mean density nowhere rises outward, 1 - beta_c <=
    1 - beta*, with M mu^2 = C* sqrt(1 - beta*)/beta*^2. Arguments as
    `standard_model`.
    """
    return _solve(*_checked(mass, mu), limit_scale())[0]


def standard_mass(radiation_fraction: Any, mu: Any) -> Any:
    """Return the mass of the standard model whose light carries this share of pressure.

    Parameters
    ----------
    radiation_fraction : array_like
        1 - beta, strictly between 0 and 1.
    mu : array_like
        Mean particle weight; broadcast.

    Returns
    -------
    astropy.units.Quantity
        solMass.
    """
    from astropy import units as u

    y = as_array(radiation_fraction, "", "radiation_fraction", lower=0.0, upper=1.0, exclusive=True)
    weight = as_array(mu, "", "mu", lower=0.0, exclusive=True)
    return u.Quantity(mass_scale() * np.sqrt(y) / (1.0 - y) ** 2 / weight**2, "solMass")


def standard_profile(mass: Any, radius: Any, mu: float, points: int = 200) -> StandardProfile:
    """Return radius, mass, density, pressure and temperature of one standard model.

    Parameters
    ----------
    mass, radius : astropy.units.Quantity or float
        Bare numbers in solMass and solRad.
    mu : float
        Mean particle weight.
    points : int
        How many, at least 10.
    """
    from astropy import units as u

    plain = Polytrope(3.0).profile(mass, radius, points)
    light, _ = standard_model(mass, mu)
    temperature = (3.0 * light * plain.pressure.to_value("Pa") / A_RAD.value) ** 0.25
    return StandardProfile(
        plain.radius,
        plain.mass,
        plain.density,
        plain.pressure,
        plain.theta,
        u.Quantity(temperature, "K"),
    )


def _scale(number: float) -> float:
    gas = (K_B.value / M_U.value) ** 2 * math.sqrt(3.0 / A_RAD.value)
    return number * gas / G.value**1.5 / M_SUN.value


def _checked(mass: Any, mu: Any) -> tuple[np.ndarray, np.ndarray]:
    mass_sun = as_array(mass, "solMass", "mass", lower=0.0, upper=math.inf, exclusive=True)
    weight = as_array(mu, "", "mu", lower=0.0, upper=math.inf, exclusive=True)
    return mass_sun, weight


def _solve(mass: np.ndarray, mu: np.ndarray, scale: float) -> tuple[np.ndarray, np.ndarray]:
    """Solve y/(1 - y)^4 = q for y and 1 - y.

    With z = ln(y/(1 - y)) the equation is z + 3 ln(1 + e^z) = ln q: rising and
    convex, so Newton's method started on the right cannot fail. The last step,
    in the smaller of y and 1 - y themselves, restores what the logarithm costs.
    """
    ratio = np.asarray(mass * mu**2 / scale, dtype=float)
    log_q = 2.0 * np.log(ratio)
    z = np.where(log_q > 0.0, log_q / 4.0, log_q) + 0.1
    for _ in range(_MAX_NEWTON):
        slope = 1.0 + 3.0 / (1.0 + np.exp(-z))
        step = (z + 3.0 * np.logaddexp(0.0, z) - log_q) / slope
        z = z - step
        if np.all(np.abs(step) < 1e-14 * (1.0 + np.abs(z))):
            break
    y, beta = 1.0 / (1.0 + np.exp(-z)), 1.0 / (1.0 + np.exp(z))
    q = ratio**2
    small = y < 0.5
    y_polished = y - (y - q * (1.0 - y) ** 4) / (1.0 + 4.0 * q * (1.0 - y) ** 3)
    beta_polished = beta - (q * beta**4 + beta - 1.0) / (4.0 * q * beta**3 + 1.0)
    y = np.where(small, y_polished, 1.0 - beta_polished)
    return y, np.where(small, 1.0 - y, beta_polished)
