"""Cubic splines over a box of nodes, for anything tabulated on model atmospheres."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

__all__ = ["NodeGrid", "hottest", "lowest_logg"]

_LOWEST = 0.6
_HIGHEST = 5.0
#: Temperature at which the lowest gravity begins to follow the push of light, K.
_BEND_K = 5800.0


def lowest_logg(temperature_k: np.ndarray) -> np.ndarray:
    """Return the lowest log g of the models at a temperature.

    0.6 + log10[1 + (T/5800 K)^4]: gravity six times the push of light on free
    electrons where it matters, all but constant where it does not.
    """
    return _LOWEST + np.log10(1.0 + (np.asarray(temperature_k, dtype=float) / _BEND_K) ** 4)


def hottest(logg: float) -> float:
    """Return the temperature in K at which `lowest_logg` reaches a log g."""
    return float(_BEND_K * max(10.0 ** (logg - _LOWEST) - 1.0, 0.0) ** 0.25)


@dataclass(frozen=True, eq=False)
class NodeGrid:
    """Nodes in temperature, share of the range of log g, and [Fe/H].

    Attributes
    ----------
    temperature_k, share, feh : numpy.ndarray
        Nodes of each axis, ascending, at least 4. `share` runs from 0 at
        `lowest_logg(T)` to 1 at log g = 5.
    """

    temperature_k: np.ndarray
    share: np.ndarray
    feh: np.ndarray

    @property
    def shape(self) -> tuple[int, int, int]:
        """Number of nodes of each axis."""
        return self.temperature_k.size, self.share.size, self.feh.size

    @cached_property
    def nodes(self) -> np.ndarray:
        """Temperature (K), log g and [Fe/H] of every node, (n_node, 3), the last fastest."""
        t, s, f = np.meshgrid(self.temperature_k, self.share, self.feh, indexing="ij")
        low = lowest_logg(t)
        return np.stack([t, low + s * (_HIGHEST - low), f], axis=-1).reshape(-1, 3)

    def prefilter(self, values: np.ndarray) -> np.ndarray:
        """Return the spline coefficients of `values` at the nodes, both (n_node, ...)."""
        out = np.asarray(values, dtype=float).reshape(*self.shape, -1)
        for axis, x in enumerate(self._axes):
            out = np.moveaxis(np.tensordot(_inverse(x), out, axes=(1, axis)), 0, axis)
        return out.reshape(np.shape(values))

    def weights(
        self, temperature_k: np.ndarray, logg: np.ndarray, feh: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return which coefficients make up the value at each point, and how much.

        Parameters
        ----------
        temperature_k, logg, feh : numpy.ndarray
            Points within the grid, (n,).

        Returns
        -------
        index, weight : numpy.ndarray
            (n, 64): the value is the sum of weight times coefficient; a point's
            value does not depend on its company.
        """
        low = lowest_logg(temperature_k)
        point = (np.log(temperature_k), (logg - low) / (_HIGHEST - low), feh)
        parts = [
            _basis(x, np.asarray(p, dtype=float)) for x, p in zip(self._axes, point, strict=True)
        ]
        (i, wi), (j, wj), (k, wk) = parts
        _, n_share, n_feh = self.shape
        step = np.arange(4)
        index = (i[:, None] + step)[:, :, None] * n_share + (j[:, None] + step)[:, None, :]
        index = index[..., None] * n_feh + (k[:, None] + step)[:, None, None, :]
        weight = wi[:, :, None, None] * wj[:, None, :, None] * wk[:, None, None, :]
        return index.reshape(-1, 64), weight.reshape(-1, 64)

    @cached_property
    def _axes(self) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        return np.log(self.temperature_k), self.share, self.feh


def _knots(x: np.ndarray) -> np.ndarray:
    # Not-a-knot at either end (de Boor 1978, A Practical Guide to Splines, chapter IV).
    return np.concatenate([np.full(4, x[0]), x[2:-2], np.full(4, x[-1])])


def _basis(x: np.ndarray, at: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the first coefficient that matters and the four cubic B-splines at each point."""
    knots = _knots(x)
    left = np.clip(np.searchsorted(knots, at, side="right") - 1, 3, x.size - 1)
    values = np.ones((at.size, 1))
    for degree in range(1, 4):
        # Cox and de Boor's recursion, de Boor 1978, chapter X, equation 8.
        grown = np.zeros((at.size, degree + 1))
        for r in range(degree):
            low, high = knots[left + r + 1 - degree], knots[left + r + 1]
            part = values[:, r] / (high - low)
            grown[:, r] += (high - at) * part
            grown[:, r + 1] += (at - low) * part
        values = grown
    return left - 3, values


def _inverse(x: np.ndarray) -> np.ndarray:
    first, values = _basis(x, x)
    matrix = np.zeros((x.size, x.size))
    for row in range(x.size):
        matrix[row, first[row] : first[row] + 4] = values[row]
    return np.linalg.inv(matrix)
