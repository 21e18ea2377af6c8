"""Pressure ratios of many stars, as a table."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from starkiln.derived._pressure import (
    PressurePosterior,
    light_from_draws,
    light_from_values,
    pressure_posterior,
)
from starkiln.derived._pressure_cells import SOLAR_METALS, Evidence, Light
from starkiln.derived._pressure_columns import COLUMNS, assemble, edges
from starkiln.errors import InputError
from starkiln.interiors import load_grid
from starkiln.matter import composition, eddington_factor, hydrogen_of_metals, thomson_opacity

#: Columns that a table of targets may hold, with their unit; each may have an error, `e_`.
INPUTS = {
    "temperature": "K",
    "radius": "solRad",
    "luminosity": "solLum",
    "logg": "",
    "mass": "solMass",
    "feh": "",
}

#: Error of a mass that is given without one.
_EXACT = 1e-3
#: Fewer effective points than this are not trusted.
_FEW = 50.0
#: Variance of log10 T beyond which a temperature was not given.
_KNOWN = 0.25


def pressure_table(
    columns: Mapping[str, Sequence[Any]], *, seed: int = 0, at: float | None = None
) -> Any:
    """Return the pressure ratios of a table of targets.

    Parameters
    ----------
    columns : mapping
        `name` and columns of `INPUTS`, each with its error under `e_`; equal lengths, NaN
        for missing. Where radius and temperature are given, luminosity follows from them.
    seed : int
        A row's draws depend on it and on the row's own values alone.
    at : float, optional
        Mass fraction, 0 to 0.99, at which the ratios are given too.

    Returns
    -------
    astropy.table.Table
        One row per target: `COLUMNS` with `_lo` and `_hi`, `radiation_fraction_at` and
        `radiation_to_gas_at` where asked for, `status` (`ok`, `off_grid`, `rejected`),
        `flags` and `message`.
    """
    count = len(next(iter(columns.values())))
    rows = []
    for i in range(count):
        given = {key: float(columns[key][i]) for key in columns if key != "name"}
        given = {key: value for key, value in given.items() if not np.isnan(value)}
        name = str(columns["name"][i]) if "name" in columns else f"row {i + 1}"
        rows.append({"name": name} | _row(given, name, seed, at))
    return assemble(rows)


def pressure_row(
    evidence: Evidence, rng: np.random.Generator, at: float | None = None
) -> dict[str, Any]:
    """Return one row of the table: medians, intervals, status, flags and message.

    Parameters
    ----------
    evidence : Evidence
    rng : numpy.random.Generator
    at : float, optional
        Mass fraction at which the ratios are given too.
    """
    posterior = pressure_posterior(evidence, rng=rng)
    if posterior.reason:
        return _what_is_left(evidence, posterior.reason, rng)
    row: dict[str, Any] = {}
    for name in COLUMNS:
        if name in posterior.draws:
            row |= edges(name, posterior.draws[name])
    if at is not None:
        share = posterior.radiation_fraction_at(at)
        row |= edges("radiation_fraction_at", share)
        row |= edges("radiation_to_gas_at", share / (1.0 - share))
    flags, message = _remarks(evidence, posterior)
    return row | {"status": "ok", "flags": flags, "message": message}


def pressure_table_of_draws(
    names: Sequence[str],
    draws: Sequence[Mapping[str, Any] | None],
    known: Mapping[str, Sequence[Any]] | None = None,
    *,
    seed: int = 0,
    at: float | None = None,
) -> Any:
    """Return the pressure ratios of fitted stars, from their posterior draws.

    Parameters
    ----------
    names : sequence of str
    draws : sequence
        For each star a mapping (or table) that holds arrays `temperature` (K) and
        `luminosity` (solLum), draws of one posterior in pairs; None where there are none.
    known : mapping, optional
        Columns `name` and any of `mass`, `logg`, `feh`, with errors: what else is known of
        stars, by name.
    seed : int
    at : float, optional
        As for `pressure_table`.

    Returns
    -------
    astropy.table.Table
        As `pressure_table`.

    Raises
    ------
    InputError
        `known` has no names, or names a star that is not there.
    """
    more = _by_name(known, names) if known else {}
    rows = []
    for name, one in zip(names, draws, strict=True):
        given = more.get(name, {})
        rows.append({"name": name} | _row_of_draws(one, given, name, seed, at))
    return assemble(rows)


def _by_name(
    known: Mapping[str, Sequence[Any]], names: Sequence[str]
) -> dict[str, dict[str, float]]:
    if "name" not in known:
        raise InputError("the table of targets has no column 'name' by which to find the stars")
    found = {}
    for i, name in enumerate(known["name"]):
        if name not in names:
            raise InputError(f"row {i + 1} of the table of targets: no star '{name}' in the run")
        values = {
            key: float(known[key][i])
            for key in known
            if key.removeprefix("e_") in ("mass", "logg", "feh")
        }
        found[str(name)] = {key: value for key, value in values.items() if not np.isnan(value)}
    return found


def _row_of_draws(
    draws: Mapping[str, Any] | None,
    given: dict[str, float],
    name: str,
    seed: int,
    at: float | None,
) -> dict[str, Any]:
    columns = [] if draws is None else list(draws.keys())
    if draws is None or "temperature" not in columns or "luminosity" not in columns:
        lacking = (
            "the run kept no draws of this star"
            if draws is None
            else "no luminosity in the run: the star has no distance or parallax"
        )
        return {"status": "rejected", "flags": "", "message": lacking}
    try:
        _check(given)
        luminosity, temperature = (
            np.asarray(draws[key], dtype=float) for key in ("luminosity", "temperature")
        )
        light = light_from_draws(luminosity, temperature)
        stamp = given | {"first": float(luminosity[0]), "last": float(temperature[-1])}
        return pressure_row(_evidence(light, given), star_generator(seed, name, stamp), at)
    except InputError as error:
        return {"status": "rejected", "flags": "", "message": str(error)}


def star_generator(seed: int, name: str, values: Mapping[str, Any]) -> np.random.Generator:
    """Return the random stream of a star: from the seed and its own values and name."""
    text = repr((name, sorted((key, repr(value)) for key, value in values.items())))
    digest = hashlib.sha256(text.encode()).digest()
    return np.random.default_rng([seed, *np.frombuffer(digest, dtype=np.uint32)])


def _row(given: dict[str, float], name: str, seed: int, at: float | None) -> dict[str, Any]:
    try:
        _check(given)
        light = _light(given)
        return pressure_row(_evidence(light, given), star_generator(seed, name, given), at)
    except InputError as error:
        return {"status": "rejected", "flags": "", "message": str(error)}


def _evidence(light: Light | None, given: dict[str, float]) -> Evidence:
    return Evidence(
        light,
        mass=_pair(given, "mass", _EXACT * given.get("mass", 0.0)),
        logg=_pair(given, "logg", 0.1),
        feh=_pair(given, "feh", 0.1),
    )


def _check(given: dict[str, float]) -> None:
    for key, value in given.items():
        stem = key.removeprefix("e_")
        unit = INPUTS[stem]
        signed = stem in ("logg", "feh") and not key.startswith("e_")
        if not np.isfinite(value) or (value <= 0.0 and not signed and not key.startswith("e_")):
            raise InputError(f"{key} = {value:g} {unit} is out of bounds: give a number above 0")
        if key.startswith("e_") and value < 0.0:
            raise InputError(f"{key} = {value:g} {unit} is out of bounds: give 0 or above")
    if "feh" in given:
        low, high = np.array(load_grid().log_metals) / np.log(10.0) - np.log10(SOLAR_METALS)
        if not low <= given["feh"] <= high:
            raise InputError(
                f"feh = {given['feh']:g} is out of bounds: the models hold {low:.2f} to {high:.2f}"
            )


def _light(given: dict[str, float]) -> Light | None:
    names = ("temperature", "luminosity", "radius")
    if "luminosity" in given or {"temperature", "radius"} <= set(given):
        return light_from_values(*(_pair(given, name, 0.0) for name in names))
    if "mass" in given:
        return None
    raise InputError(
        "too little to go by: give luminosity, or temperature with radius or luminosity, or a mass"
    )


def _pair(given: dict[str, float], name: str, default: float) -> tuple[float, float] | None:
    if name not in given:
        return None
    return given[name], given.get(f"e_{name}") or default


def _remarks(evidence: Evidence, posterior: PressurePosterior) -> tuple[str, str]:
    mass = posterior.draws["mass"]
    heavy = float(np.median(mass)) > 40.0
    low, high = np.exp(load_grid().log_mass)
    edge = np.mean((mass < 1.02 * low) | (mass > high / 1.02)) > 0.05
    remarks = {
        "no_mass_loss": (heavy, "above 40 solMass the models lack mass loss"),
        "electron_limit": (heavy, "iron opacity lowers the true limit of light below gamma_e = 1"),
        "mass_from_luminosity": (
            evidence.mass is None,
            "an unresolved companion would make luminosity and mass too high",
        ),
        "at_edge": (edge, f"the mass runs into the bounds {low:.1f} to {high:.0f} solMass"),
        "near_the_end": (
            float(np.median(posterior.draws["age_fraction"])) > 0.95,
            "the star may have left the main sequence, where these models end",
        ),
        "few_points": (posterior.n_eff < _FEW, "the data pull apart; the draws are rough"),
    }
    kept = {name: text for name, (true, text) in remarks.items() if true}
    return " ".join(kept), "; ".join(kept.values())


def _what_is_left(evidence: Evidence, reason: str, rng: np.random.Generator) -> dict[str, Any]:
    """Return mass, and gamma_e where luminosity and mass are given, of a star off the grid."""
    row: dict[str, Any] = {"status": "off_grid", "flags": "", "message": reason}
    size = 4000
    light, mass = evidence.light, None
    if evidence.mass is not None:
        mass = np.abs(evidence.mass[0] + evidence.mass[1] * rng.standard_normal(size))
        row |= edges("mass", mass)
    if light is not None:
        centre = light.centres[rng.integers(len(light.centres), size=size)]
        log_l, log_t = (centre + rng.multivariate_normal(np.zeros(2), light.covariance, size)).T
        row |= edges("luminosity", 10.0**log_l)
        if light.covariance[1, 1] < _KNOWN:
            row |= edges("temperature", 10.0**log_t)
        if mass is not None:
            feh = 0.0 if evidence.feh is None else evidence.feh[0]
            metals = SOLAR_METALS * 10.0**feh
            matter = composition(float(hydrogen_of_metals(metals)), metals)
            row |= edges("gamma_e", eddington_factor(10.0**log_l, mass, thomson_opacity(matter)))
            row["message"] += "; gamma_e from the luminosity and mass given"
    return row
