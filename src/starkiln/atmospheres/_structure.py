"""Hydrostatic equilibrium with the pressure of light, and the start of a model."""

from __future__ import annotations

import numpy as np

from starkiln.atmospheres._grey import hopf
from starkiln.atmospheres._opacity import Columns, rosseland
from starkiln.constants import SIGMA_SB, C
from starkiln.matter import solve_ionisation

__all__ = ["gas_pressure", "start_structure", "tau_grid"]

_LOG_TAU = (-5.5, 2.2)
#: Opacity rises about as P^0.7 between scattering (0) and H- (1): the power by which a
#: correction of the pressure is shortened for its own effect on the opacity.
_RELAXATION = 1.0 / 1.7
#: While iterating, light may take away this much of gravity at most.
_LIGHT_CAP = 0.95
_START_PASSES = 15


def tau_grid(n_depth: int) -> np.ndarray:
    """Return Rosseland optical depths, log-spaced from 10^-5.5 to 10^2.2."""
    return np.logspace(*_LOG_TAU, n_depth)


def gas_pressure(
    tau: np.ndarray, opacity: np.ndarray, gravity: float, light: np.ndarray
) -> np.ndarray:
    """Return the gas pressure from dP/dtau = (g - g_rad)/kappa, in Pa.

    Parameters
    ----------
    tau, opacity, light : numpy.ndarray
        Rosseland depth, Rosseland opacity in m2 kg-1 and radiative acceleration
        in m s-2, (n_depth,).
    gravity : float
        m s-2.
    """
    net = gravity - np.minimum(light, _LIGHT_CAP * gravity)
    y = net / opacity * tau
    mean = (2.0 * np.sqrt(y[1:] * y[:-1]) + 0.5 * (y[1:] + y[:-1])) / 3.0
    # Above the first depth the opacity is taken as growing with pressure, as at H-.
    first = 2.0 * y[0]
    return first + np.concatenate([[0.0], np.cumsum(mean * np.diff(np.log(tau)))])


def relax(old: np.ndarray, new: np.ndarray) -> np.ndarray:
    """Return the pressure part of the way, in its logarithm, from `old` to `new`."""
    return old * (new / old) ** _RELAXATION


def start_structure(
    columns: Columns, tau: np.ndarray, effective_k: float, gravity: float, feh: float
) -> tuple[np.ndarray, np.ndarray]:
    """Return temperature and gas pressure of the grey atmosphere in balance."""
    temperature = effective_k * (0.75 * (tau + hopf(tau))) ** 0.25
    slope = columns.planck(temperature)[1]
    pressure = gravity * tau / 0.01 + 1e-3
    for _ in range(_START_PASSES):
        gas = solve_ionisation(pressure, temperature, feh=feh)
        opacity = rosseland(columns.opacity(gas).total, slope, columns.weight)
        light = opacity * (SIGMA_SB.value * effective_k**4 / C.value)
        pressure = relax(pressure, gas_pressure(tau, opacity, gravity, light))
    return temperature, pressure
