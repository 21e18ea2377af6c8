"""Structure of a homogeneous star: all four equations, solved shell by shell."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_float
from starkiln.constants import L_SUN, R_SUN
from starkiln.errors import ConvergenceError, InputError
from starkiln.interiors._grid import zero_age_starts
from starkiln.interiors._henyey import Shells, relax
from starkiln.interiors._local import Problem
from starkiln.interiors._start import (
    Start,
    from_polytrope,
    from_star,
    make_problem,
)
from starkiln.matter import (
    CALIBRATED,
    Composition,
    OpacityLaw,
    composition,
    eddington_factor,
    hydrogen_of_metals,
    thomson_opacity,
)

#: Solar masses, X and Z for which the physics holds.
MASS_RANGE = (1.6, 120.0)
HYDROGEN_RANGE = (0.3, 0.77)
METALS_RANGE = (1e-4, 0.03)

#: Points of a model: L and R are then within 0.3 per cent of the limit of many.
POINTS = 300
#: From this mass on the polytrope alone leads to the solution.
_EASY_MASS = 5.0
#: Where a walk to other stars begins.
_ANCHOR_MASS = 10.0
#: The largest step in ln M when one model leads to the next.
_STRIDE = 0.6
_MAX_HALVINGS = 6


@dataclass(frozen=True)
class StructureModel:
    """One homogeneous (zero-age) star.

    Attributes
    ----------
    mass, radius, luminosity, temperature : astropy.units.Quantity
        solMass, solRad, solLum and K (effective).
    matter : Composition
        What it is made of.
    mass_fraction : numpy.ndarray
        m/M of the points of the profiles below.
    shell_radius, density, shell_temperature, pressure, radiation_pressure, shell_luminosity, \
