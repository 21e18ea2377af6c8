"""The equations of stellar structure as residuals and a matrix of eleven diagonals."""

from __future__ import annotations

import numpy as np

from starkiln.constants import A_RAD, SIGMA_SB, G
from starkiln.interiors._local import Local, Problem


def system(problem: Problem, y: np.ndarray, local: Local) -> tuple[np.ndarray, np.ndarray]:
    """Return the residuals, in the order of the rows, and the matrix's diagonals."""
    terms = _Terms(problem, y, local)
    sums = {name: value[:-1] + value[1:] for name, value in vars(terms).items() if name != "step"}
    equations = np.stack(
        [
            np.diff(np.log(local.state.pressure)) + 0.5 * sums["pull"],
            (np.diff(terms.cube) - terms.step * sums["space"]) / terms.cube[1:],
            np.diff(y[3]) - terms.step * sums["heat"],
            np.diff(y[2]) + 0.5 * sums["drop"],
        ]
    )
    near, far = _blocks(problem, local, terms)
    mass = problem.mesh.fraction[0] * problem.mass_kg
    centre, d_centre = _centre(problem, y, local, mass)
    surface, d_surface = _surface(problem, y, local)
    residual = np.concatenate([centre, equations.T.ravel(), surface])
    return residual, _diagonals(y.shape[1], near, far, d_centre, d_surface)


class _Terms:
    """The terms of the equations at each point, and the mass of each interval."""

    def __init__(self, problem: Problem, y: np.ndarray, local: Local) -> None:
        mass = problem.mesh.fraction * problem.mass_kg
        slope = problem.mesh.slope * problem.mass_kg
        pressure = local.state.pressure
        self.step = np.diff(mass)
        self.pull = slope * G.value * mass * np.exp(-4.0 * y[0]) / (4.0 * np.pi * pressure)
        self.drop = self.pull * local.nabla
        self.cube = np.exp(3.0 * y[0])
        self.space = 3.0 / (8.0 * np.pi * local.state.density)
        self.heat = local.burning / (2.0 * problem.luminosity_w)


def _blocks(problem: Problem, local: Local, terms: _Terms) -> tuple[np.ndarray, np.ndarray]:
    """Return the derivatives of the four equations by the unknowns of the two points."""
    points = terms.pull.size
    s, step, cube, space = local.state, terms.step, terms.cube, terms.space
    a, b = np.zeros((4, 4, points)), np.zeros((4, 4, points))
    by_log = np.zeros((4, points))
    by_log[0], by_log[1], by_log[2] = -4.0, -s.chi_rho, -s.chi_t
    half_pull = 0.5 * terms.pull * by_log
    half_drop = 0.5 * (terms.drop * by_log + terms.pull * local.d_nabla)
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
    return a, b


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
    problem: Problem, y: np.ndarray, local: Local, mass: float
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


def _surface(problem: Problem, y: np.ndarray, local: Local) -> tuple[np.ndarray, np.ndarray]:
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
