"""Sails driven by starlight: loading, lightness, acceleration, spirals and escape."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.constants import AU, YEAR, C
from starkiln.errors import ConvergenceError, InputError
from starkiln.forces._inputs import give, gm, irradiance_at, metres, watts
from starkiln.forces._surface import MIRROR, Surface

#: Tolerances of the orbit integration (relative; distances in units of the first).
_RTOL, _ATOL = 1e-11, 1e-13
#: An inward flight ends at this fraction of the first distance.
_INNERMOST = 1e-3


def critical_loading(*, luminosity: Any = 1.0, mass: Any = 1.0) -> Any:
    """Return the sail loading at which light on a mirror balances gravity.

    L / (2 pi G M c), in g m-2: 1.5313 for the Sun, at any distance (McInnes 1999,
    Solar Sailing, section 2.3). Bare numbers are solLum and solMass.
    """
    return give(1e3 * watts(luminosity) / (2.0 * math.pi * gm(mass) * C.value), "g / m2")


def lightness_number(loading: Any, *, luminosity: Any = 1.0, mass: Any = 1.0) -> np.ndarray:
    """Return the critical loading over `loading` (g m-2 when bare, above 0)."""
    grams = as_array(loading, "g / m2", "loading", lower=0.0, exclusive=True)
    return np.asarray(critical_loading(luminosity=luminosity, mass=mass).value / grams)


def sail_acceleration(
    loading: Any,
    distance: Any = 1.0,
    *,
    surface: Surface = MIRROR,
    cone_angle: Any = 0.0,
    luminosity: Any = 1.0,
) -> tuple[Any, Any]:
    """Return the acceleration of a flat sail by light.

    Parameters
    ----------
    loading : Quantity or array_like
        Total mass over area, g m-2 when bare; above 0.
    distance, luminosity : Quantity or array_like
        au and solLum when bare.
    surface : Surface
        Optical coefficients; a perfect mirror by default.
    cone_angle : Quantity or array_like
        Between the sail's normal and the line from the star, degrees when bare,
        -90 to 90; a positive one pushes forward along the orbit.

    Returns
    -------
    radial, transverse : Quantity
        mm s-2, away from the star and forward. The characteristic acceleration is the
        first at 1 au and no angle: 0.9081 for a mirror of 10 g m-2.
    """
    kilograms = as_array(loading, "g / m2", "loading", lower=0.0, exclusive=True) * 1e-3
    momentum = irradiance_at(luminosity, distance) / C.value
    radial, transverse = _components(surface, cone_angle)
    scale = 1e3 * momentum / kilograms
    return give(scale * radial, "mm / s2"), give(scale * transverse, "mm / s2")


@dataclass(frozen=True)
class SailFlight:
    """A flight at constant cone angle, from a circular orbit.

    Attributes
    ----------
    reached : str
        `target`, `escape`, `star` (a thousandth of the first distance), or `time
        limit` where none of these came first.
    time : Quantity
        Of flight, yr.
    distance, speed : Quantity
        At the end, au and km s-1.
    turns : float
        Revolutions about the star.
    energy : Quantity
        At the end, v^2/2 - G M / r, J kg-1; escape is where it reaches 0.
    """

    reached: str
    time: Any
    distance: Any
    speed: Any
    turns: float
    energy: Any


def fly_sail(
    loading: Any,
    cone_angle: Any,
    *,
    start: Any = 1.0,
    target: Any = None,
    surface: Surface = MIRROR,
    luminosity: Any = 1.0,
    mass: Any = 1.0,
    time_limit: Any = 100.0,
) -> SailFlight:
    """Fly a sail from a circular orbit to a distance, or until it escapes.

    The plane equations of motion under gravity and light are integrated directly
    (Dormand & Prince's order 8 in scipy, relative tolerance 1e-11); the star is a point.

    Parameters
    ----------
    loading : Quantity or float
        g m-2 when bare, above 0.
    cone_angle : Quantity or float
        Degrees when bare, between -90 and 90: positive spirals outward, negative
        inward.
    start : Quantity or float
        Radius of the first, circular orbit (of a body without sail), au when bare.
    target : Quantity or float, optional
        Distance to reach, au when bare. Without it the flight ends on escape, where
        the energy without the sail's help, v^2/2 - G M / r, reaches 0.
    surface, luminosity, mass
        As for `sail_acceleration`; mass in solMass when bare.
    time_limit : Quantity or float
        Julian years when bare, above 0.

    Returns
    -------
    SailFlight

    Raises
    ------
    InputError
        The target is where the flight starts.
    ConvergenceError
        The integration failed; `partial` keeps what it reached.
    """
    kilograms = as_float(loading, "g / m2", "loading", lower=0.0, exclusive=True) * 1e-3
    radius, parameter = float(metres(start, "start")), float(gm(mass))
    unit_time = math.sqrt(radius**3 / parameter)
    limit = as_float(time_limit, "yr", "time limit", lower=0.0, exclusive=True)
    push = float(watts(luminosity)) / (4.0 * math.pi * C.value * kilograms * parameter)
    radial, transverse = (push * float(f) for f in _components(surface, cone_angle))
    goal = None if target is None else float(metres(target, "target")) / radius
    if goal == 1.0:
        raise InputError("the target distance is the one the flight starts from")
    solution = _integrate(radial, transverse, goal, limit * YEAR.value / unit_time)
    r, angle, v_r, v_t = solution.y[:, -1]
    speed = radius / unit_time
    flight = SailFlight(
        _ending(solution, goal),
        give(solution.t[-1] * unit_time / YEAR.value, "yr"),
        give(r * radius / AU.value, "au"),
        give(math.hypot(v_r, v_t) * speed * 1e-3, "km / s"),
        float(angle) / (2.0 * math.pi),
        give((0.5 * (v_r**2 + v_t**2) - 1.0 / r) * speed**2, "J / kg"),
    )
    if solution.status < 0:
        raise ConvergenceError(f"the flight could not be followed: {solution.message}", flight)
    return flight


def _ending(solution: Any, goal: float | None) -> str:
    if solution.status == 0:
        return "time limit"
    if solution.status < 0:
        return "failure"
    if len(solution.t_events[1]):
        return "star"
    return "escape" if goal is None else "target"


def _components(surface: Surface, cone_angle: Any) -> tuple[np.ndarray, np.ndarray]:
    """Return radial and forward force over F A / c at a cone angle."""
    radians = np.radians(as_array(cone_angle, "deg", "cone angle", lower=-90.0, upper=90.0))
    cosine, sine = np.cos(radians), np.sin(radians)
    normal, tangential = surface.coefficients(cosine, sine)
    # The light's direction is cos n + sin t, which turns the plate's axes into the orbit's.
    return normal * cosine + tangential * sine, normal * sine - tangential * cosine


def _integrate(radial: float, transverse: float, goal: float | None, limit: float) -> Any:
    """Follow r, angle, v_r, v_t with G M, the first radius and its orbital speed as units."""
    from scipy.integrate import solve_ivp

    def motion(_time: float, state: np.ndarray) -> tuple[float, ...]:
        r, _, v_r, v_t = state
        gravity = 1.0 / r**2
        return (
            v_r,
            v_t / r,
            v_t**2 / r + (radial - 1.0) * gravity,
            -v_r * v_t / r + transverse * gravity,
        )

    def arrival(_time: float, state: np.ndarray) -> float:
        return float(state[0] - (goal or 0.0))

    def escape(_time: float, state: np.ndarray) -> float:
        # Times r, so that the event is not blurred as both energies fade outward.
        return float(0.5 * state[0] * (state[2] ** 2 + state[3] ** 2) - 1.0)

    def fall(_time: float, state: np.ndarray) -> float:
        return float(state[0] - _INNERMOST)

    events: Any = (escape if goal is None else arrival, fall)
    for event in events:
        event.terminal = True
    return solve_ivp(
        motion,
        (0.0, limit),
        np.array([1.0, 0.0, 0.0, 1.0]),
        method="DOP853",
        events=events,
        rtol=_RTOL,
        atol=_ATOL,
    )