opacity : astropy.units.Quantity
        solRad, kg m-3, K, Pa, Pa, solLum, m2 kg-1.
    convective : numpy.ndarray
        Whether the point lies in a convective layer.
    radiation_fraction, radiation_fraction_core : float
        P_rad/P: ratio of the integrals over the volume, and at the centre.
    gamma_e : float
        Eddington factor of electron scattering at the surface.
    """

    mass: Any
    radius: Any
    luminosity: Any
    temperature: Any
    matter: Composition
    mass_fraction: np.ndarray
    shell_radius: Any
    density: Any
    shell_temperature: Any
    pressure: Any
    radiation_pressure: Any
    shell_luminosity: Any
    opacity: Any
    convective: np.ndarray
    radiation_fraction: float
    radiation_fraction_core: float
    gamma_e: float

    def radiation_fraction_at(self, mass_fraction: Any) -> np.ndarray:
        """Return P_rad/P at given m/M, from 0 to 1."""
        share = self.radiation_pressure.value / self.pressure.value
        return np.interp(mass_fraction, self.mass_fraction, share)


def structure(mass: Any, *, hydrogen: float | None = None, metals: float = 0.02) -> StructureModel:
    """Solve for the structure of a homogeneous star in thermal equilibrium.

    Parameters
    ----------
    mass : astropy.units.Quantity or float
        Bare numbers in solMass; 1.6 to 120.
    hydrogen : float, optional
        X, 0.3 to 0.77; 0.76 - 3 Z where it is left out.
    metals : float
        Z, 1e-4 to 0.03.

    Returns
    -------
    StructureModel

    Notes
    -----
    Hydrostatic and thermal balance; gas and light by `matter.gas_state` (fully ionised,
    no Coulomb forces); pp chains and CNO cycle; mixing-length convection; opacity by
    `matter.rosseland_opacity`, some of whose constants are calibrated on the zero-age
    models of Tout et al. 1996; grey photosphere; no mass loss, rotation or diffusion.

    Raises
    ------
    InputError
        A value outside the range of the physics.
    ConvergenceError
        No model was found.
    """
    mass_sun, matter = checked(mass, hydrogen, metals)
    problem, shells = solve_homogeneous(mass_sun, matter, start=_nearest(mass_sun, matter))
    return _model(mass_sun, matter, problem, shells)


def _nearest(mass_sun: float, matter: Composition) -> Start:
    """Return the nearest of the shipped zero-age models."""
    masses, metals, unknowns = zero_age_starts()
    i = int(np.argmin(np.abs(np.log(metals / matter.metals))))
    j = int(np.argmin(np.abs(np.log(masses / mass_sun))))
    z = float(metals[i])
    usual = composition(float(hydrogen_of_metals(z)), z)
    # The file keeps some of the points, even in their number.
    kept = unknowns[i, j]
    place = np.linspace(0.0, kept.shape[1] - 1.0, POINTS)
    every = np.arange(kept.shape[1])
    return Start(float(masses[j]), usual, np.stack([np.interp(place, every, row) for row in kept]))


def checked(mass: Any, hydrogen: float | None, metals: float) -> tuple[float, Composition]:
    """Return the mass and the composition, or refuse them with the reason."""
    mass_sun = as_float(mass, "solMass", "mass", lower=0.0, exclusive=True)
    if mass_sun < MASS_RANGE[0]:
        raise InputError(
            f"mass = {mass_sun:.6g} solMass is out of bounds: structure models need at least "
            f"{MASS_RANGE[0]:g} solMass, because partial ionisation is left out; the standard "
            f"model takes any mass"
        )
    if mass_sun > MASS_RANGE[1]:
        raise InputError(
            f"mass = {mass_sun:.6g} solMass is out of bounds: structure models need at most "
            f"{MASS_RANGE[1]:g} solMass, because mass loss is left out; the standard model takes "
            f"any mass"
        )
    x = float(hydrogen_of_metals(metals)) if hydrogen is None else hydrogen
    matter = composition(x, metals)
    for name, value, (low, high) in (
        ("X", x, HYDROGEN_RANGE),
        ("Z", metals, METALS_RANGE),
    ):
        if not low <= value <= high:
            raise InputError(
                f"{name} = {value:.6g} is out of bounds: structure models need a mass fraction "
                f"between {low:g} and {high:g}"
            )
    return mass_sun, matter


def solve_homogeneous(
    mass_sun: float,
    matter: Composition,
    *,
    start: Start | None = None,
    law: OpacityLaw = CALIBRATED,
    points: int = POINTS,
) -> tuple[Problem, Shells]:
    """Solve one homogeneous star, from a known one or from a polytrope.

    Parameters
    ----------
    mass_sun : float
        Solar masses.
    matter : Composition
    start : Start, optional
        A converged model with the same number of points.
    law : OpacityLaw
    points : int

    Raises
    ------
    ConvergenceError
        No path led to the solution.
    """
    problem = make_problem(mass_sun, matter, points, law)
    if start is None and mass_sun >= _EASY_MASS:
        try:
            return problem, relax(problem, from_polytrope(problem))
        except ConvergenceError:
            pass
    if start is None:
        usual = composition(0.70, 0.02)
        first = make_problem(_ANCHOR_MASS, usual, points, law)
        start = Start(_ANCHOR_MASS, usual, relax(first, from_polytrope(first)).unknowns)
    return _lead(start, mass_sun, matter, law, points)


def _lead(
    start: Start, mass_sun: float, matter: Composition, law: OpacityLaw, points: int
) -> tuple[Problem, Shells]:
    """Walk from a known star to another in steps of mass and composition."""
    far = np.log(mass_sun / start.mass_sun)
    steps = max(1, int(np.ceil(abs(far) / _STRIDE)))
    for _ in range(_MAX_HALVINGS):
        try:
            known = start
            for share in np.linspace(0.0, 1.0, steps + 1)[1:]:
                mass = start.mass_sun * float(np.exp(share * far))
                mixed = _between(start.matter, matter, float(share))
                problem = make_problem(mass, mixed, points, law)
                shells = relax(problem, from_star(known, mass, mixed.metals))
                known = Start(mass, mixed, shells.unknowns)
            return problem, shells
        except ConvergenceError:
            steps *= 2
    raise ConvergenceError(
        f"no structure was found at {mass_sun:g} solMass, X = {matter.hydrogen:g}, "
        f"Z = {matter.metals:g}: its outer layers may be too close to the limit of light"
    )


def _between(first: Composition, last: Composition, share: float) -> Composition:
    hydrogen = first.hydrogen + share * (last.hydrogen - first.hydrogen)
    metals = first.metals * (last.metals / first.metals) ** share
    return last if share == 1.0 else composition(hydrogen, metals)


def _model(
    mass_sun: float, matter: Composition, problem: Problem, shells: Shells
) -> StructureModel:
    from astropy import units as u

    y, state = shells.unknowns, shells.state
    radius_m, luminosity_w = np.exp(y[0]), y[3] * problem.luminosity_w
    luminosity = luminosity_w[-1] / L_SUN.value
    return StructureModel(
        mass=u.Quantity(mass_sun, "solMass"),
        radius=u.Quantity(radius_m[-1] / R_SUN.value, "solRad"),
        luminosity=u.Quantity(luminosity, "solLum"),
        temperature=u.Quantity(np.exp(y[2, -1]), "K"),
        matter=matter,
        mass_fraction=problem.mesh.fraction,
        shell_radius=u.Quantity(radius_m / R_SUN.value, "solRad"),
        density=u.Quantity(state.density, "kg m-3"),
        shell_temperature=u.Quantity(state.temperature, "K"),
        pressure=u.Quantity(state.pressure, "Pa"),
        radiation_pressure=u.Quantity(state.radiation_pressure, "Pa"),
        shell_luminosity=u.Quantity(luminosity_w / L_SUN.value, "solLum"),
        opacity=u.Quantity(shells.opacity, "m2 kg-1"),
        convective=shells.radiative > state.adiabatic_gradient,
        radiation_fraction=volume_share(shells),
        radiation_fraction_core=float(state.radiation_pressure[0] / state.pressure[0]),
        gamma_e=float(eddington_factor(luminosity, mass_sun, thomson_opacity(matter))),
    )


def volume_share(shells: Shells) -> float:
    """Return the integral of P_rad dV over that of P dV."""
    volume = np.exp(3.0 * shells.unknowns[0])
    light, total = shells.state.radiation_pressure, shells.state.pressure
    inner = volume[0] * light[0], volume[0] * total[0]
    return float(
        (inner[0] + np.trapezoid(light, volume)) / (inner[1] + np.trapezoid(total, volume))
    )
