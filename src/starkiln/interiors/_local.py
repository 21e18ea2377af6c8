"""Physics at each point of a model, with its derivatives by the point's own unknowns."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from starkiln.constants import A_RAD, C, G
from starkiln.interiors._burning import burning_rate
from starkiln.interiors._convection import MIXING_LENGTH, gradient
from starkiln.interiors._mesh import Mesh
from starkiln.matter import OpacityLaw, gas_state_si, rosseland_opacity

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


class Local:
    """Physics at each point.

    Attributes
    ----------
    state : GasState
        Plain arrays in SI units.
    opacity, burning, nabla, radiative : numpy.ndarray
        m2 kg-1, W kg-1, and the actual and the radiative d ln T/d ln P.
    d_opacity, d_burning, d_nabla : numpy.ndarray
        (4, points): derivatives of ln opacity, burning and nabla by the unknowns.
    """

    def __init__(self, problem: Problem, y: np.ndarray, eta: np.ndarray | None) -> None:
        self.problem = problem
        rho, t = np.exp(y[1]), np.exp(y[2])
        self.state = gas_state_si(rho, t, problem.ions, problem.electrons, eta)
        s = self.state
        self._light = s.radiation_pressure / s.pressure
        self._nabla_ad = s.adiabatic_gradient
        self._mixture = _mixture(1.0 - self._light)
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
        # The exact values at y follow the change of the same of a plain mixture.
        mixed = _mixture(1.0 - light)
        adiabatic = self._nabla_ad + mixed[0] - self._mixture[0]
        heat = self._heat * mixed[1] / self._mixture[1]
        delta = self._delta * mixed[2] / self._mixture[2]
        opacity = self._opacity(z)
        flux = 3.0 * opacity * z[3] * self.problem.luminosity_w * pressure
        radiative = flux / (16.0 * np.pi * A_RAD.value * C.value * G.value * self._mass * t**4)
        gravity = G.value * self._mass * np.exp(-2.0 * z[0])
        height = pressure / (rho * gravity)
        loss = 3.0 * A_RAD.value * C.value * t**3
        loss = loss / (heat * rho**2 * opacity * (MIXING_LENGTH * height) ** 2)
        loss = loss * np.sqrt(8.0 * height / (gravity * delta))
        return gradient(radiative, adiabatic, loss), radiative


def _mixture(beta: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return adiabatic gradient, heat capacity and expansion of a gas with light.

    An ideal gas whose share of the pressure is beta: Kippenhahn, Weigert & Weiss 2012,
    eqs. 13.16-13.21 (MEMORY), the heat capacity at fixed pressure in units of k/(mu m_u).
    """
    term = (1.0 - beta) * (4.0 + beta) / beta**2
    heat = 2.5 + 4.0 * term
    return (1.0 + term) / heat, heat, (4.0 - 3.0 * beta) / beta
