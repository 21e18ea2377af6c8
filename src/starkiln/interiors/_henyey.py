"""Relaxation of all shells at once (Henyey, Forbes & Gould 1964, ApJ 139, 306).

The four unknowns of each point are ln r, ln rho, ln T and L over a reference; the four
equations of each interval are central differences in the number of the point, of second
order. The matrix has eleven diagonals and is solved directly.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln.errors import ConvergenceError
from starkiln.interiors._equations import system
from starkiln.interiors._local import Local, Problem
from starkiln.matter import GasState

_LIMIT = np.array([0.3, 0.8, 0.25, 1.0])[:, None]
_MAX_STEPS = 60


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
    with np.errstate(all="ignore"):
        # A step gone astray shows as a number that is not finite, which ends the search.
        return _relax(problem, start.copy(), tolerance)


def _relax(problem: Problem, y: np.ndarray, tolerance: float) -> Shells:
    from scipy.linalg import solve_banded

    eta: np.ndarray | None = None
    for step in range(1, _MAX_STEPS + 1):
        local = Local(problem, y, eta)
        eta = local.state.eta
        residual, diagonals = system(problem, y, local)
        try:
            change = solve_banded((5, 5), diagonals, -residual, check_finite=False)
        except np.linalg.LinAlgError:
            break
        change = change.reshape(-1, 4).T
        if not np.all(np.isfinite(change)):
            break
        size = float(np.max(np.abs(change) / _LIMIT))
        damping = min(1.0, 1.0 / size) if size > 0.0 else 1.0
        y = y + damping * change
        eta = eta + damping * (change[1] - 1.5 * change[2])
        if size * _LIMIT.max() < tolerance:
            last = Local(problem, y, eta)
            return Shells(
                y, last.state, last.opacity, last.burning, last.nabla, last.radiative, step
            )
        if np.any(np.abs(y[:3]) > 100.0):
            break
    raise ConvergenceError("the structure did not converge", partial=y)
