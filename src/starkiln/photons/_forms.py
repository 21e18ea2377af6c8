"""The door of Planck's law: any spectral variable, any form, any unit.

`planck`, `wien` and `rayleigh_jeans` share their arguments. The spectral point may
be given in any spectral unit whatever variable the density is per.
"""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C
from starkiln.errors import InputError
from starkiln.photons import _kernels as kernels

#: Spectral variable -> SI unit of its coordinate.
VARIABLES = {
    "wavelength": "m",
    "frequency": "Hz",
    "angular_frequency": "rad s-1",
    "wavenumber": "m-1",
    "energy": "J",
}


class Form(NamedTuple):
    """One way to count blackbody radiation: radiance times `factor`, in `unit`."""

    factor: float
    photons: bool
    unit: str


#: Form -> factor on the radiance, whether photons are counted, SI unit (per {variable}).
FORMS = {
    "radiance": Form(1.0, False, "W / (m2 sr {})"),
    "exitance": Form(math.pi, False, "W / (m2 {})"),
    "energy_density": Form(4.0 * math.pi / C.value, False, "J / (m3 {})"),
    "photon_radiance": Form(1.0, True, "photon / (s m2 sr {})"),
    "photon_exitance": Form(math.pi, True, "photon / (s m2 {})"),
    "photon_density": Form(4.0 * math.pi / C.value, True, "photon / (m3 {})"),
}


class Case(NamedTuple):
    """A checked choice of variable and form."""

    law: kernels.PowerLaw
    factor: float
    unit: str


def planck(
    at: Any,
    temperature: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
    dilution: Any = 1.0,
    unit: Any = None,
) -> Any:
    """Return Planck's law.

    Parameters
    ----------
    at : Quantity or array_like
        Spectral points in any spectral unit (wavelength, frequency, angular
        frequency in rad/s, wavenumber, photon energy); a bare number is in the SI
        unit of `variable`. A zero wavelength is refused.
    temperature : Quantity or array_like
        K, at least 0; broadcast against `at`. Also taken: a quantity in degrees
        Celsius, or k T as an energy.
    variable : {"wavelength", "frequency", "angular_frequency", "wavenumber", "energy"}
        What the density is per.
    form : str
        One of `FORMS`: radiance, exitance (pi times the radiance), energy density
        (4 pi / c times), and the same for the number of photons.
    dilution : float or array_like
        Factor on the emission, at least 0: a grey emissivity, or the dilution factor
        of the radiation field.
    unit : str or Unit, optional
        Unit of the result; SI per SI unit of `variable` by default.

    Returns
    -------
    Quantity
        Broadcast shape. At T = 0 and at infinite h nu / k T the limit, 0.

    Raises
    ------
    InputError
        Unknown variable or form, value out of bounds, incompatible unit.

    Notes
    -----
    Planck 1901, Ann. Phys. 309, 553; forms as in Rybicki & Lightman 1979, Radiative
    Processes in Astrophysics, section 1.5.
    """
    case = resolve(variable, form)
    temperature_k = kelvin(temperature)
    weight = as_array(dilution, "", "dilution", lower=0.0)
    radiance = kernels.planck(case.law, coordinate(at, variable), temperature_k)
    if weight.shape or weight != 1.0 or case.factor != 1.0:
        radiance = case.factor * weight * radiance
    return give(radiance, case.unit, unit)


def wien(
    at: Any, temperature: Any, *, variable: str = "wavelength", form: str = "radiance", **more: Any
) -> Any:
    """Return Wien's law, the limit of large h nu / k T; arguments of `planck`."""
    return _limit(kernels.wien, at, temperature, variable, form, **more)


def rayleigh_jeans(
    at: Any, temperature: Any, *, variable: str = "wavelength", form: str = "radiance", **more: Any
) -> Any:
    """Return the Rayleigh-Jeans law, the limit of small h nu / k T; arguments of `planck`."""
    return _limit(kernels.rayleigh_jeans, at, temperature, variable, form, **more)


def ln_planck(
    at: Any, temperature: Any, *, variable: str = "wavelength", form: str = "radiance"
) -> np.ndarray:
    """Return the natural logarithm of `planck` in its SI unit.

    Finite where the radiance itself is below the smallest float, as for
    h nu / k T = 1e4; -inf where the radiance is 0.
    """
    case = resolve(variable, form)
    point = coordinate(at, variable)
    return kernels.ln_planck(case.law, point, kelvin(temperature)) + math.log(case.factor)


