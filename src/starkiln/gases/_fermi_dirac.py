"""Generalised Fermi-Dirac integrals: any degeneracy, any relativity.

F_k(eta, theta) = integral from 0 to infinity of x^k (1 + theta x/2)^(1/2)/(e^(x - eta) + 1) dx,
with theta = k T/(m c^2) and x the kinetic energy over k T.

Gauss-Legendre rules in v, where x^(1/2) = sinh(c v)/c and c = (theta/2)^(1/2): 2 c v is the
rapidity, in which the integrand of half-integer k has no branch point, at any theta. Its only
singularities are the poles of the occupation at x = eta + i pi (2 m + 1), so the pieces are
short near the edge of the filled levels and one long piece covers the sea below it (a variant
of the three-part rule of Aparicio 1998, ApJS 117, 627).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.errors import InputError

#: Ends of the pieces above and below the edge, in k T: levels farther than the last are
#: empty (e^-50), and below the first 1 - f is lost in rounding.
_ABOVE = (0.0, 6.0, 16.0, 50.0)
_BELOW = (-36.0, -16.0, -6.0, 0.0)
_NODES, _SEA_NODES = 20, 48


@dataclass(frozen=True)
class FermiMoments:
    """Dimensionless integrals of an ideal Fermi gas, each of the shape of eta and theta.

    With D(x) = x^(1/2) (1 + theta x/2)^(1/2) (1 + theta x), the density of states, f the
    occupation and y = x - eta:

    Attributes
    ----------
    number : numpy.ndarray
        Integral of D f: F_1/2 + theta F_3/2.
    pressure : numpy.ndarray
        Integral of x^(3/2) (1 + theta x/2)^(3/2) f: F_3/2 + (theta/2) F_5/2.
    energy : numpy.ndarray
        Integral of x D f, kinetic: F_3/2 + theta F_5/2.
    entropy : numpy.ndarray
        Integral of D [-f ln f - (1 - f) ln(1 - f)].
    edge_0, edge_1, edge_2 : numpy.ndarray
        Integrals of D y^m f (1 - f), m = 0, 1, 2: the derivatives of number and
        entropy by chemical potential and temperature.
    """

    number: np.ndarray
    pressure: np.ndarray
    energy: np.ndarray
    entropy: np.ndarray
    edge_0: np.ndarray
    edge_1: np.ndarray
    edge_2: np.ndarray


def fermi_dirac(k: float, eta: Any, theta: Any = 0.0) -> np.ndarray:
    """Return the generalised Fermi-Dirac integral F_k(eta, theta).

    Parameters
    ----------
    k : float
        -1/2, 1/2, 3/2 or any larger half-integer up to 9/2.
    eta : array_like
        Degeneracy parameter: chemical potential without rest mass over k T.
    theta : array_like
        k T/(m c^2), 0 for slow particles; broadcast against `eta`.

    Returns
    -------
    numpy.ndarray
        Relative error below 1e-12 for theta <= 1, below 3e-11 for theta <= 10.

    Raises
    ------
    InputError
        k is no half-integer, eta not finite, theta negative or not finite.
    """
    if k not in (-0.5, 0.5, 1.5, 2.5, 3.5, 4.5):
        raise InputError(f"order k = {k} is out of bounds: give a half-integer from -1/2 to 9/2")

    def moment(x: np.ndarray, y: np.ndarray, s: np.ndarray) -> np.ndarray:
        # x^k s dx has x^(1/2) taken into the weight: see `_nodes`.
        return x ** (k - 0.5) * s * _occupation(y)

    return _integrate(eta, theta, lambda x, y, s, _: [moment(x, y, s)])[0]


def fermi_moments(eta: Any, theta: Any) -> FermiMoments:
    """Return the seven integrals that the thermodynamics of a Fermi gas needs.

    Parameters
    ----------
    eta, theta : array_like
        As for `fermi_dirac`; broadcast.
    """
    return FermiMoments(*_integrate(eta, theta, _moments))


def fermi_number(eta: Any, theta: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return `number` and `edge_0` of `fermi_moments` alone: the number and its slope by eta."""
    number, slope = _integrate(eta, theta, _numbers)
    return number, slope


_Kernel = Callable[[np.ndarray, np.ndarray, np.ndarray, np.ndarray], list[np.ndarray]]


