"""The Lane-Emden equation for any index 0 <= n < 5."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

#: Where the central series hands over to the integration.
_XI_START = 0.05
#: Where -dln(theta)/dln(xi) makes theta the better independent variable.
_STEEP = 2.0
_TOLERANCE = {"rtol": 3e-14, "atol": 1e-18}


@dataclass(frozen=True)
class LaneEmden:
    """One solution: theta'' + 2 theta'/xi = -theta^n, theta(0) = 1, theta'(0) = 0.

    Attributes
    ----------
    index : float
        The polytropic index n.
    surface_xi : float
        First zero xi_1 of theta.
    surface_mass : float
        omega = -xi^2 theta' at the surface.
    inner, outer : callable
        Dense solutions: of ln(xi) giving (theta, omega), and of s giving
        (ln(xi), omega), with theta = s^power.
    match_xi, match_theta : float
        Where the two meet.
    power : float
        Exponent of s.
    """

    index: float
    surface_xi: float
    surface_mass: float
    inner: Any
    outer: Any
    match_xi: float
    match_theta: float
    power: float


class _Steep:
    """Where the first integration ends."""

    terminal = True

    def __call__(self, x: float, y: np.ndarray) -> float:
        return float(y[1] * math.exp(-x) - _STEEP * y[0])


def series(xi: Any, index: float) -> tuple[Any, Any]:
    """Return theta and omega = -xi^2 theta' near the centre.

    Chandrasekhar 1939, An Introduction to the Study of Stellar Structure, IV eq. 24,
    carried to xi^10, by the recursion of the power series of theta^n.
    """
    a = _series_coefficients(index)
    z = np.asarray(xi, dtype=float) ** 2
    theta = sum(c * z**k for k, c in enumerate(a))
    omega = -sum(2 * k * c * z**k for k, c in enumerate(a)) * xi
    return theta, omega


@lru_cache(maxsize=64)
def _series_coefficients(index: float, order: int = 10) -> tuple[float, ...]:
    # theta = sum a_k z^k with z = xi^2; theta^n = sum b_k z^k by Miller's recursion.
    a, b = [1.0], [1.0]
    for k in range(order):
        a.append(-b[k] / ((2 * k + 2) * (2 * k + 3)))
        m = k + 1
        b.append(sum((index * j - (m - j)) * a[j] * b[m - j] for j in range(1, m + 1)) / m)
    return tuple(a)


@lru_cache(maxsize=64)
def solve(index: float) -> LaneEmden:
    """Integrate from the centre to the surface.

    In ln(xi) by the order-8 method of Dormand & Prince until theta falls steeply;
    from there in s with theta = s^k, which makes the last stretch smooth for
    an index that is no whole number.
    """
    from scipy.integrate import solve_ivp

    def inner(x: float, y: np.ndarray) -> list[float]:
        theta, omega = y
        return [-omega * math.exp(-x), math.exp(3.0 * x) * max(theta, 0.0) ** index]

    theta0, omega0 = series(_XI_START, index)
    span = (math.log(_XI_START), 60.0)
    first = solve_ivp(
        inner, span, [theta0, omega0], "DOP853", dense_output=True, events=_Steep(), **_TOLERANCE
    )
    x_match, (theta, omega) = first.t[-1], first.y[:, -1]
    power = 1.0 if float(index).is_integer() else 8.0

    def outer(s: float, y: np.ndarray) -> list[float]:
        # d ln(xi)/d theta = -xi/omega, d omega/d theta = -xi^4 theta^n/omega.
        x, om = y
        slope = power * s ** (power - 1.0)
        rise = math.exp(4.0 * x) * s ** (power * index + power - 1.0) * power
        return [-math.exp(x) / om * slope, -rise / om]

    s_match = theta ** (1.0 / power)
    last = solve_ivp(
        outer, (s_match, 0.0), [x_match, omega], "DOP853", dense_output=True, **_TOLERANCE
    )
    return LaneEmden(
        index=float(index),
        surface_xi=math.exp(last.y[0, -1]),
        surface_mass=float(last.y[1, -1]),
        inner=first.sol,
        outer=last.sol,
        match_xi=math.exp(x_match),
        match_theta=float(theta),
        power=power,
    )


def profile(solution: LaneEmden, points: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return xi, theta and omega from the centre to the surface, `points` in all.

    The points are even in xi inside and even in theta outside the place where
    theta falls steeply.
    """
    outside = max(points // 3, 2)
    xi = np.linspace(0.0, solution.match_xi, points - outside, endpoint=False)
    theta, omega = series(xi, solution.index)
    far = xi > _XI_START
    theta[far], omega[far] = solution.inner(np.log(xi[far]))
    theta_out = np.linspace(solution.match_theta, 0.0, outside)
    x_out, omega_out = solution.outer(theta_out ** (1.0 / solution.power))
    return (
        np.concatenate([xi, np.exp(x_out)]),
        np.concatenate([theta, theta_out]),
        np.concatenate([omega, omega_out]),
    )
