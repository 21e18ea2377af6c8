"""From draws of the parameters to draws of what the observer quotes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from starkiln.constants import L_SUN, MAS_RAD, PARSEC, R_SUN, SIGMA_SB
from starkiln.inference import Problem


@dataclass(frozen=True)
class Quantity:
    """One column of the results.

    Attributes
    ----------
    unit : str
        As astropy spells it; empty for a pure number.
    text : str
        What it is.
    ucd : str
        Its Unified Content Descriptor (IVOA UCD1+ vocabulary).
    """

    unit: str
    text: str
    ucd: str


#: Every quantity that a result can hold, in the order of its columns.
QUANTITIES: dict[str, Quantity] = {
    "temperature": Quantity("K", "effective temperature", "phys.temperature.effective"),
    "angular_diameter": Quantity("mas", "angular diameter", "phys.angSize"),
    "av": Quantity("mag", "extinction at 0.55 um", "phys.absorption;em.opt.V"),
    "misfit": Quantity("", "fractional departure from the emitter, per band", "stat.stdev"),
    "bolometric_flux": Quantity("W / m2", "sigma T^4 theta^2 / 4, before dust", "phot.flux.bol"),
    "distance": Quantity("pc", "distance", "pos.distance"),
    "radius": Quantity("solRad", "radius, nominal solar radii (IAU 2015 B3)", "phys.size.radius"),
    "luminosity": Quantity(
        "solLum", "luminosity, nominal solar luminosities (IAU 2015 B3)", "phys.luminosity"
    ),
    "rv": Quantity("", "ratio of total to selective extinction R_V", "phys.absorption"),
    "logg": Quantity("dex(cm / s2)", "surface gravity", "phys.gravity"),
    "feh": Quantity("dex", "metallicity [Fe/H]", "phys.abund.Z"),
    "temperature_2": Quantity("K", "temperature of the second component", "phys.temperature"),
    "area_ratio": Quantity(
        "", "area of the second component over the first", "phys.area;arith.ratio"
    ),
}


def bolometric_flux(temperature_k: np.ndarray, diameter_mas: np.ndarray) -> np.ndarray:
    """Return sigma T^4 theta^2 / 4 in W m-2, the flux at Earth before dust.

    Parameters
    ----------
    temperature_k, diameter_mas : numpy.ndarray
        Effective temperature and angular diameter; broadcast.
    """
    half_angle = 0.5 * diameter_mas * MAS_RAD.value
    return SIGMA_SB.value * temperature_k**4 * half_angle**2


def quantities_of(
    problem: Problem, x: np.ndarray, distance_pc: np.ndarray | None
) -> dict[str, np.ndarray]:
    """Return draws of every quantity of the results.

    Parameters
    ----------
    problem : Problem
    x : numpy.ndarray
        Draws of its parameters, shape (n, n_parameters).
    distance_pc : numpy.ndarray or None
        Independent draws of the distance, shape (n,).

    Returns
    -------
    dict of numpy.ndarray
        In the order and units of `QUANTITIES`; distance, radius (theta d / 2) and
        luminosity (4 pi d^2 F_bol) only where a distance is given.
    """
    temperature = np.exp(problem.column(x, "ln_temperature"))
    diameter = np.exp(problem.column(x, "ln_diameter"))
    draws = {
        "temperature": temperature,
        "angular_diameter": diameter,
        "av": problem.av(x),
        "misfit": problem.misfit(x),
        "bolometric_flux": bolometric_flux(temperature, diameter),
    }
    if distance_pc is not None:
        distance_m = distance_pc * PARSEC.value
        draws["distance"] = distance_pc
        draws["radius"] = 0.5 * diameter * MAS_RAD.value * distance_m / R_SUN.value
        draws["luminosity"] = 4.0 * np.pi * distance_m**2 * draws["bolometric_flux"] / L_SUN.value
    for name in problem.names:
        if name in QUANTITIES and name not in draws:
            draws[name] = problem.column(x, name)
    for name, value in getattr(problem.emitter, "given", {}).items():
        # Fixed, but this star's own: told beside the others'.
        draws[name] = np.full(len(x), value)
    if problem.star.rv is not None and "rv" not in draws:
        # Fixed, but this star's own: told beside the others' default.
        draws["rv"] = np.full(len(x), problem.star.rv)
    return {name: draws[name] for name in QUANTITIES if name in draws}


def interval(draws: np.ndarray) -> tuple[float, float, float]:
    """Return the median and the 16th and 84th percentiles of `draws`."""
    low, middle, high = np.percentile(draws, [16.0, 50.0, 84.0])
    return float(middle), float(low), float(high)


def intervals(draws: Mapping[str, np.ndarray]) -> dict[str, tuple[float, float, float]]:
    """Return `interval` of each quantity."""
    return {name: interval(values) for name, values in draws.items()}
