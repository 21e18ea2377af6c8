"""The sums of `starkiln photons`: blackbody radiation at one temperature."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import E_CHARGE, PARSEC, R_SUN, C
from starkiln.errors import InputError
from starkiln.photons._answers import Answer, echo
from starkiln.photons._colour import chromaticity
from starkiln.photons._emission import dilution_factor, irradiance_factor
from starkiln.photons._forms import kelvin, limit_errors, planck
from starkiln.photons._fractions import band_exitance, exitance, fraction
from starkiln.photons._gas import PhotonGas
from starkiln.photons._peaks import peak

_PLANCK = "Planck 1901, Ann. Phys. 309, 553"
_WIEN = "Wien 1893; constant from CODATA 2022"
_SB = "Stefan 1879; Boltzmann 1884; constant from CODATA 2022"
_GAS = "Landau & Lifshitz 1980, Statistical Physics, sect. 63"
_CIE = "CIE 15:2004, 2-degree observer"
_DILUTE = "Mihalas 1978, Stellar Atmospheres"
_MICRON = 1e-6


def photon_sums(
    temperature: Any,
    *,
    at: Any = None,
    lower: Any = None,
    upper: Any = None,
    volume: Any = None,
    emissivity: Any = 1.0,
    radius: Any = None,
    distance: Any = None,
) -> list[Answer]:
    """Return what there is to know of blackbody radiation at a temperature.

    Parameters
    ----------
    temperature : float or array_like
        K, at least 0. Arrays (draws) are taken throughout and broadcast.
    at : float or array_like, optional
        Wavelength in um: Planck's law there, per wavelength and per frequency.
    lower, upper : float or array_like, optional
        Band in um; one of them alone leaves the other side open.
    volume : float or array_like, optional
        Of the photon gas, m3.
    emissivity : float or array_like
        Grey emissivity of the emitting surface, at least 0.
    radius, distance : float or array_like, optional
        Of a star, solRad and pc: adds what arrives. Both or neither.

    Returns
    -------
    list of Answer

    Raises
    ------
    InputError
        A value out of bounds, limits inverted, or a radius without its distance.
    """
    if (radius is None) != (distance is None):
        raise InputError("give radius and distance together: the irradiance needs both")
    t = kelvin(temperature)
    rows = [echo("temperature", t, "K"), echo("emissivity", emissivity, "")]
    rows += _emitted(t, emissivity)
    rows += _gas(t, volume)
    warm = t > 0.0
    for name, locus in zip(
        "xy", np.moveaxis(chromaticity(np.where(warm, t, 1.0)), -1, 0), strict=True
    ):
        value = np.where(warm, locus, np.nan)
        rows.append(Answer(f"chromaticity_{name}", value, "", "CIE 1931 chromaticity", _CIE))
    if at is not None:
        rows += _spectrum(t, at, emissivity)
    if lower is not None or upper is not None:
        rows += _band(t, lower, upper, emissivity)
    if radius is not None:
        rows += _received(t, emissivity, radius, distance, (lower, upper))
    return rows


def _emitted(t: np.ndarray, emissivity: Any) -> list[Answer]:
    flux = exitance(t, dilution=emissivity).value
    photons = exitance(t, dilution=emissivity, photons=True).value
    per_photon = peak(t, form="photon_radiance").value / _MICRON
    return [
        Answer("peak_wavelength", peak(t).value / _MICRON, "um", "Wien displacement law", _WIEN),
        Answer(
            "peak_frequency",
            peak(t, variable="frequency").value,
            "Hz",
            "Wien displacement law per frequency",
            _WIEN,
        ),
        Answer(
            "peak_wavelength_photons", per_photon, "um", "Wien displacement law of photons", _WIEN
        ),
        Answer("exitance", flux, "W / m2", "Stefan-Boltzmann law", _SB),
        Answer("radiance", flux / np.pi, "W / (m2 sr)", "Stefan-Boltzmann law over pi", _SB),
        Answer("photon_exitance", photons, "ph / (s m2)", "Planck's law integrated", _PLANCK),
    ]


def _gas(t: np.ndarray, volume: Any) -> list[Answer]:
    gas = PhotonGas(t)
    rows = [
        Answer("number_density", gas.number.value, "m-3", "Planck's law integrated", _PLANCK),
        Answer(
            "mean_photon_energy",
            gas.mean_photon_energy.value / E_CHARGE.value,
            "eV",
            "pi^4 k T / 30 zeta(3)",
            _PLANCK,
        ),
        Answer("energy_density", gas.energy.value, "J / m3", "4 sigma T^4 / c", _GAS),
        Answer("pressure", gas.pressure.value, "Pa", "4 sigma T^4 / 3 c", _GAS),
        *_extensive(gas, "_density", " m-3"),
        Answer("chemical_potential", gas.chemical_potential.value, "J", "mu = 0", _GAS),
    ]
    if volume is None:
        return rows
    whole = PhotonGas(t, volume)
    return [
        *rows,
        echo("volume", volume, "m3"),
        Answer("number", whole.number.value, "", "Planck's law integrated", _PLANCK),
        Answer("energy", whole.energy.value, "J", "4 sigma V T^4 / c", _GAS),
        *_extensive(whole, "", ""),
        Answer(
            "relative_energy_fluctuation",
            whole.relative_energy_fluctuation.value,
            "",
            "sqrt(4 k T / U)",
            "Einstein 1904, Ann. Phys. 319, 354",
        ),
    ]


def _extensive(gas: PhotonGas, suffix: str, per: str) -> list[Answer]:
    return [
        Answer(f"entropy{suffix}", gas.entropy.value, f"J K-1{per}", "S = 4 U / 3 T", _GAS),
        Answer(f"heat_capacity{suffix}", gas.heat_capacity.value, f"J K-1{per}", "C_V = 3 S", _GAS),
        Answer(f"free_energy{suffix}", gas.free_energy.value, f"J{per}", "F = -U / 3", _GAS),
        Answer(f"enthalpy{suffix}", gas.enthalpy.value, f"J{per}", "H = 4 U / 3", _GAS),
    ]


def _spectrum(t: np.ndarray, at: Any, emissivity: Any) -> list[Answer]:
    metres = np.asarray(at) * _MICRON
    hertz = C.value / as_array(metres, "m", "wavelength", lower=0.0, exclusive=True)
    wien_error, jeans_error = limit_errors(metres, t)
    rows = [echo("at", at, "um")]
    for form, unit in (("", "W / (m2 sr"), ("photon_", "ph / (s m2 sr")):
        of = {"form": f"{form}radiance", "dilution": emissivity}
        per_micron = planck(metres, t, **of).value * _MICRON
        per_hertz = planck(hertz, t, variable="frequency", **of).value
        name = f"spectral_{form}radiance"
        rows.append(Answer(name, per_micron, f"{unit} um)", "Planck's law", _PLANCK))
        rows.append(
            Answer(
                f"{name}_frequency",
                per_hertz,
                f"{unit} Hz)",
                "Planck's law per frequency",
                _PLANCK,
            )
        )
    return [
        *rows,
        Answer("wien_error", wien_error, "", "Wien over Planck - 1 = -exp(-x)", _PLANCK),
        Answer(
            "rayleigh_jeans_error",
            jeans_error,
            "",
            "Rayleigh-Jeans over Planck - 1 = (exp(x) - 1 - x) / x",
            _PLANCK,
        ),
    ]


def _band(t: np.ndarray, lower: Any, upper: Any, emissivity: Any) -> list[Answer]:
    short, long = _limits(lower, upper)
    flux = band_exitance(short, long, t, dilution=emissivity).value
    photons = band_exitance(short, long, t, dilution=emissivity, photons=True).value
    formula = "Planck's law integrated over the band"
    return [
        *(echo(n, v, "um") for n, v in (("from", lower), ("to", upper)) if v is not None),
        Answer("band_fraction", fraction(short, long, t), "", formula, _PLANCK),
        Answer(
            "band_photon_fraction", fraction(short, long, t, photons=True), "", formula, _PLANCK
        ),
        Answer("band_exitance", flux, "W / m2", formula, _PLANCK),
        Answer("band_radiance", flux / np.pi, "W / (m2 sr)", formula, _PLANCK),
        Answer("band_photon_exitance", photons, "ph / (s m2)", formula, _PLANCK),
    ]


def _received(
    t: np.ndarray, emissivity: Any, radius: Any, distance: Any, band: tuple[Any, Any]
) -> list[Answer]:
    metres = np.asarray(radius) * R_SUN.value, np.asarray(distance) * PARSEC.value
    share = irradiance_factor(*metres)
    formula = "exitance times (R/r)^2"
    rows = [
        echo("radius", radius, "solRad"),
        echo("distance", distance, "pc"),
        Answer(
            "dilution_factor",
            dilution_factor(*metres),
            "",
            "W = (1 - sqrt(1 - (R/r)^2)) / 2",
            _DILUTE,
        ),
    ]
    for photons, name, unit in ((False, "", "W / m2"), (True, "photon_", "ph / (s m2)")):
        flux = share * exitance(t, dilution=emissivity, photons=photons).value
        rows.append(Answer(f"{name}irradiance", flux, unit, formula, _SB))
        if band != (None, None):
            part = fraction(*_limits(*band), t, photons=photons)
            rows.append(Answer(f"band_{name}irradiance", part * flux, unit, formula, _PLANCK))
    return rows


def _limits(lower: Any, upper: Any) -> tuple[Any, Any]:
    low = 0.0 if lower is None else np.asarray(lower) * _MICRON
    return low, np.inf if upper is None else np.asarray(upper) * _MICRON
