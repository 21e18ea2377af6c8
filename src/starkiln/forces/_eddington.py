"""The Eddington limit: where light outweighs gravity."""

from __future__ import annotations

import math
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import SIGMA_SB, C
from starkiln.forces._inputs import give, gm, metres, watts
from starkiln.matter import composition, thomson_opacity


def electron_opacity(hydrogen: Any = 0.7, *, metals: Any = 0.0) -> Any:
    """Return the Thomson-scattering opacity of a fully ionised gas.

    Parameters
    ----------
    hydrogen, metals : float or array_like
        Mass fractions X and Z, each from 0 to 1; the rest is helium.

    Returns
    -------
    Quantity
        m2 kg-1, electrons counted by atomic weights as in `starkiln.matter`; 0.03383 at
        X = 0.7. The textbook's 0.2 (1 + X) cm2 g-1 is 0.5 per cent higher.
    """
    x = as_array(hydrogen, "", "hydrogen mass fraction", lower=0.0, upper=1.0)
    z = as_array(metals, "", "metal mass fraction", lower=0.0, upper=1.0)
    y = as_array(1.0 - x - z, "", "helium mass fraction 1 - X - Z", lower=-1e-12)
    of_hydrogen, of_helium, of_metals = _pure_opacities()
    return give(x * of_hydrogen + y * of_helium + z * of_metals, "m2 / kg")


@lru_cache(maxsize=1)
def _pure_opacities() -> tuple[float, float, float]:
    """Return the opacities in m2 kg-1 of hydrogen, helium and metals, which add by mass."""
    pure = ((1.0, 0.0), (0.0, 0.0), (0.0, 1.0))
    x, y, z = (thomson_opacity(composition(*fractions)) for fractions in pure)
    return x, y, z


def eddington_luminosity(mass: Any, *, opacity: Any = None, hydrogen: Any = 0.7) -> Any:
    """Return 4 pi G M c / kappa, the luminosity that balances gravity.

    Parameters
    ----------
    mass : Quantity or array_like
        solMass when bare, above 0.
    opacity : Quantity or array_like, optional
        cm2 g-1 when bare, above 0; that of electrons by default.
    hydrogen : float or array_like
        Mass fraction for the electrons' opacity, where `opacity` is not given.

    Returns
    -------
    Quantity
        W (Eddington 1926, The Internal Constitution of the Stars).
    """
    kappa = _opacity(opacity, hydrogen)
    return give(4.0 * math.pi * C.value * gm(mass) / kappa, "W")


def eddington_factor(
    luminosity: Any, mass: Any, *, opacity: Any = None, hydrogen: Any = 0.7
) -> np.ndarray:
    """Return Gamma = kappa L / 4 pi G M c, light's push over gravity.

    `luminosity` in solLum when bare; the others as for `eddington_luminosity`.
    """
    kappa = _opacity(opacity, hydrogen)
    return kappa * watts(luminosity) / (4.0 * math.pi * C.value * gm(mass))


def surface_eddington_factor(
    temperature: Any, gravity: Any, *, opacity: Any = None, hydrogen: Any = 0.7
) -> np.ndarray:
    """Return Gamma = kappa sigma T^4 / c g, from spectroscopy alone: no distance is needed.

    Parameters
    ----------
    temperature : Quantity or array_like
        Effective temperature, K.
    gravity : Quantity or array_like
        Surface gravity, m s-2 when bare; from log g [cgs] it is 10**(log g - 2).
    opacity, hydrogen
        As for `eddington_luminosity`.
    """
    kelvin = as_array(temperature, "K", "temperature", lower=0.0)
    g = as_array(gravity, "m / s2", "gravity", lower=0.0, exclusive=True)
    return _opacity(opacity, hydrogen) * SIGMA_SB.value * kelvin**4 / (C.value * g)


def eddington_temperature(gravity: Any, *, opacity: Any = None, hydrogen: Any = 0.7) -> Any:
    """Return the effective temperature at which Gamma = 1 (see `surface_eddington_factor`)."""
    g = as_array(gravity, "m / s2", "gravity", lower=0.0, exclusive=True)
    return give((C.value * g / (_opacity(opacity, hydrogen) * SIGMA_SB.value)) ** 0.25, "K")


def eddington_mass(luminosity: Any, *, opacity: Any = None, hydrogen: Any = 0.7) -> Any:
    """Return the least mass (solMass) that holds itself together at a luminosity."""
    from starkiln.constants import GM_SUN

    kappa = _opacity(opacity, hydrogen)
    balance = kappa * watts(luminosity) / (4.0 * math.pi * C.value)
    return give(balance / GM_SUN.value, "solMass")


def radiative_acceleration(irradiance: Any, opacity: Any) -> Any:
    """Return kappa F / c in m s-2; irradiance in W m-2 and opacity in cm2 g-1 when bare."""
    flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
    return give(_opacity(opacity, 0.0) * flux / C.value, "m / s2")


def gravity_at(mass: Any, distance: Any) -> Any:
    """Return G M / r^2 in m s-2; solMass and au when bare."""
    return give(gm(mass) / metres(distance) ** 2, "m / s2")


def _opacity(opacity: Any, hydrogen: Any) -> np.ndarray:
    if opacity is None:
        return np.asarray(electron_opacity(hydrogen).value)
    return as_array(opacity, "cm2 / g", "opacity", lower=0.0, exclusive=True) * 0.1
