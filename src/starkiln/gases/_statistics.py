"""The functions of ideal quantum gases, on plain arrays; no astropy here.

    f_s(eta) = 1/Gamma(s) integral of x^(s-1) / (exp(x - eta) + 1)      fermions
    g_s(eta) = 1/Gamma(s) integral of x^(s-1) / (exp(x - eta) - 1)      bosons

with eta = mu / k T (Pathria & Beale 2011, Statistical Mechanics, appendices D and E:
f_s(z) and g_s(z) with z = exp(eta); -Li_s(-z) and Li_s(z) in terms of the
polylogarithm). Any real order above -1 that the gases need, to about 2e-13 or better.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import lru_cache
from itertools import pairwise

import numpy as np

from starkiln.errors import InputError

#: Above this eta the Sommerfeld series has all digits (its remainder is exp(-eta)).
SOMMERFELD_FROM = 40.0
#: Largest order that the quadratures below are laid out for.
LARGEST_ORDER = 30.0

_SERIES_BELOW = -1.0
_SERIES_TERMS = 42
_CHUNK = 4096


def fermi(order: float, eta: np.ndarray) -> np.ndarray:
    """Return f_order(eta), the Fermi-Dirac function.

    Parameters
    ----------
    order : float
        Above -1, at most 30; f_(s-1) is the derivative of f_s.
    eta : array_like
        Any real number; -inf gives 0.

    Returns
    -------
    numpy.ndarray
        Shape of `eta`.
    """
    shape = np.shape(eta)
    eta = _checked(order, eta)
    result = np.empty_like(eta)
    dilute, dense = eta < _SERIES_BELOW, eta > SOMMERFELD_FROM
    between = ~(dilute | dense)
    result[dilute] = _power_series(order, eta[dilute], -1.0)
    result[between] = _fermi_quadrature(order, eta[between])
    result[dense] = _sommerfeld(order, eta[dense])
    return result.reshape(shape)[()]


def bose(order: float, eta: np.ndarray) -> np.ndarray:
    """Return g_order(eta), the Bose-Einstein function.

    Parameters
    ----------
    order : float
        Above -1, at most 30.
    eta : array_like
        At most 0. At 0 it is the Riemann zeta function, infinite for orders up to 1.

    Returns
    -------
    numpy.ndarray
        Shape of `eta`.
    """
    shape = np.shape(eta)
    eta = _checked(order, eta)
    if np.any(eta > 0.0):
        raise InputError(
            f"eta = mu / k T = {float(np.max(eta)):.6g} of a boson gas is above 0: "
            "the chemical potential of bosons is at most 0"
        )
    result = np.empty_like(eta)
    dilute, critical = eta < _SERIES_BELOW, eta == 0.0
    between = ~(dilute | critical)
    result[dilute] = _power_series(order, eta[dilute], 1.0)
    result[between] = _bose_quadrature(order, eta[between])
    result[critical] = zeta(order) if order > 1.0 else math.inf
    return result.reshape(shape)[()]


def zeta(order: float) -> float:
    """Return the Riemann zeta function for an order above 1."""
    from scipy.special import zeta as riemann

    return float(riemann(order))


def fermi_entropy(order: float, eta: np.ndarray) -> np.ndarray:
    """Return (order + 1) f_(order+1) - eta f_order, the entropy of fermions over k Z.

    In a dense gas the two terms cancel, so it is integrated itself: the entropy of a
    state of occupation n, -n ln n - (1 - n) ln(1 - n), over the density of states. Its
    derivative by eta is the same function of order - 1.
    """
    shape = np.shape(eta)
    eta = _checked(order, eta)
    result = np.empty_like(eta)
    dilute, dense = eta < _SERIES_BELOW, eta > SOMMERFELD_FROM
    between = ~(dilute | dense)
    few = np.maximum(eta[dilute], -1e4)  # below, both terms are 0
    result[dilute] = (order + 1.0) * fermi(order + 1.0, few) - few * fermi(order, few)
    result[between] = _fermi_quadrature(order, eta[between], entropy=True)
    result[dense] = _sommerfeld(order + 1.0, eta[dense], entropy=True)
    return result.reshape(shape)[()]


def _checked(order: float, eta: np.ndarray) -> np.ndarray:
    if not -1.0 < order <= LARGEST_ORDER + 1.0:
        raise InputError(
            f"order {order:g} of a quantum-gas function is out of bounds: give one above -1 "
            f"and at most {LARGEST_ORDER:g}"
        )
    return np.atleast_1d(np.asarray(eta, dtype=float))


def _power_series(order: float, eta: np.ndarray, sign: float) -> np.ndarray:
    total = np.zeros_like(eta)
    for n in range(_SERIES_TERMS, 0, -1):
        total = total + sign ** (n + 1) * np.exp(n * eta) * float(n) ** -order
    return total


def _sommerfeld(order: float, eta: np.ndarray, *, entropy: bool = False) -> np.ndarray:
    """Sum 2 eta_D(2k) eta^(order - 2k) / Gamma(order + 1 - 2k), eta_D Dirichlet's function.

    Sommerfeld 1928, Z. Phys. 47, 1. With `entropy` each term is multiplied by 2k.
    """
    from scipy.special import rgamma

    total = np.zeros_like(eta)
    for k in range(20, -1, -1):
        dirichlet = 0.5 if k == 0 else (1.0 - 2.0 ** (1 - 2 * k)) * zeta(2.0 * k)
        coefficient = 2.0 * dirichlet * float(rgamma(order + 1.0 - 2 * k))
        total = total + (2 * k if entropy else 1) * coefficient * eta ** (-2.0 * k)
    return total * eta**order


def _fermi_quadrature(order: float, eta: np.ndarray, *, entropy: bool = False) -> np.ndarray:
    """Gauss-Jacobi up to the Fermi edge, where x^(s-1) is the weight, Gauss-Legendre beyond.

    The poles x = eta + i pi (2 k + 1) stand beside an end point, where Gaussian nodes
    are dense. An order below 1 is the derivative of the order above it: that weight's
    nodes are more exact than those of a singular one.
    """
    from scipy.special import rgamma

    # The derivative of the entropy changes sign: there the singular weight is better.
    derivative = order <= 0.0 if entropy else order < 1.0
    s = order + 1.0 if derivative else order
    kernel = _KERNELS[entropy, derivative]
    edge = np.maximum(eta, 4.0)
    nodes, weights = _jacobi(s)
    total = np.zeros_like(eta)
    for node, weight in zip(nodes, weights, strict=True):
        total = total + weight * kernel(edge * node - eta)
    total = total * edge**s
    nodes, weights = _tail(s)
    for node, weight in zip(nodes, weights, strict=True):
        x = edge + node
        total = total + weight * x ** (s - 1.0) * kernel(x - eta)
    return total * float(rgamma(s))


#: (entropy, derivative by eta) -> the integrand beside x^(s-1), of y = x - eta.
_KERNELS: dict[tuple[bool, bool], Callable[[np.ndarray], np.ndarray]] = {
    (False, False): lambda y: 1.0 / (np.exp(y) + 1.0),
    (False, True): lambda y: 0.25 / np.cosh(0.5 * y) ** 2,
    (True, False): lambda y: np.log1p(np.exp(-np.abs(y))) + np.abs(y) / (np.exp(np.abs(y)) + 1.0),
    (True, True): lambda y: 0.25 * y / np.cosh(0.5 * y) ** 2,
}


@lru_cache(maxsize=64)
def _jacobi(s: float) -> tuple[np.ndarray, np.ndarray]:
    """Nodes and weights for the integral of x^(s-1) h(x) from 0 to 1."""
    from scipy.special import roots_jacobi

    nodes, weights = roots_jacobi(48, 0.0, s - 1.0)
    return 0.5 * (1.0 + nodes), weights * 0.5**s


@lru_cache(maxsize=64)
def _tail(s: float) -> tuple[np.ndarray, np.ndarray]:
    """Nodes and weights beyond the edge, out to where exp(-y) has ended every order."""
    nodes, weights = np.polynomial.legendre.leggauss(24)
    edges = (0.0, 2.0, 6.0, 14.0, 30.0, 50.0 + 4.0 * s)
    pairs = list(pairwise(edges))
    return (
        np.concatenate([a + 0.5 * (b - a) * (1.0 + nodes) for a, b in pairs]),
        np.concatenate([0.5 * (b - a) * weights for a, b in pairs]),
    )


def _bose_quadrature(order: float, eta: np.ndarray) -> np.ndarray:
    """Trapezoidal rule in t = ln x, which converges as exp(-2 pi d / h).

    The nearest poles, x = eta and eta +- 2 pi i, lie at least d = pi/2 away in t
    however small -eta is; h = 0.2 leaves 1e-21. A large order makes a peak of width
    1/sqrt(s) in t, which h resolves too. A small order, whose integrand reaches far
    to the left, is taken as the derivative of the order above it.
    """
    from scipy.special import rgamma

    derivative = order < 1.0
    s = order + 1.0 if derivative else order
    step = min(0.2, 0.6 / math.sqrt(s))
    result = np.empty_like(eta)
    for start in range(0, eta.size, _CHUNK):
        part = eta[start : start + _CHUNK]
        first = math.log(float(np.min(-part))) - 38.0 / s
        total = np.zeros_like(part)
        for t in np.arange(first, math.log(50.0 + 4.0 * s), step):
            x = math.exp(t)
            y = x - part
            occupation = 0.25 / np.sinh(0.5 * y) ** 2 if derivative else 1.0 / np.expm1(y)
            total = total + math.exp(s * t) * occupation
        result[start : start + _CHUNK] = step * total
    return result * float(rgamma(s))
