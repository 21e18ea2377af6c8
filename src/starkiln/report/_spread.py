"""Places for labels on a line, moved apart only as far as they must be."""

from __future__ import annotations

from typing import Any

import numpy as np


def spread(wanted: Any, gap: float, lower: float, upper: float) -> np.ndarray:
    """Return places at least `gap` apart with the least squared displacement.

    Parameters
    ----------
    wanted : array_like
        Where each label would stand by itself, in any order.
    gap : float
        Least distance between neighbours; lessened where they would not fit.
    lower, upper : float
        Bounds of all places.

    Returns
    -------
    numpy.ndarray
        Shape (n,), in the order of `wanted`.
    """
    wanted = np.asarray(wanted, dtype=float)
    count = len(wanted)
    if count > 1:
        gap = min(gap, (upper - lower) / (count - 1))
    order = np.argsort(wanted, kind="stable")
    steps = gap * np.arange(count)
    # With the gaps taken off, the places need only be in order: isotonic regression.
    level = _isotonic(wanted[order] - steps)
    level = np.clip(level, lower, max(upper - gap * (count - 1), lower))
    places = np.empty(count)
    places[order] = level + steps
    return places


def _isotonic(values: np.ndarray) -> np.ndarray:
    """Return the nearest non-decreasing sequence (pool adjacent violators)."""
    blocks: list[tuple[float, int]] = []
    for value in values:
        mean, size = float(value), 1
        while blocks and blocks[-1][0] > mean:
            other, length = blocks.pop()
            mean = (mean * size + other * length) / (size + length)
            size += length
        blocks.append((mean, size))
    return np.repeat([mean for mean, _ in blocks], [size for _, size in blocks])
