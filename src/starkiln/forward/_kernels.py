"""Chebyshev series of the tabulated band fluxes on plain arrays; no astropy here.

Rounding: every matrix product here has a fixed shape (the points are padded to whole
blocks), so that the value of a point does not depend on how many others are evaluated
with it or on its place among them.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

import numpy as np

__all__ = [
    "at_point",
    "chebyshev",
    "chebyshev_fit",
    "chebyshev_nodes",
    "chebyshev_slope",
    "contract",
    "evaluate",
    "evaluate_slope",
    "over_nodes",
    "trimmed",
]

#: Points per product: small enough for the cache and a single star, large enough
#: that the overhead per point vanishes.
BLOCK = 64
#: Numbers held at once in the sums over the first axis.
_WORKSPACE = 250_000
#: Multiplications in one matrix product: OpenBLAS keeps to one thread below 2^18, and
#: waiting for a second one costs more than it saves here, the more so on a busy machine.
_PRODUCT = 2**18


def chebyshev_nodes(n: int) -> np.ndarray:
    """Return the n Chebyshev points of the first kind on [-1, 1]."""
    return np.cos(np.pi * (np.arange(n) + 0.5) / n)


def chebyshev_fit(values: np.ndarray, axes: Iterable[int] | None = None) -> np.ndarray:
    """Return the coefficients of the interpolant through values at Chebyshev points.

    `values` stands on `chebyshev_nodes` along the `axes`, by default every one (Press
    et al. 2007, Numerical Recipes, eq. 5.8.7, along each axis in turn).
    """
    for axis in range(values.ndim) if axes is None else axes:
        n = values.shape[axis]
        order = np.arange(n)
        matrix = 2.0 / n * np.cos(np.pi * np.outer(order, order + 0.5) / n)
        matrix[0] *= 0.5
        values = np.moveaxis(np.tensordot(matrix, values, axes=(1, axis)), 0, axis)
    return values


def trimmed(coefficients: np.ndarray, tolerance: float) -> np.ndarray:
    """Drop the trailing terms of each axis that add up to less than `tolerance`."""
    for axis in range(coefficients.ndim):
        others = tuple(k for k in range(coefficients.ndim) if k != axis)
        size = np.abs(coefficients).sum(axis=others)
        tail = np.cumsum(size[::-1])[::-1]
        # The recurrences start from two terms.
        keep = max(2, int(np.count_nonzero(tail > tolerance)))
        coefficients = np.take(coefficients, np.arange(keep), axis=axis)
    return np.ascontiguousarray(coefficients)


def over_nodes(coefficients: np.ndarray, index: np.ndarray, weight: np.ndarray) -> np.ndarray:
    """Return the weighted sums of rows of `coefficients`.

    Parameters
    ----------
    coefficients : numpy.ndarray, shape (n_node, m)
    index, weight : numpy.ndarray, shape (n, k)
        Rows of each point's sum, and their weights.

    Returns
    -------
    numpy.ndarray, shape (n, m)
    """
    total = np.empty((len(index), coefficients.shape[1]))
    chunk = max(1, _WORKSPACE // (index.shape[1] * coefficients.shape[1]))
    for start in range(0, len(index), chunk):
        part = slice(start, start + chunk)
        # One product per point, so that its shape is fixed.
        total[part] = np.matmul(weight[part, None, :], coefficients[index[part]])[:, 0]
    return total


def evaluate(coefficients: np.ndarray, t: np.ndarray, a: np.ndarray) -> np.ndarray:
    """Sum a set of double Chebyshev series.

    Parameters
    ----------
    coefficients : numpy.ndarray, shape (n_t, n_a, m)
        Coefficients of m series, n_t and n_a at least 2.
    t, a : numpy.ndarray, shape (n,)
        Points, scaled to [-1, 1].

    Returns
    -------
    numpy.ndarray, shape (n, m)
    """
    value = np.empty((t.size, coefficients.shape[2]))
    for part, series in _series(coefficients, t):
        value[part] = _sum(chebyshev(_padded(a[part]), coefficients.shape[1]), series, part)
    return value


def evaluate_slope(
    coefficients: np.ndarray, t: np.ndarray, a: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Return `evaluate` and its derivative with respect to `a`."""
    value = np.empty((t.size, coefficients.shape[2]))
    slope = np.empty_like(value)
    for part, series in _series(coefficients, t):
        points = _padded(a[part])
        value[part] = _sum(chebyshev(points, coefficients.shape[1]), series, part)
        slope[part] = _sum(chebyshev_slope(points, coefficients.shape[1]), series, part)
    return value, slope


def contract(series: np.ndarray, r: np.ndarray, n_r: int) -> np.ndarray:
    """Sum series of shape (n, n_r m) over their n_r terms at the points r, shape (n,)."""
    basis = chebyshev(r, n_r)
    return np.einsum("nj,njb->nb", basis, series.reshape(r.size, n_r, -1))


def at_point(coefficients: np.ndarray, r: float) -> np.ndarray:
    """Sum a series over its last axis at one point, which leaves one of fewer axes."""
    return coefficients @ chebyshev(np.array([r]), coefficients.shape[-1])[0]


def _series(coefficients: np.ndarray, t: np.ndarray) -> Iterator[tuple[slice, np.ndarray]]:
    """Sum over the terms in t, some blocks of points at a time."""
    n_t, n_a, m = coefficients.shape
    flat = coefficients.reshape(n_t, n_a * m)
    width = max(1, _PRODUCT // (BLOCK * n_t))
    pieces = [np.ascontiguousarray(flat[:, k : k + width]) for k in range(0, n_a * m, width)]
    chunk = BLOCK * max(1, _WORKSPACE // (BLOCK * n_a * m))
    for start in range(0, t.size, chunk):
        part = slice(start, min(start + chunk, t.size))
        basis = chebyshev(_padded(t[part]), n_t).reshape(-1, BLOCK, n_t)
        sums = [np.matmul(basis, piece) for piece in pieces]
        yield part, np.concatenate(sums, axis=-1).reshape(-1, n_a, m)


def _sum(basis: np.ndarray, series: np.ndarray, part: slice) -> np.ndarray:
    return np.einsum("nj,njb->nb", basis, series)[: part.stop - part.start]


def _padded(x: np.ndarray) -> np.ndarray:
    return np.pad(x, (0, -x.size % BLOCK), mode="edge")


def chebyshev(x: np.ndarray, n: int) -> np.ndarray:
    """Return T_0 .. T_(n-1) at x, shape (x.size, n), by T_(k+1) = 2 x T_k - T_(k-1)."""
    basis = np.empty((n, x.size))
    basis[0], basis[1] = 1.0, x
    double = 2.0 * x
    for k in range(2, n):
        np.multiply(double, basis[k - 1], out=basis[k])
        basis[k] -= basis[k - 2]
    return np.ascontiguousarray(basis.T)


def chebyshev_slope(x: np.ndarray, n: int) -> np.ndarray:
    """Return the derivatives of T_0 .. T_(n-1): T_k' = k U_(k-1), U_(k+1) = 2 x U_k - U_(k-1)."""
    second = np.zeros((n, x.size))
    second[1] = 1.0
    double = 2.0 * x
    for k in range(2, n):
        np.multiply(double, second[k - 1], out=second[k])
        second[k] -= second[k - 2]
    second *= np.arange(n)[:, None]
    return np.ascontiguousarray(second.T)
