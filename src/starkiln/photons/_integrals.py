"""Integrals of Planck's law over a band, on plain arrays; no astropy here.

The integral of t^m / (exp(t) - 1), m = 3 for energy and 2 for photons, by its two
series (Chang & Rhee 1984, Int. Commun. Heat Mass Transfer 11, 451, for large t;
Bernoulli numbers, Abramowitz & Stegun 1964, 27.1.1, for small) and by Gauss-Legendre
quadrature where a narrow band would lose digits in a difference.
"""

from __future__ import annotations

import math

import numpy as np

#: Apery's constant, zeta(3).
ZETA_3 = 1.2020569031595942
#: Integral from 0 to infinity, by the power m.
TOTAL = {3: math.pi**4 / 15.0, 2: 2.0 * ZETA_3}

_SPLIT = 2.0
_TERMS = 22
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
#: B_2k / (2k)! for k = 1, 2, ...; from the fourth on 2 (-1)^(k+1) zeta(2k) / (2 pi)^2k.
_BERNOULLI = (
    1.0 / 12.0,
    -1.0 / 720.0,
    1.0 / 30240.0,
    *(
        -2.0 * (-1.0) ** k * sum(j ** (-2.0 * k) for j in range(1, 80)) / (2.0 * math.pi) ** (2 * k)
        for k in range(4, 20)
    ),
)


def band_integral(lower: np.ndarray, width: np.ndarray, power: int) -> np.ndarray:
    """Integrate t^power / (exp(t) - 1) from `lower` to `lower + width`.

    Parameters
    ----------
    lower, width : numpy.ndarray
        Of one shape, at least 0; either may be infinite. The width is taken apart
        from the bounds, since their difference would lose the digits of a narrow band.
    power : {3, 2}
        3 for energy, 2 for photons.

    Returns
    -------
    numpy.ndarray
        Relative accuracy about 1e-14, of small values too.
    """
    upper = lower + width
    result = np.empty(np.shape(lower))
    narrow = width < 1.0
    low = ~narrow & (upper <= _SPLIT)
    high = ~narrow & (lower >= _SPLIT)
    both = ~(narrow | low | high)
    result[narrow] = _quadrature(lower[narrow], width[narrow], power)
    result[low] = _from_zero(upper[low], power) - _from_zero(lower[low], power)
    result[high] = _to_infinity(lower[high], power) - _to_infinity(upper[high], power)
    result[both] = TOTAL[power] - _from_zero(lower[both], power) - _to_infinity(upper[both], power)
    return result


def _from_zero(x: np.ndarray, power: int) -> np.ndarray:
    """Integrate from 0 to x <= 2 by the Bernoulli series (radius 2 pi)."""
    total = 1.0 / power - x / (2.0 * (power + 1))
    square = x * x
    factor = np.ones_like(x)
    for k, coefficient in enumerate(_BERNOULLI, start=1):
        factor = factor * square
        total = total + coefficient * factor / (2 * k + power)
    return x**power * total


def _to_infinity(x: np.ndarray, power: int) -> np.ndarray:
    """Integrate from x >= 2 to infinity: a sum of exp(-n x) times polynomials."""
    total = np.zeros_like(x)
    finite = np.minimum(x, 1e4)
    for n in range(_TERMS, 0, -1):
        inverse = 1.0 / n
        polynomial = np.ones_like(finite)
        for k in range(1, power + 1):
            # Horner form of sum_j power! / (power - j)! x^(power - j) / n^(j + 1).
            polynomial = finite**k + k * inverse * polynomial
        total = total + np.exp(-n * finite) * inverse * polynomial
    return total


def _quadrature(lower: np.ndarray, width: np.ndarray, power: int) -> np.ndarray:
    total = np.zeros_like(lower)
    with np.errstate(over="ignore", invalid="ignore"):
        for node, weight in zip(_NODES, _WEIGHTS, strict=True):
            t = lower + 0.5 * (1.0 + node) * width
            integrand = t**power / np.expm1(t)
            total = total + 0.5 * weight * width * np.where(t > 0.0, integrand, 0.0)
    return np.where(np.isinf(lower), 0.0, total)
