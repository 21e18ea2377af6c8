"""Evolution along the main sequence at constant mass, in thermal equilibrium."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from starkiln.constants import R_SUN, YEAR
from starkiln.errors import ConvergenceError
from starkiln.interiors._burning import HYDROGEN_ENERGY
from starkiln.interiors._henyey import Shells, relax
from starkiln.interiors._local import Problem
from starkiln.interiors._start import Start
from starkiln.interiors._structure import solve_homogeneous, volume_share
from starkiln.matter import Composition, composition

#: Overshoot of the convective core in pressure scale heights: a choice, common practice.
OVERSHOOT = 0.2
#: Where the main sequence ends.
LAST_HYDROGEN = 0.005
#: The largest change of the core's hydrogen in one step, and its largest share.
_STEP, _SHARE = 0.025, 0.25
#: Mass fractions at which the share of light is kept.
DEPTHS = (0.1, 0.25, 0.5, 0.75, 0.9, 0.99)


@dataclass(frozen=True)
class Epoch:
    """A star at one moment of its main sequence.

    Attributes
    ----------
    age_s : float
        Seconds since zero age.
    hydrogen : float
        X at the centre.
    problem, shells : Problem, Shells
        The model.
    """

    age_s: float
    hydrogen: float
    problem: Problem
    shells: Shells


def evolve(mass_sun: float, matter: Composition, start: Start | None = None) -> list[Epoch]:
    """Return the main sequence of a star, from zero age to X = 0.005 at the centre.

    Parameters
    ----------
    mass_sun : float
        Solar masses.
    matter : Composition
        At zero age, even throughout.
    start : Start, optional
        A converged zero-age model near by.

    Returns
    -------
    list of Epoch
        Shorter than the main sequence where a model could not be found any more.

    Notes
    -----
    The convective core (Schwarzschild's criterion) and `OVERSHOOT` scale heights beyond
    it are mixed at once; elsewhere hydrogen burns where it is. Energy from contraction,
    mass loss, rotation and semiconvective mixing are left out.
    """
    problem, shells = solve_homogeneous(mass_sun, matter, start=start)
    epochs = [Epoch(0.0, matter.hydrogen, problem, shells)]
    while epochs[-1].hydrogen > LAST_HYDROGEN:
        try:
            epochs.append(_advance(epochs, matter))
        except ConvergenceError:
            break
    return epochs


def _advance(epochs: list[Epoch], matter: Composition) -> Epoch:
    last = epochs[-1]
    drop = min(_STEP, max(_SHARE * last.hydrogen, 0.002))
    trend = np.zeros_like(last.shells.unknowns)
    if len(epochs) > 1:
        before = epochs[-2]
        trend = last.shells.unknowns - before.shells.unknowns
        trend = trend / (before.hydrogen - last.hydrogen)
    for _ in range(6):
        try:
            return _step(last, matter, drop, last.shells.unknowns + drop * trend)
        except ConvergenceError:
            drop *= 0.5
    raise ConvergenceError("the star could not be led on", partial=last)


def _step(epoch: Epoch, matter: Composition, drop: float, guess: np.ndarray) -> Epoch:
    problem, shells = epoch.problem, epoch.shells
    rate, edge = _core(problem, shells)
    time = drop / rate
    burnt = problem.hydrogen - time * shells.burning / HYDROGEN_ENERGY
    hydrogen = np.maximum(_mixed(problem, np.maximum(burnt, 0.0), edge), 0.0)
    new = _with_hydrogen(problem, hydrogen, matter)
    found = relax(new, guess)
    # The rate grows along the step: the mean of both ends is of second order in time.
    later, _ = _core(new, found)
    time = drop * 0.5 * (1.0 / rate + 1.0 / later)
    return Epoch(epoch.age_s + time, float(hydrogen[0]), new, found)


def _core(problem: Problem, shells: Shells) -> tuple[float, float]:
    """Return the fall of hydrogen in the mixed core per second, and the core's m/M."""
    edge = mixed_fraction(problem, shells)
    q = problem.mesh.fraction
    inside = q <= edge
    grid = np.concatenate([[0.0], q[inside], [edge]])
    burning = np.interp(grid, q, shells.burning)
    mean = np.trapezoid(burning, grid) / edge
    return mean / HYDROGEN_ENERGY, edge


def mixed_fraction(problem: Problem, shells: Shells) -> float:
    """Return m/M within which convection and overshoot mix."""
    q = problem.mesh.fraction
    excess = shells.radiative - shells.state.adiabatic_gradient
    stable = np.flatnonzero(excess < 0.0)
    if stable.size == 0 or stable[0] == 0:
        return float(q[1])
    k = int(stable[0])
    share = excess[k - 1] / (excess[k - 1] - excess[k])
    log_p, radius = np.log(shells.state.pressure), np.exp(shells.unknowns[0])
    edge_p = log_p[k - 1] + share * (log_p[k] - log_p[k - 1])
    edge_r = radius[k - 1] + share * (radius[k] - radius[k - 1])
    # No overshoot beyond a fifth of the core's own radius, where the scale height is larger.
    height = (radius[k] - radius[k - 1]) / (log_p[k - 1] - log_p[k])
    reach = OVERSHOOT * min(1.0, edge_r / height)
    return float(np.interp(-(edge_p - reach), -log_p, q))


def _mixed(problem: Problem, hydrogen: np.ndarray, edge: float) -> np.ndarray:
    q = problem.mesh.fraction
    grid = np.concatenate([[0.0], q[q < edge], [edge]])
    mean = np.trapezoid(np.interp(grid, q, hydrogen), grid) / edge
    # The point that the edge falls beside gets its share, lest the core grow by jumps.
    k = int(np.searchsorted(q, edge))
    out = np.where(q < edge, mean, hydrogen)
    if 0 < k < q.size:
        half = 0.5 * (q[k] + q[k - 1])
        if edge > half:
            share = (edge - half) / (q[k] - half)
            out[k] = share * mean + (1.0 - share) * hydrogen[k]
    return out


def _with_hydrogen(problem: Problem, hydrogen: np.ndarray, matter: Composition) -> Problem:
    pure, helium = composition(1.0, 0.0), composition(0.0, 0.0)
    rest = 1.0 - hydrogen - matter.metals
    ions = hydrogen / pure.mu_ion + rest / helium.mu_ion + matter.metals * matter.metal_ions
    electrons = hydrogen / pure.mu_electron + rest / helium.mu_electron
    electrons = electrons + matter.metals * matter.metal_electrons
    return replace(problem, hydrogen=hydrogen, ions=ions, electrons=electrons)


def summary(epoch: Epoch) -> np.ndarray:
    """Return what the grid keeps of an epoch, in the order of `QUANTITIES`."""
    shells, problem = epoch.shells, epoch.problem
    y = shells.unknowns
    share = shells.state.radiation_pressure / shells.state.pressure
    light = [share[0], volume_share(shells), *np.interp(DEPTHS, problem.mesh.fraction, share)]
    return np.array(
        [
            np.log10(y[3, -1] * problem.luminosity_w / 3.828e26),
            (y[0, -1] - np.log(R_SUN.value)) / np.log(10.0),
            epoch.age_s / (1e6 * YEAR.value),
            *np.log10(light),
        ]
    )


#: Columns of `summary`.
QUANTITIES = (
    "log_luminosity",
    "log_radius",
    "age_myr",
    "log_share_core",
    "log_share_volume",
    *(f"log_share_{depth:g}" for depth in DEPTHS),
)
