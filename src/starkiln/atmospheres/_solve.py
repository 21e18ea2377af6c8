"""Iteration of one atmosphere: gas, light, pressure and temperature in turn."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln.atmospheres._correction import flux_response, temperature_step
from starkiln.atmospheres._kernels import Field, intervals, radiation_field
from starkiln.atmospheres._opacity import ColumnOpacity, Columns, rosseland
from starkiln.atmospheres._structure import gas_pressure, relax, start_structure, tau_grid
from starkiln.atmospheres._wavelengths import wavelength_grid
from starkiln.constants import SIGMA_SB, C
from starkiln.matter import IonisationState, LineHaze, solve_ionisation

__all__ = ["Numerics", "Solution", "solve"]


@dataclass(frozen=True)
class Numerics:
    """Fineness of a model and when it counts as converged.

    Attributes
    ----------
    n_depth, n_node, n_angle : int
        Depths, nodes of the haze, angles. The haze is calibrated with 8 nodes.
    wavelength_density : float
        Multiple of the plain wavelength grid.
    max_iterations : int
        Passes before giving up.
    flux_tolerance, temperature_tolerance, pressure_tolerance : float
        Largest relative flux error at any depth, and largest relative steps of
        temperature and pressure, of a converged model.
    skin_tolerance : float
        Largest relative step of temperature above optical depth 0.01, where it
        hardly touches the flux and settles last.
    """

    n_depth: int = 56
    n_node: int = 8
    n_angle: int = 3
    wavelength_density: float = 1.0
    max_iterations: int = 40
    flux_tolerance: float = 4e-3
    temperature_tolerance: float = 4e-3
    pressure_tolerance: float = 0.02
    skin_tolerance: float = 0.01


@dataclass
class Solution:
    """What an iteration reached; arrays over depth unless said."""

    columns: Columns
    tau: np.ndarray
    gas: IonisationState
    field: Field
    opacity: ColumnOpacity
    rosseland_opacity: np.ndarray
    radiation_pressure: np.ndarray
    light: np.ndarray
    flux_error: np.ndarray
    step: float = np.inf
    skin_step: float = np.inf
    iterations: int = 0
    converged: bool = False


#: A step of temperature is cut here, as a fraction.
_LARGEST_STEP = 0.10
#: Above this depth is the skin.
_SKIN_TAU = 1e-2
#: Largest ratio of successive steps that is believed when their sum is foreseen.
_LARGEST_RATIO = 0.9
_FIRST_HASTE = 6
_LAST_HASTE = 14
_HASTE_EVERY = 4
#: Every so manieth column of a node goes into the response of the flux.
_RESPONSE_STRIDE = 4
#: It is worked out in the first passes, and then every so manieth.
_RESPONSE_ALWAYS = 3
_RESPONSE_EVERY = 3
_START_STRIDE = 6


def solve(
    effective_k: float, gravity: float, feh: float, haze: LineHaze | None, numerics: Numerics
) -> Solution:
    """Iterate one model; the caller checks the bounds and the result's `converged`."""
    tau = tau_grid(numerics.n_depth)
    wavelengths = wavelength_grid(numerics.wavelength_density)
    coarse = Columns(wavelengths[::_START_STRIDE], haze, numerics.n_node)
    temperature, pressure = start_structure(coarse, tau, effective_k, gravity, feh)
    columns = Columns(wavelengths, haze, numerics.n_node)
    target = SIGMA_SB.value * effective_k**4 / (4.0 * np.pi)
    skin = tau < _SKIN_TAU
    factors = None
    before = np.zeros_like(tau)
    for iteration in range(1, numerics.max_iterations + 1):
        gas = solve_ionisation(pressure, temperature, feh=feh)
        now, steps = _look(columns, tau, gas, target, factors, numerics.n_angle)
        factors = (now.field.factor, now.field.surface_factor, now.field.bottom_factor)
        if iteration <= _RESPONSE_ALWAYS or iteration % _RESPONSE_EVERY == 0:
            response = _flux_response(now, steps, factors, iteration)
        change = temperature_step((1.0 + now.flux_error) * target, response, target)
        relative = np.abs(change / temperature)
        now.step = float(relative[~skin].max())
        now.skin_step = float(relative[skin].max())
        wanted = gas_pressure(tau, now.rosseland_opacity, gravity, now.light)
        now.iterations = iteration
        now.converged = _is_converged(now, wanted / pressure, numerics)
        if now.converged:
            break
        change = _hastened(change, before, skin, iteration)
        before = change
        limit = _LARGEST_STEP * temperature
        temperature = temperature + np.clip(change, -limit, limit)
        pressure = relax(pressure, wanted)
    return now


