"""The shells of a structure model: fixed fractions of the mass."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

#: Mass fraction of the first point.
_FIRST = 1e-6
#: How the points are shared between the inner and the outer variable: a choice.
_INNER, _OUTER = 6.0, 0.35


@dataclass(frozen=True)
class Mesh:
    """Mass fractions from near the centre to the surface.

    Attributes
    ----------
    fraction : numpy.ndarray
        m/M of each point; the last is 1.
    slope : numpy.ndarray
        Its derivative by the point's number.
    """

    fraction: np.ndarray
    slope: np.ndarray


def make_mesh(points: int, skin: float) -> Mesh:
    """Return a mesh that is even in m^(1/3) inside and in ln(1 - m/M + skin) outside.

    Parameters
    ----------
    points : int
        How many.
    skin : float
        Mass fraction above which half of the surface pressure is not the star's own
        weight; the last shells are a fraction of it.
    """
    start, end = _number(np.array([_FIRST, 1.0]), skin)
    goal = np.linspace(start, end, points)
    outside = 1.0 - np.geomspace(0.5, skin / 50.0, 4000)
    table = np.concatenate([np.geomspace(_FIRST, 0.5, 2000), outside[1:], [1.0]])
    q = np.interp(goal, _number(table, skin), table)
    for _ in range(4):
        q = np.clip(q - (_number(q, skin) - goal) / _rate(q, skin), _FIRST, 1.0)
    q[0], q[-1] = _FIRST, 1.0
    return Mesh(q, (end - start) / (points - 1) / _rate(q, skin))


def _number(q: np.ndarray, skin: float) -> np.ndarray:
    return _INNER * np.cbrt(q) - _OUTER * np.log1p(skin - q)


def _rate(q: np.ndarray, skin: float) -> np.ndarray:
    return _INNER / 3.0 * np.cbrt(q) ** -2 + _OUTER / (1.0 - q + skin)
