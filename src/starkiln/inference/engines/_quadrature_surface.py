"""ln band fluxes of one star's model near its posterior, as short Chebyshev series."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import chebyshev

#: Trailing terms that add up to less than this in ln flux are dropped.
_DROPPED = 3e-6


@dataclass(frozen=True)
class Surface:
    """Double Chebyshev series in ln T and A_V over a rectangle, one per component.

    Attributes
    ----------
    coefficients : numpy.ndarray
        Shape (n_t, n_av, n_components).
    slopes : numpy.ndarray
        The same of the derivative with respect to A_V, per mag.
    t_range, av_range : tuple of float
        The rectangle; ln of the temperature in K, and mag.
    """

    coefficients: np.ndarray
    slopes: np.ndarray
    t_range: tuple[float, float]
    av_range: tuple[float, float]

    def along(self, t: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return the series in A_V, and those of the slope, at each t, (j, n_av, n)."""
        basis = _basis(t, self.t_range, self.coefficients.shape[0])
        return tuple(
            (basis @ part.reshape(part.shape[0], -1)).reshape(t.size, *part.shape[1:])
            for part in (self.coefficients, self.slopes)
        )

    def across(self, series: np.ndarray, av: np.ndarray) -> np.ndarray:
        """Sum series of shape (j, n_av, n) at av of shape (j, k); (j, k, n)."""
        return np.matmul(_basis(av, self.av_range, series.shape[1]), series)

    def at(self, t: np.ndarray, av: np.ndarray) -> np.ndarray:
        """Return the components at points (t, av), each (m,); (m, n)."""
        n_t, n_av, n = self.coefficients.shape
        series = _basis(t, self.t_range, n_t) @ self.coefficients.reshape(n_t, -1)
        basis = _basis(av, self.av_range, n_av)
        total = basis[:, :1] * series[:, :n]
        for k in range(1, n_av):
            total += basis[:, k : k + 1] * series[:, k * n : (k + 1) * n]
        return total

    def restricted(self, t_range: tuple[float, float], av_range: tuple[float, float]) -> Surface:
        """Return the same functions as shorter series over a smaller rectangle."""
        n_t, n_av, _ = self.coefficients.shape
        series, _ = self.along(_stretched(_nodes(n_t), t_range))
        values = np.matmul(_basis(_stretched(_nodes(n_av), av_range), self.av_range, n_av), series)
        for axis in (0, 1):
            values = np.moveaxis(
                np.tensordot(_to_series(values.shape[axis]), values, axes=(1, axis)), 0, axis
            )
        return make_surface(_trimmed(values), t_range, av_range)


def make_surface(
    coefficients: np.ndarray, t_range: tuple[float, float], av_range: tuple[float, float]
) -> Surface:
    """Return the surface of those coefficients, its slopes worked out."""
    slopes = np.zeros_like(coefficients)
    if coefficients.shape[1] > 1:
        scale = 2.0 / (av_range[1] - av_range[0])
        slopes[:, :-1] = chebyshev.chebder(coefficients, scl=scale, axis=1)
    return Surface(coefficients, slopes, t_range, av_range)


def _basis(x: np.ndarray, x_range: tuple[float, float], n: int) -> np.ndarray:
    low, high = x_range
    return chebyshev.chebvander((x - low) * (2.0 / (high - low)) - 1.0, n - 1)


def _nodes(n: int) -> np.ndarray:
    return chebyshev.chebpts1(n)


def _stretched(unit: np.ndarray, x_range: tuple[float, float]) -> np.ndarray:
    low, high = x_range
    return low + 0.5 * (high - low) * (unit + 1.0)


def _to_series(n: int) -> np.ndarray:
    """Return the matrix from values at the Chebyshev points to coefficients."""
    matrix = chebyshev.chebvander(_nodes(n), n - 1).T * (2.0 / n)
    matrix[0] *= 0.5
    return matrix


def _trimmed(coefficients: np.ndarray) -> np.ndarray:
    for axis in (0, 1):
        size = np.abs(coefficients).max(axis=2).sum(axis=1 - axis)
        tail = np.cumsum(size[::-1])[::-1]
        keep = max(1, int(np.count_nonzero(tail > _DROPPED)))
        coefficients = np.take(coefficients, np.arange(keep), axis=axis)
    return np.ascontiguousarray(coefficients)