def _look(
    columns: Columns,
    tau: np.ndarray,
    gas: IonisationState,
    target: float,
    factors: tuple[np.ndarray, np.ndarray, np.ndarray] | None,
    n_angle: int,
) -> tuple[Solution, np.ndarray]:
    # The light of the present structure, and the optical steps it was found on.
    opacity = columns.opacity(gas)
    planck, slope = columns.planck(gas.temperature_k)
    mean = rosseland(opacity.total, slope, columns.weight)
    first, steps = intervals(opacity.total / mean[:, None], tau)
    field = radiation_field(planck, opacity.thermal, first, steps, factors, n_angle)
    solution = Solution(
        columns=columns,
        tau=tau,
        gas=gas,
        field=field,
        opacity=opacity,
        rosseland_opacity=mean,
        radiation_pressure=(4.0 * np.pi / C.value) * (field.k @ columns.weight),
        light=_light(field, opacity, columns),
        flux_error=(field.h @ columns.weight) / target - 1.0,
    )
    return solution, steps


def _is_converged(now: Solution, pressure_ratio: np.ndarray, numerics: Numerics) -> bool:
    return (
        float(np.abs(now.flux_error).max()) < numerics.flux_tolerance
        and now.step < numerics.temperature_tolerance
        and now.skin_step < numerics.skin_tolerance
        and float(np.abs(np.log(pressure_ratio)).max()) < numerics.pressure_tolerance
    )


def _hastened(
    change: np.ndarray, before: np.ndarray, skin: np.ndarray, iteration: int
) -> np.ndarray:
    # In the skin of a hot star the steps shrink slowly and evenly, because opacity follows
    # temperature there: now and then sum the geometric series (Aitken 1926), with one ratio
    # for all depths lest neighbours fall out of step.
    # A skin that still trembles later on is overshooting: then half of every step.
    if iteration > _LAST_HASTE:
        return np.where(skin, 0.5 * change, change)
    if iteration < _FIRST_HASTE or iteration % _HASTE_EVERY:
        return change
    ratio = float(change[skin] @ before[skin] / (before[skin] @ before[skin]))
    factor = 1.0 / (1.0 - min(max(ratio, 0.0), _LARGEST_RATIO))
    return np.where(skin, factor * change, change)


def _flux_response(
    now: Solution,
    steps: np.ndarray,
    factors: tuple[np.ndarray, np.ndarray, np.ndarray],
    iteration: int,
) -> np.ndarray:
    # On every fourth wavelength, others each time, at all nodes: exact enough for Newton.
    columns = now.columns
    n_wave = columns.single_m.size
    single = np.arange(iteration % _RESPONSE_STRIDE, n_wave, _RESPONSE_STRIDE)
    chosen = (np.arange(columns.share.size)[:, None] * n_wave + single).ravel()
    slope = columns.planck(now.gas.temperature_k)[1]
    factor, surface, bottom = factors
    return flux_response(
        slope[:, chosen],
        now.opacity.thermal[:, chosen],
        steps[:, chosen],
        (factor[:, chosen], surface[chosen], bottom[chosen]),
        columns.sample_weight(single),
    )


def _light(field: Field, opacity: ColumnOpacity, columns: Columns) -> np.ndarray:
    # (4 pi/c) int kappa H: the flux at a depth is the mean of its two neighbours.
    h = field.h.copy()
    h[1:-1] = 0.5 * (field.h[1:-1] + field.h[2:])
    return (4.0 * np.pi / C.value) * ((opacity.total * h) @ columns.weight)
