"""The chemical potential that gives a number of particles: inverses of f_s and g_s."""

from __future__ import annotations

import math

import numpy as np
from numpy import exp, log

from starkiln.errors import ConvergenceError
from starkiln.gases._statistics import bose, fermi, zeta

_ITERATIONS = 200
_TOLERANCE = 4e-15
#: ln of the smallest -eta sought; no sum over the gas tells it from 0.
_LN_SMALLEST = -300.0


def fermi_inverse(order: float, value: np.ndarray) -> np.ndarray:
    """Return eta such that f_order(eta) equals `value`.

    Newton's method on ln f, which is concave: from exp(eta) = value, at or below
    the root, it climbs without overshoot.

    Parameters
    ----------
    order : float
        Above 0.
    value : numpy.ndarray
        At least 0; 0 gives -inf.

    Raises
    ------
    ConvergenceError
        Not converged in 200 steps.
    """
    shape = np.shape(value)
    with np.errstate(divide="ignore"):
        ln_value = log(np.atleast_1d(np.asarray(value, dtype=float)))
    eta = ln_value.copy()
    active = np.isfinite(eta)
    for _ in range(_ITERATIONS):
        if not np.any(active):
            return eta.reshape(shape)[()]
        here = eta[active]
        f = fermi(order, here)
        step = (ln_value[active] - log(f)) * f / fermi(order - 1.0, here)
        eta[active] = here + step
        active[active] = np.abs(step) > _TOLERANCE * np.maximum(1.0, np.abs(here)) * 4.0
    raise ConvergenceError("the chemical potential of the fermion gas did not converge", eta)


def bose_inverse(order: float, value: np.ndarray) -> np.ndarray:
    """Return eta <= 0 such that g_order(eta) equals `value`; 0 where the gas has condensed.

    Bisection in ln(-eta) narrowed by Newton's method, so that eta keeps its relative
    accuracy close to condensation. Arguments as for `fermi_inverse`.
    """
    shape = np.shape(value)
    value = np.atleast_1d(np.asarray(value, dtype=float))
    critical = zeta(order) if order > 1.0 else math.inf
    result = np.where(value >= critical, 0.0, -math.inf)
    active = (value < critical) & (value > 0.0)
    if np.any(active):
        result[active] = _bose_root(order, value[active])
    return result.reshape(shape)[()]


def _bose_root(order: float, target: np.ndarray) -> np.ndarray:
    # g_s <= g_0 = 1 / (exp(-eta) - 1) bounds -eta from above.
    high, low = log(np.log1p(1.0 / target)), np.full_like(target, _LN_SMALLEST)
    w = high.copy()
    for _ in range(_ITERATIONS):
        eta = -exp(w)
        g = bose(order, eta)
        too_far = g < target
        high, low = np.where(too_far, w, high), np.where(too_far, low, w)
        step = (log(target) - log(g)) * g / (bose(order - 1.0, eta) * eta)
        after = w + step
        after = np.where((after > low) & (after < high), after, 0.5 * (low + high))
        done = np.abs(after - w) <= _TOLERANCE * np.maximum(1.0, np.abs(w))
        w = after
        if np.all(done):
            return -exp(w)
    raise ConvergenceError("the chemical potential of the boson gas did not converge", -exp(w))
