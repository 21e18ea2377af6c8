"""Temperature gradient of layers that radiate, and of layers that boil."""

from __future__ import annotations

import numpy as np

#: Mixing length over pressure scale height: common practice.
MIXING_LENGTH = 1.8


def gradient(radiative: np.ndarray, adiabatic: np.ndarray, loss: np.ndarray) -> np.ndarray:
    """Return d ln T/d ln P by the mixing-length theory.

    Parameters
    ----------
    radiative, adiabatic : numpy.ndarray
        Gradients if all flux were radiated, and of a rising element.
    loss : numpy.ndarray
        U, how far an element leaks its heat.

    Returns
    -------
    numpy.ndarray
        `radiative` where it is the smaller (Schwarzschild's criterion); else the root of
        (xi - U)^3 + (8 U/9)(xi^2 - U^2 - W) = 0, W = radiative - adiabatic, which gives
        adiabatic + xi^2 - U^2: Kippenhahn, Weigert & Weiss 2012, eqs. 7.15-7.18 (MEMORY).
    """
    boils = radiative > adiabatic
    excess = np.where(boils, radiative - adiabatic, 0.0)
    u = np.clip(loss, 1e-12, 1e8)
    scaled = 8.0 * u / 9.0
    # The cubic rises and is convex beyond U: from its right Newton's method cannot fail.
    d = np.minimum(np.cbrt(scaled * excess), excess / (np.sqrt(u**2 + excess) + u)) + 1e-300
    for _ in range(40):
        value = d**3 + scaled * (d * (d + 2.0 * u) - excess)
        slope = 3.0 * d**2 + scaled * 2.0 * (d + u)
        change = value / slope
        d = np.maximum(d - change, 0.0)
        if np.all(np.abs(change) <= 1e-12 * d):
            break
    return np.where(boils, adiabatic + d * (d + 2.0 * u), radiative)
