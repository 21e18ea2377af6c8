"""First guesses for the relaxation: a polytrope, or a converged model of another star."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.constants import A_RAD, K_B, L_SUN, M_SUN, M_U, R_SUN, SIGMA_SB, G
from starkiln.interiors import _lane_emden
from starkiln.interiors._local import Problem
from starkiln.interiors._mesh import make_mesh
from starkiln.interiors._polytropes import Polytrope
from starkiln.interiors._standard import standard_model
from starkiln.interiors._zero_age import METALS_RANGE, zero_age_luminosity, zero_age_radius
from starkiln.matter import Composition, OpacityLaw

#: A round opacity of a hot photosphere, m2 kg-1, that places the first surface.
_SURFACE_OPACITY = 0.05


@dataclass(frozen=True)
class Start:
    """A converged model to start another from: its mass, composition and unknowns."""

    mass_sun: float
    matter: Composition
    unknowns: np.ndarray


def expected_size(mass_sun: float, metals: float) -> tuple[float, float]:
    """Return L/Lsun and R/Rsun to start from: zero-age values, continued above 100 Msun."""
    z = min(max(metals, METALS_RANGE[0]), METALS_RANGE[1])
    inside = min(mass_sun, 100.0)
    luminosity = float(zero_age_luminosity(inside, z)) * (mass_sun / inside) ** 1.4
    return luminosity, float(zero_age_radius(inside, z)) * (mass_sun / inside) ** 0.6


def make_problem(
    mass_sun: float,
    matter: Composition,
    points: int,
    law: OpacityLaw,
) -> Problem:
    """Return the problem of a homogeneous star on a mesh that suits its surface."""
    luminosity, radius = expected_size(mass_sun, matter.metals)
    mass_kg, radius_m = mass_sun * M_SUN.value, radius * R_SUN.value
    # 4 pi R^4 P/(G M^2) with the photosphere's P = (2/3) g/kappa.
    skin = 8.0 * np.pi / 3.0 * radius_m**2 / (_SURFACE_OPACITY * mass_kg)
    even = np.ones(points)
    return Problem(
        mass_kg=mass_kg,
        luminosity_w=luminosity * L_SUN.value,
        mesh=make_mesh(points, float(skin)),
        hydrogen=matter.hydrogen * even,
        metals=matter.metals,
        ions=even / matter.mu_ion,
        electrons=even / matter.mu_electron,
        law=law,
    )


def from_polytrope(problem: Problem) -> np.ndarray:
    """Return unknowns of the standard model, with a surface of the effective temperature."""
    mass = problem.mass_kg
    radius_m = expected_size(mass / M_SUN.value, problem.metals)[1] * R_SUN.value
    x, theta = _shape(problem.mesh.fraction)
    particles = problem.ions + problem.electrons
    light, gas = standard_model(mass / M_SUN.value, 1.0 / particles)
    centre = Polytrope(3.0).pressure_coefficient * G.value * mass**2 / radius_m**4
    glow = problem.luminosity_w / (4.0 * np.pi * SIGMA_SB.value * radius_m**2)
    temperature = (3.0 * light * centre * theta**4 / A_RAD.value + glow) ** 0.25
    floor = 2.0 / 3.0 * G.value * mass / radius_m**2 / _SURFACE_OPACITY
    density = (gas * centre * theta**4 + floor) * M_U.value
    density = density / (particles * K_B.value * temperature)
    shine = 1.0 - np.exp(-problem.mesh.fraction / 0.08)
    return np.stack([np.log(x * radius_m), np.log(density), np.log(temperature), shine])


def from_star(start: Start, mass_sun: float, metals: float) -> np.ndarray:
    """Return the unknowns of another star, scaled homologously point by point."""
    old = expected_size(start.mass_sun, start.matter.metals)[1]
    mass = np.log(mass_sun / start.mass_sun)
    radius = np.log(expected_size(mass_sun, metals)[1] / old)
    shift: Any = np.array([radius, mass - 3.0 * radius, mass - radius, 0.0])
    return np.asarray(start.unknowns + shift[:, None])


def _shape(fraction: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    xi, theta, omega = _polytrope_table()
    # Near the centre the mass goes as xi^3, so its cube root is the smooth variable.
    x = np.interp(np.cbrt(fraction), np.cbrt(omega / omega[-1]), xi / xi[-1])
    return x, np.interp(x, xi / xi[-1], theta)


@lru_cache(maxsize=1)
def _polytrope_table() -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    return _lane_emden.profile(_lane_emden.solve(3.0), 600)
