"""Evaluation of the tabulated band fluxes on plain arrays; no astropy here.

Rounding: every product here has a fixed shape (the points are padded to whole
blocks), so that the value of a point does not depend on how many others are
evaluated with it or on its place among them.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

__all__ = ["chebyshev_fit", "chebyshev_nodes", "evaluate", "evaluate_slope"]

#: Points per product: small enough for the cache and a single star, large enough
#: that the overhead per point vanishes.
BLOCK = 64
#: Blocks held in memory at once.
_BLOCKS_AT_ONCE = 32


def chebyshev_nodes(n: int) -> np.ndarray:
    """Return the n Chebyshev points of the first kind on [-1, 1]."""
    return np.cos(np.pi * (np.arange(n) + 0.5) / n)


def chebyshev_fit(values: np.ndarray) -> np.ndarray:
    """Return the coefficients of the interpolant through values at Chebyshev points.

    `values` has shape (n, m), on `chebyshev_nodes` along both axes (Press et al.
    2007, Numerical Recipes, eq. 5.8.7, in two dimensions).
    """
    return _transform(values.shape[0]) @ values @ _transform(values.shape[1]).T


def _transform(n: int) -> np.ndarray:
    order = np.arange(n)
    matrix = 2.0 / n * np.cos(np.pi * np.outer(order, order + 0.5) / n)
    matrix[0] *= 0.5
    return matrix


def evaluate(coefficients: np.ndarray, t: np.ndarray, a: np.ndarray) -> np.ndarray:
    """Sum the double Chebyshev series of every band.

    Parameters
    ----------
    coefficients : numpy.ndarray, shape (n_t, n_a, n_bands)
        Coefficients, n_t and n_a at least 2.
    t, a : numpy.ndarray, shape (n,)
        Points, scaled to [-1, 1].

    Returns
    -------
    numpy.ndarray, shape (n, n_bands)
    """
    value = np.empty((t.size, coefficients.shape[2]))
    for part, series in _series(coefficients, t):
        basis = _chebyshev(_padded(a[part]), coefficients.shape[1])
        value[part] = _sum(basis, series, part)
    return value


def evaluate_slope(
    coefficients: np.ndarray, t: np.ndarray, a: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Return `evaluate` and its derivative with respect to `a`."""
    value = np.empty((t.size, coefficients.shape[2]))
    slope = np.empty_like(value)
    for part, series in _series(coefficients, t):
        points = _padded(a[part])
        value[part] = _sum(_chebyshev(points, coefficients.shape[1]), series, part)
        slope[part] = _sum(_chebyshev_slope(points, coefficients.shape[1]), series, part)
    return value, slope


def _series(coefficients: np.ndarray, t: np.ndarray) -> Iterator[tuple[slice, np.ndarray]]:
    """Sum over the terms in t, some blocks of points at a time."""
    n_t, n_a, n_bands = coefficients.shape
    flat = coefficients.reshape(n_t, n_a * n_bands)
    chunk = BLOCK * _BLOCKS_AT_ONCE
    for start in range(0, t.size, chunk):
        part = slice(start, min(start + chunk, t.size))
        basis = _chebyshev(_padded(t[part]), n_t).reshape(-1, BLOCK, n_t)
        yield part, np.matmul(basis, flat).reshape(-1, n_a, n_bands)


def _sum(basis: np.ndarray, series: np.ndarray, part: slice) -> np.ndarray:
    return np.einsum("nj,njb->nb", basis, series)[: part.stop - part.start]


def _padded(x: np.ndarray) -> np.ndarray:
    return np.pad(x, (0, -x.size % BLOCK), mode="edge")


def _chebyshev(x: np.ndarray, n: int) -> np.ndarray:
    """Return T_0 .. T_(n-1) at x, shape (x.size, n), by T_(k+1) = 2 x T_k - T_(k-1)."""
    basis = np.empty((n, x.size))
    basis[0], basis[1] = 1.0, x
    double = 2.0 * x
    for k in range(2, n):
        np.multiply(double, basis[k - 1], out=basis[k])
        basis[k] -= basis[k - 2]
    return np.ascontiguousarray(basis.T)


def _chebyshev_slope(x: np.ndarray, n: int) -> np.ndarray:
    """Return the derivatives of T_0 .. T_(n-1): T_k' = k U_(k-1), U_(k+1) = 2 x U_k - U_(k-1)."""
    second = np.zeros((n, x.size))
    second[1] = 1.0
    double = 2.0 * x
    for k in range(2, n):
        np.multiply(double, second[k - 1], out=second[k])
        second[k] -= second[k - 2]
    second *= np.arange(n)[:, None]
    return np.ascontiguousarray(second.T)
