"""Recoil and Doppler corrections, to first order in v/c."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C, H
from starkiln.forces._inputs import give, speed_ratio


@dataclass(frozen=True, eq=False)
class Recoil:
    """What one photon does to the particle that absorbs or emits it.

    Attributes
    ----------
    momentum : Quantity
        h nu / c, kg m s-1.
    velocity : Quantity
        Momentum over mass, m s-1.
    energy : Quantity
        (h nu)^2 / 2 m c^2, J.
    frequency_shift : Quantity
        Energy over h, Hz: a line is absorbed this much above and emitted this much
        below the transition frequency.
    """

    momentum: Any
    velocity: Any
    energy: Any
    frequency_shift: Any


def recoil(photon: Any, mass: Any) -> Recoil:
    """Return the recoil of a particle from one photon.

    Parameters
    ----------
    photon : Quantity or array_like
        Wavelength, frequency or energy; a bare number is a wavelength in m.
    mass : Quantity or array_like
        Of the particle, kg when bare, above 0.
    """
    equivalencies: Any = ()
    if hasattr(photon, "unit"):
        from astropy import units as u

        equivalencies = u.spectral()
    wavelength = as_array(
        photon, "m", "wavelength", lower=0.0, exclusive=True, equivalencies=equivalencies
    )
    kilograms = as_array(mass, "kg", "mass", lower=0.0, exclusive=True)
    momentum = H.value / wavelength
    energy = 0.5 * momentum**2 / kilograms
    return Recoil(
        give(momentum, "kg m / s"),
        give(momentum / kilograms, "m / s"),
        give(energy, "J"),
        give(energy / H.value, "Hz"),
    )


def doppler_factor(velocity: Any) -> np.ndarray:
    """Return nu'/nu = 1 - v/c of light received by matter that recedes at v (km/s when bare).

    Absorbed power per area falls by its square, 1 - 2 v/c: photons come at a lower
    rate and with less energy each. A mirror reflects 1 - 2 v/c of the frequency.
    """
    return 1.0 - speed_ratio(velocity)


def moving_acceleration(
    acceleration: Any, radial_velocity: Any, transverse_velocity: Any
) -> tuple[Any, Any]:
    """Return the acceleration by light of a small body that moves, to first order.

    Parameters
    ----------
    acceleration : Quantity or array_like
        By light when at rest, m s-2 when bare.
    radial_velocity, transverse_velocity : Quantity or array_like
        km/s when bare; the first away from the source.

    Returns
    -------
    radial, transverse : Quantity
        a (1 - 2 v_r / c) and -a v_t / c, the Poynting-Robertson drag (Robertson 1937,
        MNRAS 97, 423; Burns, Lamy & Soter 1979, Icarus 40, 1, equation 5).
    """
    at_rest = as_array(acceleration, "m / s2", "acceleration")
    radial = at_rest * (1.0 - 2.0 * speed_ratio(radial_velocity, "radial velocity"))
    transverse = -at_rest * speed_ratio(transverse_velocity, "transverse velocity")
    return give(radial, "m / s2"), give(transverse, "m / s2")


def photon_momentum_flux(irradiance: Any) -> Any:
    """Return F / c in Pa, the momentum that light carries; irradiance in W m-2 when bare."""
    return give(as_array(irradiance, "W / m2", "irradiance", lower=0.0) / C.value, "Pa")
