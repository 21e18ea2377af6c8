"""Electrons and positrons as ideal Fermi gases, on plain arrays in SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from starkiln.constants import K_B, M_E, C, H
from starkiln.errors import ConvergenceError
from starkiln.gases import fermi_moments, fermi_number

_REST_J = M_E.value * C.value**2
#: 8 pi sqrt(2) (m c/h)^3: states per volume.
_STATES = 8.0 * math.pi * math.sqrt(2.0) * (M_E.value * C.value / H.value) ** 3
#: Positrons are left out where they are fewer than e^-60 of the states.
_NO_PAIRS = -60.0
_MAX_NEWTON = 60


@dataclass(frozen=True)
class ElectronGas:
    """Electrons and positrons at given excess of electrons; SI units per volume.

    Attributes
    ----------
    eta : numpy.ndarray
        Degeneracy parameter of the electrons, without rest mass.
    pressure, energy, entropy : numpy.ndarray
        Pa; J m-3, kinetic, with the rest energy of created pairs; J K-1 m-3.
    pairs : numpy.ndarray
        Positrons per m3.
    dq_dmu, dq_dt, ds_dt : numpy.ndarray
        Derivatives of the excess of electrons by chemical potential and by temperature
        (the other held), and of the entropy by temperature at fixed chemical potential.
    """

    eta: np.ndarray
    pressure: np.ndarray
    energy: np.ndarray
    entropy: np.ndarray
    pairs: np.ndarray
    dq_dmu: np.ndarray
    dq_dt: np.ndarray
    ds_dt: np.ndarray


def electron_gas(
    excess_m3: np.ndarray, temperature_k: np.ndarray, guess: np.ndarray | None = None
) -> ElectronGas:
    """Return the electron gas whose electrons outnumber its positrons by `excess_m3`.

    Parameters
    ----------
    excess_m3, temperature_k : numpy.ndarray
        Same shape, above 0.
    guess : numpy.ndarray, optional
        A degeneracy parameter to start from.

    Raises
    ------
    ConvergenceError
        Newton's method for the degeneracy parameter failed.
    """
    theta = K_B.value * temperature_k / _REST_J
    eta = _solve_eta(excess_m3 / (_STATES * theta**1.5), theta, guess)
    return _state(eta, theta, temperature_k)


def _state(eta: np.ndarray, theta: np.ndarray, temperature_k: np.ndarray) -> ElectronGas:
    kt = K_B.value * temperature_k
    states = _STATES * theta**1.5
    minus = fermi_moments(eta, theta)
    total = {
        "pressure": minus.pressure,
        "energy": minus.energy,
        "entropy": minus.entropy,
        "edge_0": minus.edge_0,
        "edge_1": minus.edge_1,
        "edge_2": minus.edge_2,
        "pairs": np.zeros_like(eta),
    }
    some = _paired(eta, theta)
    if np.any(some):
        plus = fermi_moments(-eta[some] - 2.0 / theta[some], theta[some])
        for name in ("pressure", "energy", "entropy", "edge_0", "edge_2"):
            total[name][some] += getattr(plus, name)
        total["energy"][some] += 2.0 / theta[some] * plus.number
        total["edge_1"][some] -= plus.edge_1
        total["pairs"][some] = plus.number
    return ElectronGas(
        eta=eta,
        pressure=2.0 / 3.0 * states * kt * total["pressure"],
        energy=states * kt * total["energy"],
        entropy=states * K_B.value * total["entropy"],
        pairs=states * total["pairs"],
        dq_dmu=states * total["edge_0"] / kt,
        dq_dt=states * total["edge_1"] / temperature_k,
        ds_dt=states * K_B.value * total["edge_2"] / temperature_k,
    )


def _paired(eta: np.ndarray, theta: np.ndarray) -> np.ndarray:
    return -eta - 2.0 / theta > np.minimum(eta, 0.0) + _NO_PAIRS


def _excess(eta: np.ndarray, theta: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the dimensionless excess of electrons and its derivative by eta."""
    number, slope = fermi_number(eta, theta)
    some = _paired(eta, theta)
    if np.any(some):
        positrons, rise = fermi_number(-eta[some] - 2.0 / theta[some], theta[some])
        number[some] -= positrons
        slope[some] += rise
    return number, slope


def _solve_eta(target: np.ndarray, theta: np.ndarray, guess: np.ndarray | None) -> np.ndarray:
    """Solve for eta by Newton's method on the logarithm of the excess.

    ln q rises with eta and is concave, so from the left every step falls short of the
    root; a step from the right that leaves the allowed range is halved back into it.
    eta = -1/theta, where electrons and positrons are equal, is the lower end.
    """
    floor = -1.0 / theta
    eta = np.maximum(_first_guess(target, theta) if guess is None else guess, floor * (1 - 1e-9))
    active = np.arange(eta.size)
    for _ in range(_MAX_NEWTON):
        e, t, goal = eta[active], theta[active], target[active]
        number, slope = _excess(e, t)
        positive = number > 0.0
        safe = np.where(positive, number, goal)
        # Far below the goal ln q is nearly a wall; q itself is then nearly a line.
        step = np.where(
            safe < 0.1 * goal, (goal - safe) / slope, -np.log(safe / goal) * safe / slope
        )
        step = np.where(positive, step, (goal - number) / slope)
        new = e + step
        new = np.where(new <= floor[active], 0.5 * (e + floor[active]), new)
        eta[active] = new
        # The error left is the square of the step, over the distance from the floor.
        quadratic = 2e-8 * np.minimum(1.0, new - floor[active])
        enough = np.maximum(quadratic, 3e-13 * np.maximum(1.0, np.abs(new)))
        active = active[np.abs(new - e) > enough]
        if active.size == 0:
            return eta
    raise ConvergenceError(
        f"the degeneracy parameter did not converge in {_MAX_NEWTON} steps at "
        f"{active.size} of {eta.size} states",
        partial=eta,
    )


def _first_guess(target: np.ndarray, theta: np.ndarray) -> np.ndarray:
    """Return eta of a thin classical gas, or of cold matter, whichever is less wrong."""
    thin = np.log(target / (0.5 * math.sqrt(math.pi) * (1.0 + 1.875 * theta + 1.5 * theta**2)))
    # Cold: number = (2/3) (x (1 + theta x/2))^(3/2).
    momentum = (1.5 * target) ** (2.0 / 3.0)
    cold = momentum * 2.0 / (1.0 + np.sqrt(1.0 + 2.0 * theta * momentum))
    return np.where(cold > 2.0, cold, np.minimum(thin + 0.35 * target, cold))
