"""Relaxation of all shells at once (Henyey, Forbes & Gould 1964, ApJ 139, 306).

The four unknowns of each point are ln r, ln rho, ln T and L over a reference; the four
equations of each interval are central differences in the number of the point, of second
order. The matrix has eleven diagonals and is solved directly.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from starkiln.constants import A_RAD, SIGMA_SB, C, G
from starkiln.errors import ConvergenceError
from starkiln.interiors._burning import burning_rate
from starkiln.interiors._convection import MIXING_LENGTH, gradient
from starkiln.interiors._mesh import Mesh
from starkiln.matter import GasState, OpacityLaw, gas_state_si, rosseland_opacity

_LIMIT = np.array([0.3, 0.8, 0.25, 1.0])[:, None]
_MAX_STEPS = 60
_NUDGE = 1e-5


@dataclass(frozen=True)
class Problem:
    """What the star is made of, shell by shell, and on which mesh.

    Attributes
    ----------
    mass_kg, luminosity_w : float
        Mass, and the luminosity that scales the unknown.
    mesh : Mesh
        Mass fractions.
    hydrogen : numpy.ndarray
        X at each point.
    metals : float
        Z.
    ions, electrons : numpy.ndarray
        Per atomic mass unit, at each point.
    law : OpacityLaw
        The opacity's calibrated constants.
    """

    mass_kg: float
    luminosity_w: float
    mesh: Mesh
    hydrogen: np.ndarray
    metals: float
    ions: np.ndarray
    electrons: np.ndarray
    law: OpacityLaw


@dataclass(frozen=True)
class Shells:
    """A converged model, and what was computed on the way.

    Attributes
    ----------
    unknowns : numpy.ndarray
        (4, points): ln r (m), ln rho (kg m-3), ln T (K), L over the reference.
    state : GasState
        Pressure and its derivatives.
    opacity, burning, nabla, radiative : numpy.ndarray
        m2 kg-1, W kg-1, and the actual and the radiative d ln T/d ln P.
    steps : int
        Newton steps taken.
    """

    unknowns: np.ndarray
    state: GasState
    opacity: np.ndarray
    burning: np.ndarray
    nabla: np.ndarray
    radiative: np.ndarray
    steps: int


def relax(problem: Problem, start: np.ndarray, tolerance: float = 1e-6) -> Shells:
    """Solve for the structure by damped Newton steps.

    Parameters
    ----------
    problem : Problem
    start : numpy.ndarray
        (4, points), the first guess of the unknowns.
    tolerance : float
        Largest step in any unknown at which to stop.

    Raises
    ------
    ConvergenceError
        Not converged in 60 steps, or the model left the range of the physics.
    """
    from scipy.linalg import solve_banded

    y = start.copy()
    eta: np.ndarray | None = None
    for step in range(1, _MAX_STEPS + 1):
        local = _Local(problem, y, eta)
        eta = local.state.eta
        residual, diagonals = _system(problem, y, local)
        change = solve_banded((5, 5), diagonals, -residual, check_finite=False)
        change = change.reshape(-1, 4).T
        if not np.all(np.isfinite(change)):
            break
        size = float(np.max(np.abs(change) / _LIMIT))
        damping = min(1.0, 1.0 / size) if size > 0.0 else 1.0
        y = y + damping * change
        eta = eta + damping * (change[1] - 1.5 * change[2])
        if size * _LIMIT.max() < tolerance:
            last = _Local(problem, y, eta)
            return Shells(
                y, last.state, last.opacity, last.burning, last.nabla, last.radiative, step
            )
        if np.any(np.abs(y[:3]) > 100.0):
            break
    raise ConvergenceError("the structure did not converge", partial=y)


class _Local:
    """Physics at each point, with derivatives by the point's own unknowns."""

    def __init__(self, problem: Problem, y: np.ndarray, eta: np.ndarray | None) -> None:
        self.problem = problem
        rho, t = np.exp(y[1]), np.exp(y[2])
        self.state = gas_state_si(rho, t, problem.ions, problem.electrons, eta)
        s = self.state
        self._light = s.radiation_pressure / s.pressure
        self._nabla_ad = s.adiabatic_gradient
        self._ad_formula = _mixture_gradient(1.0 - self._light)
        self._delta = s.chi_t / s.chi_rho
        self._heat = s.heat_capacity_p
        self._mass = problem.mesh.fraction * problem.mass_kg
        self.opacity = self._opacity(y)
        self.burning = self._burning(y)
        self.nabla, self.radiative = self._gradient(y, y)
        self.d_opacity = self._slopes(y, self._log_opacity)
        self.d_burning = self._slopes(y, self._burning)
        self.d_nabla = self._slopes(y, lambda z: self._gradient(z, y)[0])

    def _opacity(self, y: np.ndarray) -> np.ndarray:
        p = self.problem
        return rosseland_opacity(np.exp(y[1]), np.exp(y[2]), p.hydrogen, p.metals, p.law)

    def _log_opacity(self, y: np.ndarray) -> np.ndarray:
        return np.log(self._opacity(y))

    def _burning(self, y: np.ndarray) -> np.ndarray:
        p = self.problem
        return burning_rate(np.exp(y[1]), np.exp(y[2]), p.hydrogen, p.metals)

    def _slopes(self, y: np.ndarray, function: Callable[[np.ndarray], np.ndarray]) -> np.ndarray:
        base = function(y)
        out = np.empty((4, y.shape[1]))
        for i in range(4):
            nudged = y.copy()
            nudged[i] += _NUDGE
            out[i] = (function(nudged) - base) / _NUDGE
        return out

    def _gradient(self, z: np.ndarray, y: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return the actual and the radiative gradient at unknowns z near y."""
        s = self.state
        d_rho, d_t = z[1] - y[1], z[2] - y[2]
        pressure = s.pressure * np.exp(s.chi_rho * d_rho + s.chi_t * d_t)
        rho, t = np.exp(z[1]), np.exp(z[2])
        light = self._light * np.exp(4.0 * d_t) * s.pressure / pressure
        adiabatic = self._nabla_ad + _mixture_gradient(1.0 - light) - self._ad_formula
        opacity = self._opacity(z)
        flux = 3.0 * opacity * z[3] * self.problem.luminosity_w * pressure
        radiative = flux / (16.0 * np.pi * A_RAD.value * C.value * G.value * self._mass * t**4)
        gravity = G.value * self._mass * np.exp(-2.0 * z[0])
        height = pressure / (rho * gravity)
        loss = 3.0 * A_RAD.value * C.value * t**3
        loss = loss / (self._heat * rho**2 * opacity * (MIXING_LENGTH * height) ** 2)
        loss = loss * np.sqrt(8.0 * height / (gravity * self._delta))
        return gradient(radiative, adiabatic, loss), radiative


def _mixture_gradient(beta: np.ndarray) -> np.ndarray:
    """Return the adiabatic gradient of an ideal gas with a share 1 - beta of light.

    Kippenhahn, Weigert & Weiss 2012, eq. 13.21 (MEMORY); used only for the change of
    the exact gradient from one Newton step to the next.
    """
    term = (1.0 - beta) * (4.0 + beta) / beta**2
    return (1.0 + term) / (2.5 + 4.0 * term)


def _system(problem: Problem, y: np.ndarray, local: _Local) -> tuple[np.ndarray, np.ndarray]:
    """Return the residuals, in the order of the rows, and the matrix's diagonals."""
    points = y.shape[1]
    mass = problem.mesh.fraction * problem.mass_kg
    slope = problem.mesh.slope * problem.mass_kg
    step = np.diff(mass)
    s = local.state
    log_p = np.log(s.pressure)
    pull = slope * G.value * mass * np.exp(-4.0 * y[0]) / (4.0 * np.pi * s.pressure)
    drop = pull * local.nabla
    cube = np.exp(3.0 * y[0])
    space = 3.0 / (8.0 * np.pi * s.density)
    heat = local.burning / (2.0 * problem.luminosity_w)
    equations = np.stack(
        [
            np.diff(log_p) + 0.5 * (pull[:-1] + pull[1:]),
            (np.diff(cube) - step * (space[:-1] + space[1:])) / cube[1:],
            np.diff(y[3]) - step * (heat[:-1] + heat[1:]),
            np.diff(y[2]) + 0.5 * (drop[:-1] + drop[1:]),
        ]
    )
    # Derivatives of the four equations by the unknowns of the near (a) and far (b) point.
    a, b = np.zeros((4, 4, points)), np.zeros((4, 4, points))
    by_log = np.zeros((4, points))
    by_log[0], by_log[1], by_log[2] = -4.0, -s.chi_rho, -s.chi_t
    half_pull = 0.5 * pull * by_log
    half_drop = 0.5 * (drop * by_log + pull * local.d_nabla)
    for block, sign in ((a, -1.0), (b, 1.0)):
        block[0] = half_pull
        block[0, 1] += sign * s.chi_rho
        block[0, 2] += sign * s.chi_t
        block[3] = half_drop
        block[3, 2] += sign
        block[2, 3] = sign
    a[1, 0, :-1] = -3.0 * cube[:-1] / cube[1:]
    a[1, 1, :-1] = step * space[:-1] / cube[1:]
    b[1, 0, 1:] = 3.0 * (cube[:-1] + step * (space[:-1] + space[1:])) / cube[1:]
    b[1, 1, 1:] = step * space[1:] / cube[1:]
    d_heat = local.d_burning / (2.0 * problem.luminosity_w)
    a[2, :3, :-1] -= step * d_heat[:3, :-1]
    b[2, :3, 1:] -= step * d_heat[:3, 1:]
    centre, d_centre = _centre(problem, y, local, mass[0])
    surface, d_surface = _surface(problem, y, local)
    residual = np.concatenate([centre, equations.T.ravel(), surface])
    return residual, _diagonals(points, a, b, d_centre, d_surface)


def _diagonals(
    points: int, a: np.ndarray, b: np.ndarray, centre: np.ndarray, surface: np.ndarray
) -> np.ndarray:
    size = 4 * points
    out = np.zeros((11, size))
    interval = np.arange(points - 1)
    for i in range(4):
        for j in range(4):
            row = 2 + 4 * interval + i
            near, far = 4 * interval + j, 4 * interval + 4 + j
            out[5 + row - near, near] = a[i, j, :-1]
            out[5 + row - far, far] = b[i, j, 1:]
    for i in range(2):
        for j in range(4):
            out[5 + i - j, j] = centre[i, j]
            out[5 + 2 + i - j, size - 4 + j] = surface[i, j]
    return out


def _centre(
    problem: Problem, y: np.ndarray, local: _Local, mass: float
) -> tuple[np.ndarray, np.ndarray]:
    """Return the residuals at the first point: a small ball of even density and burning."""
    residual = np.array(
        [
            3.0 * y[0, 0] + y[1, 0] - np.log(3.0 * mass / (4.0 * np.pi)),
            y[3, 0] - mass * local.burning[0] / problem.luminosity_w,
        ]
    )
    slopes = np.zeros((2, 4))
    slopes[0, :2] = 3.0, 1.0
    slopes[1] = -mass * local.d_burning[:, 0] / problem.luminosity_w
    slopes[1, 3] += 1.0
    return residual, slopes


def _surface(problem: Problem, y: np.ndarray, local: _Local) -> tuple[np.ndarray, np.ndarray]:
    """Return the residuals at the photosphere, tau = 2/3 of a grey atmosphere.

    L = 4 pi R^2 sigma T^4, and P = (2/3) g/kappa above the pressure of light at tau = 0,
    which is a T^4/6 (Eddington's approximation: Mihalas 1978, Stellar Atmospheres, ch. 3).
    """
    last = y[:, -1]
    s = local.state
    area = 4.0 * np.pi * np.exp(2.0 * last[0])
    shine = area * SIGMA_SB.value * np.exp(4.0 * last[2]) / problem.luminosity_w
    gravity = G.value * problem.mass_kg * np.exp(-2.0 * last[0])
    weight = 2.0 / 3.0 * gravity / local.opacity[-1]
    light = A_RAD.value * np.exp(4.0 * last[2]) / 6.0
    pressure = s.pressure[-1]
    total = weight + light
    residual = np.array([last[3] - shine, np.log(pressure / total)])
    slopes = np.zeros((2, 4))
    slopes[0] = -2.0 * shine, 0.0, -4.0 * shine, 1.0
    slopes[1] = weight / total * local.d_opacity[:, -1]
    slopes[1, 0] += 2.0 * weight / total
    slopes[1, 1] += s.chi_rho[-1]
    slopes[1, 2] += s.chi_t[-1] - 4.0 * light / total
    return residual, slopes
