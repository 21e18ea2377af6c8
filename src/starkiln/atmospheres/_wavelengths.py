"""The wavelengths on which an atmosphere is computed."""

from __future__ import annotations

import numpy as np

from starkiln.matter import bound_free_edges, line_wavelength

__all__ = ["wavelength_grid", "wavelength_weights"]

#: Pieces of the plain grid: from, to in um, points per unit of ln lambda. Densest where the
#: passbands of optical photometry lie; the ends hold 1e-4 of the light of 3,500 and 40,000 K.
_PIECES = (
    (0.018, 0.09, 16.0),
    (0.09, 0.30, 60.0),
    (0.30, 1.10, 140.0),
    (1.10, 2.60, 70.0),
    (2.60, 30.0, 22.0),
    (30.0, 200.0, 4.0),
)
#: Offsets from the centre of a strong line, as fractions of its wavelength.
_LINE_OFFSETS = (1e-4, 3e-4, 1e-3, 2.5e-3, 6e-3, 1.5e-2, 3.5e-2)
_WEAK_OFFSETS = (3e-4, 1.5e-3, 5e-3)
_STRONG = ((1, 2), (1, 3), (1, 4), (2, 3), (2, 4), (2, 5), (2, 6), (3, 4), (3, 5), (3, 6), (4, 7))
_WEAK = ((2, 7), (2, 8), (2, 9), (2, 10), (4, 5), (4, 6), (3, 7))
_EDGE_OFFSET = 1e-4
_CLOSEST = 2e-5


def wavelength_grid(density: float = 1.0) -> np.ndarray:
    """Return the wavelengths of the model in metres, ascending.

    Parameters
    ----------
    density : float
        Multiple of the plain grid's density; edges and lines keep their points.

    Returns
    -------
    numpy.ndarray
        Two points at either side of every bound-free edge, 15 about each strong
        line of hydrogen, and a plain grid between.
    """
    plain = [
        np.geomspace(a, b, max(int(np.log(b / a) * per_ln * density), 2), endpoint=False) * 1e-6
        for a, b, per_ln in _PIECES
    ]
    special = []
    for edge in bound_free_edges():
        special += [edge * (1 + k * _EDGE_OFFSET) for k in (-10, -1, 1, 10)]
    for lines, offsets in ((_STRONG, _LINE_OFFSETS), (_WEAK, _WEAK_OFFSETS)):
        for n, m in lines:
            centre = line_wavelength(n, m)
            special.append(centre)
            special += [centre * (1 + sign * d) for d in offsets for sign in (-1, 1)]
    every = np.sort(np.concatenate([*plain, special, [_PIECES[-1][1] * 1e-6]]))
    keep = np.concatenate([[True], np.diff(every) > _CLOSEST * every[1:]])
    return every[keep]


def wavelength_weights(wavelength_m: np.ndarray) -> np.ndarray:
    """Return the weights of an integral over wavelength: trapezoids in ln lambda, in metres."""
    step = np.diff(np.log(wavelength_m))
    weight = np.zeros_like(wavelength_m)
    weight[:-1] += 0.5 * step
    weight[1:] += 0.5 * step
    return weight * wavelength_m
