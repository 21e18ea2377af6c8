"""Scattering of light by free electrons, and the luminosity at which it lifts matter."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.constants import L_SUN, M_SUN, M_U, SIGMA_T, C, G
from starkiln.matter._composition import Composition


def thomson_opacity(matter: Composition) -> float:
    """Return sigma_T/(mu_e m_u) in m2 kg-1, every electron counted.

    0.03383 at X = 0.7; the rounded law 0.02 (1 + X) gives 0.0340.
    """
    return SIGMA_T.value / (matter.mu_electron * M_U.value)


def eddington_factor(luminosity_sun: Any, mass_sun: Any, opacity_m2_kg: Any) -> np.ndarray:
    """Return kappa L/(4 pi G M c): light's push over gravity.

    Parameters
    ----------
    luminosity_sun, mass_sun : array_like
        Nominal solar luminosities and solar masses.
    opacity_m2_kg : array_like
        m2 kg-1; `thomson_opacity` for electron scattering.
    """
    unit = L_SUN.value / (4.0 * np.pi * G.value * M_SUN.value * C.value)
    return unit * np.asarray(opacity_m2_kg) * np.asarray(luminosity_sun) / np.asarray(mass_sun)
