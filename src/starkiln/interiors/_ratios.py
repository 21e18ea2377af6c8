"""Radiation pressure against gas pressure in a star of given mass."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.errors import InputError
from starkiln.interiors._standard import standard_model
from starkiln.interiors._zero_age import zero_age_luminosity
from starkiln.matter import Composition, composition, eddington_factor, thomson_opacity


@dataclass(frozen=True)
class PressureRatio:
    """How much of a star's pressure is light; every field has the shape of the masses.

    Attributes
    ----------
    mass : astropy.units.Quantity
        solMass.
    mu : numpy.ndarray
        Mean particle weight.
    radiation_fraction, radiation_to_gas : numpy.ndarray
        P_rad over the total and over the gas pressure, each the ratio of the
        integrals over the star's volume.
    radiation_fraction_core, radiation_to_gas_core : numpy.ndarray
        The same two at the centre.
    gamma_e : numpy.ndarray
        Eddington factor of electron scattering at the surface, NaN where the
        luminosity is not known.
    radius, luminosity, temperature : astropy.units.Quantity or None
        solRad, solLum and K (effective) of the model; None for the standard
        model, which does not have them.
    """

    mass: Any
    mu: np.ndarray
    radiation_fraction: np.ndarray
    radiation_to_gas: np.ndarray
    radiation_fraction_core: np.ndarray
    radiation_to_gas_core: np.ndarray
    gamma_e: np.ndarray
    radius: Any = None
    luminosity: Any = None
    temperature: Any = None


def pressure_ratio(
    mass: Any,
    *,
    hydrogen: float = 0.70,
    metals: float = 0.02,
    mu: float | None = None,
    model: str = "standard",
) -> PressureRatio:
    """Return the ratios of radiation to gas pressure of stars of given mass.

    Parameters
    ----------
    mass : astropy.units.Quantity or array_like
        Bare numbers in solMass.
    hydrogen, metals : float
        Mass fractions X and Z.
    mu : float, optional
        Mean particle weight in place of that of X and Z (`standard` only).
    model : {"standard"}
        `standard`: Eddington's standard model, whose light carries the same share
        of the pressure everywhere; its `gamma_e` takes the zero-age luminosity of
        Tout et al. 1996 (0.1 to 100 solMass, NaN beyond).

    Returns
    -------
    PressureRatio

    Raises
    ------
    InputError
        A value out of bounds, or a model that is unknown.
    """
    if model not in _MODELS:
        raise InputError(f"model '{model}' is unknown: give one of {', '.join(_MODELS)}")
    mass_sun = as_array(mass, "solMass", "mass", lower=0.0, upper=np.inf, exclusive=True)
    return _MODELS[model](mass_sun, composition(hydrogen, metals), mu)


def _standard(mass_sun: np.ndarray, matter: Composition, mu: float | None) -> PressureRatio:
    from astropy import units as u

    weight = matter.mu if mu is None else mu
    light, gas = standard_model(mass_sun, weight)
    luminosity = zero_age_luminosity(mass_sun, matter.metals)
    return PressureRatio(
        mass=u.Quantity(mass_sun, "solMass"),
        mu=np.broadcast_to(weight, light.shape),
        radiation_fraction=light,
        radiation_to_gas=light / gas,
        radiation_fraction_core=light,
        radiation_to_gas_core=light / gas,
        gamma_e=eddington_factor(luminosity, mass_sun, thomson_opacity(matter)),
    )


_MODELS: dict[str, Callable[[np.ndarray, Composition, float | None], PressureRatio]] = {
    "standard": _standard,
}
