"""Priors of the emitter's parameters: temperature, and log g and [Fe/H] of an atmosphere."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

from starkiln.emitters import AtmosphereEmitter
from starkiln.errors import InputError
from starkiln.inference._priors import Parameter, Prior, TruncatedNormal, Uniform
from starkiln.inference._settings import Settings
from starkiln.observations import Star

#: A value of the row farther than this many of its errors beyond the models is refused.
_FAR = 3.0
#: A Gaussian of log g is cut where nothing of it is left: the highest log g decides at
#: which temperature the models end.
_CUT = 6.0


def emitter_parameters(
    star: Star, emitter: Any, settings: Settings, notes: list[str]
) -> tuple[Any, list[Parameter]]:
    """Return the emitter of a star, and its parameters with their priors.

    Parameters
    ----------
    star : Star
    emitter : Emitter
    settings : Settings
    notes : list of str
        What the observer must be told is added.

    Returns
    -------
    emitter : Emitter
        Holds what the row gives without an error and the emitter leaves free.
    parameters : list of Parameter
        In the emitter's order, `ln_temperature` first.

    Raises
    ------
    InputError
        The row or the settings ask for what the emitter does not reach.
    """
    if not isinstance(emitter, AtmosphereEmitter):
        temperature = _temperature(star, emitter, emitter.bounds, settings, notes)
        return emitter, [Parameter("ln_temperature", temperature)]
    emitter = _with_known(star, emitter)
    rest = [Parameter(n, _surface(star, emitter, n, settings)) for n in emitter.parameters[1:]]
    for item in rest:
        if getattr(star, item.name) is None:
            notes.append(f"no {item.name} given: prior {item.prior.describe()}")
    highest = next((item.prior.upper for item in rest if item.name == "logg"), emitter.logg)
    bounds = replace(emitter, logg=highest).bounds
    temperature = _temperature(star, emitter, bounds, settings, notes)
    return emitter, [Parameter("ln_temperature", temperature), *rest]


def _with_known(star: Star, emitter: AtmosphereEmitter) -> AtmosphereEmitter:
    """Hold what the row gives without an error."""
    known = {
        name: value
        for name in emitter.parameters[1:]
        if (value := getattr(star, name)) is not None and not getattr(star, f"e_{name}")
    }
    return replace(emitter, **known)


def _surface(star: Star, emitter: AtmosphereEmitter, name: str, settings: Settings) -> Prior:
    low, high = emitter.bounds[name]
    mean, width = getattr(star, name), getattr(star, f"e_{name}")
    if mean is not None:
        beyond = max(low - mean, mean - high)
        if beyond > _FAR * width:
            raise InputError(
                f"{name} = {mean:g} +- {width:g} is outside the model atmospheres, {low:.2f} to "
                f"{high:g}, by more than {_FAR:g} sigma; use --emitter blackbody"
            )
    elif name == "feh":
        mean, width = settings.feh_mean, settings.feh_width
    else:
        first, last = settings.logg_range
        return Uniform(max(low, first), min(high, last))
    if name == "logg":
        nearest = min(max(mean, low), high)
        low, high = max(low, nearest - _CUT * width), min(high, nearest + _CUT * width)
    return TruncatedNormal(mean, width, low, high)


def _temperature(
    star: Star, emitter: Any, bounds: Any, settings: Settings, notes: list[str]
) -> Prior:
    wanted = settings.temperature_range
    least, most = bounds["temperature"]
    low, high = max(wanted[0], least), min(wanted[1], most)
    if low >= high:
        raise InputError(
            f"priors.temperature = {wanted[0]:g} to {wanted[1]:g} K holds no temperature of the "
            f"{emitter.name}, {least:.0f} to {most:.0f} K{_why(emitter)}"
        )
    if (low, high) != wanted:
        notes.append(f"temperature prior cut where the models end, {low:.0f} to {high:.0f} K")
    if not settings.use_published_temperature or star.teff_k is None:
        return Uniform(math.log(low), math.log(high))
    if not star.e_teff_k:
        raise InputError(
            "teff without e_teff cannot serve as prior; give its error or set "
            "priors.published_temperature = false"
        )
    if not low <= star.teff_k <= high:
        remedy = "" if (low, high) != wanted else "; widen priors.temperature"
        raise InputError(
            f"teff = {star.teff_k:g} K lies outside the temperature prior, "
            f"{low:.0f} to {high:.0f} K{_why(emitter)}{remedy}"
        )
    notes.append(f"temperature prior {star.teff_k:g} +- {star.e_teff_k:g} K (teff)")
    width = star.e_teff_k / star.teff_k
    return TruncatedNormal(math.log(star.teff_k), width, math.log(low), math.log(high))


def _why(emitter: Any) -> str:
    return f" ({emitter.limits})" if isinstance(emitter, AtmosphereEmitter) else ""