def _moments(x: np.ndarray, y: np.ndarray, s: np.ndarray, theta: np.ndarray) -> list[np.ndarray]:
    a = np.abs(y)
    small = np.exp(-np.minimum(a, 745.0))
    f = np.where(y > 0.0, small, 1.0) / (1.0 + small)
    states = s * (1.0 + theta * x)
    filled = states * f
    edge = states * small / (1.0 + small) ** 2
    disorder = states * (np.log1p(small) + a * small / (1.0 + small))
    return [filled, x * s**3 * f, x * filled, disorder, edge, y * edge, y**2 * edge]


def _numbers(x: np.ndarray, y: np.ndarray, s: np.ndarray, theta: np.ndarray) -> list[np.ndarray]:
    small = np.exp(-np.minimum(np.abs(y), 745.0))
    inverse = 1.0 / (1.0 + small)
    states = s * (1.0 + theta * x) * inverse
    return [states * np.where(y > 0.0, small, 1.0), states * small * inverse]


def _occupation(y: np.ndarray) -> np.ndarray:
    small = np.exp(-np.minimum(np.abs(y), 745.0))
    return np.where(y > 0.0, small, 1.0) / (1.0 + small)


def _integrate(eta: Any, theta: Any, kernel: _Kernel) -> list[np.ndarray]:
    """Integrate x^(1/2) kernel dx for every pair of eta and theta."""
    e, t = np.broadcast_arrays(np.asarray(eta, dtype=float), np.asarray(theta, dtype=float))
    if not np.all(np.isfinite(e)) or not np.all(np.isfinite(t)) or np.any(t < 0.0):
        raise InputError("eta and theta must be finite, and theta not negative")
    flat_e, flat_t = e.ravel(), t.ravel()
    out: list[np.ndarray] | None = None
    for filled in (False, True):
        chosen = np.flatnonzero((flat_e > 0.0) == filled)
        if chosen.size == 0:
            continue
        ec, tc = flat_e[chosen], flat_t[chosen]
        x, w = _nodes(ec, tc, filled)
        parts = kernel(x, x - ec, np.sqrt(1.0 + 0.5 * tc * x), tc)
        if out is None:
            out = [np.empty(flat_e.size) for _ in parts]
        for total, part in zip(out, parts, strict=True):
            total[chosen] = np.einsum("ij,ij->j", w, part)
    return [total.reshape(e.shape) for total in out or []]


def _nodes(eta: np.ndarray, theta: np.ndarray, filled: bool) -> tuple[np.ndarray, np.ndarray]:
    """Return nodes x and the weights of x^(1/2) dx = 2 t^2 cosh(c v) dv, per column.

    `filled` adds the levels below eta, which are those of negative y.
    """
    c = np.sqrt(0.5 * theta)
    edge = np.maximum(eta, 0.0)
    ends = np.maximum(edge + np.array(_BELOW[:-1] * filled + _ABOVE)[:, None], 0.0)
    v = _rapidity(np.sqrt(ends), c)
    low, width = v[:-1], np.diff(v, axis=0)
    node, weight = _gauss(_NODES)
    points = [low[:, None] + width[:, None] * node[:, None]]
    weights = [width[:, None] * weight[:, None]]
    if filled:
        node, weight = _gauss(_SEA_NODES)
        points.append((v[0] * node[:, None])[None])
        weights.append((v[0] * weight[:, None])[None])
    t = _root_energy(np.concatenate([p.reshape(-1, eta.size) for p in points]), c)
    dv = np.concatenate([w.reshape(-1, eta.size) for w in weights])
    return t**2, 2.0 * t**2 * np.sqrt(1.0 + (c * t) ** 2) * dv


def _rapidity(t: np.ndarray, c: np.ndarray) -> np.ndarray:
    """Return v of t = sinh(c v)/c, which is t itself where c = 0."""
    safe = np.where(c > 0.0, c, 1.0)
    return np.where(c > 0.0, np.arcsinh(safe * t) / safe, t)


def _root_energy(v: np.ndarray, c: np.ndarray) -> np.ndarray:
    safe = np.where(c > 0.0, c, 1.0)
    return np.where(c > 0.0, np.sinh(safe * v) / safe, v)


@lru_cache(maxsize=4)
def _gauss(count: int) -> tuple[np.ndarray, np.ndarray]:
    """Return the nodes and weights of the Gauss-Legendre rule on [0, 1]."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    return 0.5 * (nodes + 1.0), 0.5 * weights
