"""Gaussians cut at two bounds: masses and inverted distributions, also far in the tails."""

from __future__ import annotations

import numpy as np

_LN_2PI = float(np.log(2.0 * np.pi))
#: Beyond so many sigma the tail is taken as exponential: the double range ends at 38.
_FAR = 35.0
#: Cuts further out than this change nothing: 1e-18 of the probability.
_WHOLE = 9.0


def ln_mass(low: np.ndarray, high: np.ndarray) -> np.ndarray:
    """Return ln of the probability of a unit Gaussian between `low` and `high`."""
    from scipy.special import log_ndtr

    if _uncut(low, high):
        return np.zeros_like(low)
    near, far = _facing_right(low, high)
    inner, outer = log_ndtr(-near), log_ndtr(-far)
    return inner + np.log1p(-np.exp(np.minimum(outer - inner, -1e-300)))


def ln_density(z: np.ndarray, low: np.ndarray, high: np.ndarray) -> np.ndarray:
    """Return ln of the density at z of a unit Gaussian cut at `low` and `high`."""
    return -0.5 * (z * z + _LN_2PI) - ln_mass(low, high)


def draw(u: np.ndarray, low: np.ndarray, high: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Invert the distribution of a unit Gaussian cut at `low` and `high`.

    Parameters
    ----------
    u : numpy.ndarray
        Levels between 0 and 1.
    low, high : numpy.ndarray
        Bounds, low < high.

    Returns
    -------
    z, ln_density : numpy.ndarray
        The points at those levels and ln of the density they are drawn with.
    """
    from scipy.special import ndtr, ndtri

    if _uncut(low, high):
        z = ndtri(u)
        return z, -0.5 * (z * z + _LN_2PI)
    near, far = _facing_right(low, high)
    flipped = near != low
    u = np.where(flipped, 1.0 - u, u)
    inner, outer = ndtr(-near), ndtr(-far)
    with np.errstate(divide="ignore", invalid="ignore"):
        z = -ndtri(inner - u * (inner - outer))
        ln_density = -0.5 * (z * z + _LN_2PI) - np.log(inner - outer)
    distant = near > _FAR
    if np.any(distant):
        rate = np.where(distant, near, 1.0)
        reach = -np.expm1(-rate * (far - near))
        step = -np.log1p(-np.minimum(u * reach, 1.0 - 2.0**-53)) / rate
        z = np.where(distant, near + step, z)
        tail = np.log(rate) - rate * step - np.log(reach)
        ln_density = np.where(distant, tail, ln_density)
    z = np.clip(z, near, far)
    return np.where(flipped, -z, z), ln_density


def _uncut(low: np.ndarray, high: np.ndarray) -> bool:
    """Whether no cut takes away more than a double can tell from nothing."""
    return bool(np.max(low) < -_WHOLE and np.min(high) > _WHOLE)


def _facing_right(low: np.ndarray, high: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Mirror the intervals that lie more to the left, where tails lose their digits."""
    left = low + high < 0.0
    return np.where(left, -high, low), np.where(left, -low, high)
