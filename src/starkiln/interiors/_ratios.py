"""Radiation pressure against gas pressure in a star of given mass."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import T_SUN
from starkiln.errors import InputError
from starkiln.interiors._grid import load_grid
from starkiln.interiors._standard import standard_model
from starkiln.interiors._structure import checked, structure
from starkiln.interiors._zero_age import zero_age_luminosity
from starkiln.matter import (
    Composition,
    composition,
    eddington_factor,
    hydrogen_of_metals,
    thomson_opacity,
)


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
    model: str = "structure",
    age_fraction: Any = 0.0,
) -> PressureRatio:
    """Return the ratios of radiation to gas pressure of stars of given mass.

    Parameters
    ----------
    mass : astropy.units.Quantity or array_like
        Bare numbers in solMass.
    hydrogen, metals : float
        Mass fractions X and Z at zero age.
    mu : float, optional
        Mean particle weight in place of that of X and Z (`standard` only).
    model : {"structure", "standard"}
        `structure`: models of all four equations, 1.6 to 120 solMass: read between the
        nodes of the shipped grid where X = 0.76 - 3 Z and Z is 0.001 to 0.03 (P_rad/P and
        L within 0.5 per cent of a direct solution, R within 1, or 3 above 40 solMass), else
        solved one by one.
        `standard`: Eddington's standard model of any mass, whose light carries the same
        share of the pressure everywhere; its `gamma_e` takes the zero-age luminosity of
        Tout et al. 1996 (0.1 to 100 solMass, NaN beyond).
    age_fraction : array_like
        Age over the length of the main sequence, 0 to 1 (`structure` on the grid only).

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
    age = as_array(age_fraction, "", "age_fraction", lower=0.0, upper=1.0)
    mass_sun, age = np.broadcast_arrays(mass_sun, age)
    return _MODELS[model](mass_sun, age, composition(hydrogen, metals), mu)


def _standard(
    mass_sun: np.ndarray, age: np.ndarray, matter: Composition, mu: float | None
) -> PressureRatio:
    from astropy import units as u

    if np.any(age > 0.0):
        raise InputError("the standard model knows no age: leave age_fraction out")
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


def _structure(
    mass_sun: np.ndarray, age: np.ndarray, matter: Composition, mu: float | None
) -> PressureRatio:
    from astropy import units as u

    if mu is not None:
        raise InputError(
            "a mean particle weight is no composition: give hydrogen and metals to structure "
            "models, or ask for the standard model"
        )
    for mass in mass_sun.flat:
        checked(mass, matter.hydrogen, matter.metals)
    found = _from_grid if on_grid(matter) else _solved
    log_l, log_r, volume, core = found(mass_sun, age, matter)
    return PressureRatio(
        mass=u.Quantity(mass_sun, "solMass"),
        mu=np.full(mass_sun.shape, matter.mu),
        radiation_fraction=volume,
        radiation_to_gas=volume / (1.0 - volume),
        radiation_fraction_core=core,
        radiation_to_gas_core=core / (1.0 - core),
        gamma_e=eddington_factor(10.0**log_l, mass_sun, thomson_opacity(matter)),
        radius=u.Quantity(10.0**log_r, "solRad"),
        luminosity=u.Quantity(10.0**log_l, "solLum"),
        temperature=u.Quantity(T_SUN.value * 10.0 ** (0.25 * log_l - 0.5 * log_r), "K"),
    )


def on_grid(matter: Composition) -> bool:
    """Return whether the shipped grid holds this composition."""
    low, high = np.exp(load_grid().log_metals)
    usual = abs(matter.hydrogen - float(hydrogen_of_metals(matter.metals))) < 1e-6
    return usual and low * (1.0 - 1e-9) <= matter.metals <= high * (1.0 + 1e-9)


def _from_grid(
    mass_sun: np.ndarray, age: np.ndarray, matter: Composition
) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    grid = load_grid()
    log_mass = np.clip(np.log(mass_sun), *grid.log_mass)
    log_metals = np.clip(np.log(matter.metals), *grid.log_metals)
    models = grid.at(log_mass, grid.stage_of_age(log_mass, age, log_metals), log_metals)
    return models.log_luminosity, models.log_radius, models.share_volume, models.share_core


def _solved(
    mass_sun: np.ndarray, age: np.ndarray, matter: Composition
) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    if np.any(age > 0.0):
        raise InputError(
            "age_fraction needs the grid's composition, X = 0.76 - 3 Z and Z of 0.001 to 0.03"
        )
    models = [
        structure(mass, hydrogen=matter.hydrogen, metals=matter.metals) for mass in mass_sun.flat
    ]
    rows = [
        (
            np.log10(model.luminosity.value),
            np.log10(model.radius.value),
            model.radiation_fraction,
            model.radiation_fraction_core,
        )
        for model in models
    ]
    a, b, c, d = (np.array(column).reshape(mass_sun.shape) for column in zip(*rows, strict=True))
    return a, b, c, d


_Model = Callable[[np.ndarray, np.ndarray, Composition, float | None], PressureRatio]
_MODELS: dict[str, _Model] = {"structure": _structure, "standard": _standard}
