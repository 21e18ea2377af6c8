"""The grey atmosphere: Eddington's approximation, and the exact solution by Hopf's function."""

from __future__ import annotations

from functools import lru_cache
from typing import Literal

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.errors import InputError

__all__ = ["GreyMethod", "chandrasekhar_h", "grey_limb_darkening", "grey_temperature", "hopf"]

GreyMethod = Literal["exact", "eddington"]

#: q at infinite depth: Hopf 1934; Mihalas 1978, Stellar Atmospheres, equation 3-60.
Q_INFINITY = 0.710446090
_DEEPEST_Y = 25.0


def chandrasekhar_h(mu: np.ndarray) -> np.ndarray:
    """Return Chandrasekhar's H for isotropic scattering without loss.

    Parameters
    ----------
    mu : array_like
        Cosine of the angle to the normal, 0 to 1.

    Returns
    -------
    numpy.ndarray
        ln H = -(mu/pi) int_0^(pi/2) ln(1 - x cot x)/(cos^2 x + mu^2 sin^2 x) dx
        (Kourganoff 1952, Basic Methods in Transfer Problems, section 28).

    Raises
    ------
    InputError
        `mu` outside 0 to 1.
    """
    mu = as_array(mu, "", "mu", lower=0.0, upper=1.0)
    # x = (pi/2) t^3 takes the logarithm's end at x = 0 away; at small mu the integrand
    # peaks at pi/2 with width mu, so integrate in tan x = z/mu there.
    t, weight = np.polynomial.legendre.leggauss(200)
    t, weight = 0.5 * (t + 1.0), 0.5 * weight
    phi = 0.5 * np.pi * t**3
    step = 1.5 * np.pi * t**2 * weight
    # mu tan x = tan phi: (mu dx)/(cos^2 x + mu^2 sin^2 x) = dphi.
    x = np.arctan2(np.sin(phi), np.multiply.outer(mu, np.cos(phi)))
    return np.exp(-np.sum(step * _log_term(x), axis=-1) / np.pi)


def _log_term(x: np.ndarray) -> np.ndarray:
    # ln(1 - x cot x), by its series where the difference loses digits.
    small = x < 1e-3
    safe = np.where(small, 1.0, x)
    exact = np.log(1.0 - safe / np.tan(safe))
    with np.errstate(divide="ignore"):
        series = np.log(x**2 / 3.0 + x**4 / 45.0)
    return np.where(small, series, exact)


@lru_cache(maxsize=1)
def _hopf_kernel() -> tuple[np.ndarray, np.ndarray]:
    # u = tanh y turns the logarithm of the kernel into 2 y.
    y, weight = np.polynomial.legendre.leggauss(600)
    y, weight = 0.5 * _DEEPEST_Y * (y + 1.0), 0.5 * _DEEPEST_Y * weight
    u = np.tanh(y)
    kernel = (1.0 - u * y) ** 2 + (0.5 * np.pi * u) ** 2
    return u, weight / np.cosh(y) ** 2 / (chandrasekhar_h(u) * kernel)


def hopf(tau: np.ndarray) -> np.ndarray:
    """Return Hopf's function q(tau) of the grey atmosphere.

    Parameters
    ----------
    tau : array_like
        Optical depth, 0 or more.

    Returns
    -------
    numpy.ndarray
        q(inf) - 1/(2 sqrt 3) int_0^1 exp(-tau/u)/(H(u) Z(u)) du, with
        Z = [1 - (u/2) ln((1+u)/(1-u))]^2 + (pi u/2)^2 (Mark 1947, Phys. Rev. 72,
        558; Mihalas 1978, Stellar Atmospheres, equation 3-59).

    Raises
    ------
    InputError
        `tau` below 0.
    """
    tau = as_array(tau, "", "optical depth", lower=0.0)
    u, weight = _hopf_kernel()
    integral = np.exp(-np.multiply.outer(tau, 1.0 / u)) @ weight
    return Q_INFINITY - integral / (2.0 * np.sqrt(3.0))


def grey_temperature(tau: np.ndarray, temperature: object, method: GreyMethod = "exact") -> object:
    """Return the temperature of the grey atmosphere against optical depth.

    Parameters
    ----------
    tau : array_like
        Optical depth, 0 or more.
    temperature : astropy.units.Quantity or float
        Effective temperature in K.
    method : {"exact", "eddington"}
        Hopf's function, or 2/3 in its place (Eddington 1926).

    Returns
    -------
    astropy.units.Quantity
        Kelvins: T^4 = (3/4) T_eff^4 [tau + q(tau)].

    Raises
    ------
    InputError
        A bad value, or an unknown method.
    """
    from astropy import units as u

    effective = as_float(temperature, "K", "temperature", lower=0.0, exclusive=True)
    tau = as_array(tau, "", "optical depth", lower=0.0)
    q = hopf(tau) if _is_exact(method) else 2.0 / 3.0
    return u.Quantity(effective * (0.75 * (tau + q)) ** 0.25, "K")


def grey_limb_darkening(mu: np.ndarray, method: GreyMethod = "exact") -> np.ndarray:
    """Return I(mu)/I(1) at the surface of the grey atmosphere.

    Parameters
    ----------
    mu : array_like
        Cosine of the angle to the normal, 0 to 1.
    method : {"exact", "eddington"}
        H(mu)/H(1) (Chandrasekhar 1950, Radiative Transfer, section 26), or
        (2 + 3 mu)/5 (Eddington 1926).

    Returns
    -------
    numpy.ndarray
        Shape of `mu`.

    Raises
    ------
    InputError
        A bad value, or an unknown method.
    """
    mu = as_array(mu, "", "mu", lower=0.0, upper=1.0)
    if _is_exact(method):
        return chandrasekhar_h(mu) / chandrasekhar_h(np.asarray(1.0))
    return (2.0 + 3.0 * mu) / 5.0


def _is_exact(method: str) -> bool:
    if method not in ("exact", "eddington"):
        raise InputError(f"grey method '{method}' is unknown: give 'exact' or 'eddington'")
    return method == "exact"