def limit_errors(at: Any, temperature: Any, *, variable: str = "wavelength") -> Any:
    """Return the relative errors of Wien's and of the Rayleigh-Jeans law.

    Parameters
    ----------
    at, temperature, variable
        As for `planck`.

    Returns
    -------
    wien_error, rayleigh_jeans_error : numpy.ndarray
        (limit - Planck) / Planck: -exp(-x) and (exp(x) - 1 - x) / x with
        x = h nu / k T, the same in every variable and form.
    """
    return kernels.limit_errors(reduced_energy(at, temperature, variable=variable))


def reduced_energy(at: Any, temperature: Any, *, variable: str = "wavelength") -> np.ndarray:
    """Return x = h nu / k T at a spectral point (see `planck`)."""
    law = kernels.power_law(known(variable, VARIABLES, "spectral variable"), photons=False)
    return kernels.exponent(law, coordinate(at, variable), kelvin(temperature))


def known(name: str, among: Any, what: str) -> str:
    """Return `name` if it is one of `among`, else raise an error that lists them."""
    if name not in among:
        raise InputError(f"{what} {name!r} is unknown: choose one of {', '.join(among)}")
    return name


def resolve(variable: str, form: str) -> Case:
    """Return the power law, factor and SI unit of a variable and a form."""
    known(variable, VARIABLES, "spectral variable")
    chosen = FORMS[known(form, FORMS, "form")]
    law = kernels.power_law(variable, chosen.photons)
    return Case(law, chosen.factor, chosen.unit.format(VARIABLES[variable]))


def kelvin(value: Any, name: str = "temperature", *, exclusive: bool = False) -> np.ndarray:
    """Return temperatures in kelvins, from kelvins, degrees Celsius or k T as an energy."""
    equivalencies: Any = ()
    if hasattr(value, "unit"):
        from astropy import units as u

        equivalencies = u.temperature() + u.temperature_energy()
    return as_array(value, "K", name, lower=0.0, exclusive=exclusive, equivalencies=equivalencies)


def coordinate(at: Any, variable: str, name: str = "") -> np.ndarray:
    """Return spectral points, in any spectral unit, in the SI unit of `variable`."""
    label = name or variable.replace("_", " ")
    unit = VARIABLES[variable]
    given = _converted(at, variable, label) if hasattr(at, "unit") else at
    points = as_array(given, unit, label, lower=0.0)
    # Infinite wavelength is a limit that exists, so the bound is not `exclusive`.
    if variable == "wavelength" and np.any(points == 0.0):
        raise InputError(f"{label} = 0 m is out of bounds: give a number above 0 m")
    return points


def give(value: Any, unit: str, wanted: Any = None) -> Any:
    """Return `value` in `unit` as a Quantity, converted to the unit `wanted`."""
    from astropy import units as u

    quantity = u.Quantity(np.asarray(value), unit, copy=False)
    if wanted is None:
        return quantity
    try:
        return quantity.to(wanted)
    except (u.UnitConversionError, ValueError, TypeError) as error:
        raise InputError(f"a result in '{unit}' cannot be given in '{wanted}'") from error


def _converted(at: Any, variable: str, label: str) -> Any:
    from astropy import units as u

    unit = u.Unit(VARIABLES[variable])
    if at.unit.is_equivalent(unit):
        return at
    # astropy's spectral equivalencies know cycles, not radians.
    turns = u.rad / u.s
    if at.unit.is_equivalent(turns):
        at = u.Quantity(at.to_value(turns) * (0.5 / math.pi), u.Hz)
    target = u.Hz if variable == "angular_frequency" else unit
    with np.errstate(divide="ignore"):
        plain = as_array(at, target.to_string(), label, equivalencies=u.spectral())
    return plain * (2.0 * math.pi) if variable == "angular_frequency" else plain


def _limit(
    kernel: Any,
    at: Any,
    temperature: Any,
    variable: str,
    form: str,
    *,
    dilution: Any = 1.0,
    unit: Any = None,
) -> Any:
    case = resolve(variable, form)
    weight = as_array(dilution, "", "dilution", lower=0.0)
    radiance = kernel(case.law, coordinate(at, variable), kelvin(temperature))
    return give(case.factor * weight * radiance, case.unit, unit)
