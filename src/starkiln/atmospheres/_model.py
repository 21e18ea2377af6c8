"""One model atmosphere, as an observer asks for it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.atmospheres._kernels import couplings, feautrier, intervals
from starkiln.atmospheres._solve import Numerics, Solution, solve
from starkiln.constants import M_U, SIGMA_SB, SIGMA_T, C
from starkiln.errors import ConvergenceError, InputError
from starkiln.matter import LINE_HAZE, LineHaze

__all__ = ["FEH_RANGE", "LOGG_RANGE", "TEMPERATURE_RANGE", "Atmosphere", "model_atmosphere"]

#: Outside, what is left out rules: molecules below; winds and departures from LTE above.
TEMPERATURE_RANGE = (4200.0, 40000.0)
LOGG_RANGE = (0.0, 5.5)
FEH_RANGE = (-2.5, 0.5)
#: Light may hold up layers deeper than this (partly ionised, in truth convective); above, a
#: push beyond gravity means that no static atmosphere exists.
_STATIC_ABOVE_TAU = 1.0
#: Free electrons per atomic mass unit where all is ionised, X = 0.74.
_ELECTRONS_PER_U = 0.87


@dataclass(frozen=True)
class Atmosphere:
    """A plane-parallel, static atmosphere in LTE and radiative equilibrium.

    Attributes
    ----------
    temperature, logg, feh : float
        Effective temperature in K, log10 of gravity in cm s-2, [Fe/H].
    status, message : str
        `ok`, or `unconverged` and why.
    iterations : int
        Passes used.
    tau_rosseland, temperature_k, gas_pressure_pa, radiation_pressure_pa : numpy.ndarray
        Structure with depth, (n_depth,).
    radiative_acceleration : numpy.ndarray
        m s-2; compare with gravity.
    density : numpy.ndarray
        kg m-3.
    flux_error : numpy.ndarray
        Total flux over sigma T^4, less 1, at every depth.
    wavelength_m, surface_flux : numpy.ndarray
        The spectrum, (n_wave,): flux through the surface in W m-3, scaled to
        sigma T^4 in all.
    """

    temperature: float
    logg: float
    feh: float
    status: str
    message: str
    iterations: int
    tau_rosseland: np.ndarray
    temperature_k: np.ndarray
    gas_pressure_pa: np.ndarray
    radiation_pressure_pa: np.ndarray
    radiative_acceleration: np.ndarray
    density: np.ndarray
    flux_error: np.ndarray
    wavelength_m: np.ndarray
    surface_flux: np.ndarray
    solution: Solution

    @property
    def gravity(self) -> float:
        """Gravity in m s-2."""
        return 0.01 * 10.0**self.logg

    @property
    def gamma(self) -> np.ndarray:
        """Radiative acceleration over gravity, (n_depth,)."""
        return self.radiative_acceleration / self.gravity

    def intensity(self, mu: Any) -> np.ndarray:
        """Return the emergent intensity, W m-3 sr-1, shape (n_mu, n_wave).

        Parameters
        ----------
        mu : array_like
            Cosines of the angle to the normal, above 0 to 1, shape (n_mu,).

        Raises
        ------
        InputError
            `mu` outside.
        """
        cosines = np.atleast_1d(as_array(mu, "", "mu", lower=1e-3, upper=1.0))
        s = self.solution
        planck = s.columns.planck(s.gas.temperature_k)[0]
        source = s.opacity.thermal * planck + (1.0 - s.opacity.thermal) * s.field.j
        first, steps = intervals(s.opacity.total / s.rosseland_opacity[:, None], s.tau)
        below, above = couplings(steps)
        gradient = (planck[-1] - planck[-2]) / steps[-1]
        rays = []
        for cosine in cosines:
            coupling = (below * cosine**2, above * cosine**2)
            incoming = -source[0] * np.expm1(-first / cosine)
            mean = feautrier(coupling, source, incoming, gradient, steps, float(cosine))[0]
            rays.append((2.0 * mean - incoming) * np.exp(-first / cosine) + incoming)
        return s.columns.by_wavelength(np.array(rays))

    def structure(self) -> Any:
        """Return the structure as an astropy table with units, one row a depth."""
        columns = {
            "tau_rosseland": (self.tau_rosseland, "", "Rosseland optical depth"),
            "temperature": (self.temperature_k, "K", "Temperature"),
            "gas_pressure": (self.gas_pressure_pa, "Pa", "Pressure of the gas, electrons included"),
            "radiation_pressure": (self.radiation_pressure_pa, "Pa", "Pressure of light"),
            "radiative_acceleration": (self.radiative_acceleration, "m s-2", "Push of light"),
            "density": (self.density, "kg m-3", "Density"),
            "flux_error": (self.flux_error, "", "Total flux over sigma T^4, less 1"),
        }
        return self._table(columns)

    def spectrum(self) -> Any:
        """Return wavelength in um and surface flux in W m-2 um-1 as an astropy table."""
        return self._table(
            {
                "wavelength": (self.wavelength_m * 1e6, "um", "Wavelength in vacuum"),
                "surface_flux": (self.surface_flux * 1e-6, "W m-2 um-1", "Flux at the surface"),
            }
        )

    def _table(self, columns: dict[str, tuple[np.ndarray, str, str]]) -> Any:
        from astropy.table import Column, Table

        table = Table(
            [Column(v, n, unit=unit or None, description=d) for n, (v, unit, d) in columns.items()]
        )
        table.meta = {
            "temperature": self.temperature,
            "logg": self.logg,
            "feh": self.feh,
            "status": self.status,
            "message": self.message,
            "iterations": self.iterations,
        }
        return table


def model_atmosphere(
    temperature: Any,
    logg: float,
    *,
    feh: float = 0.0,
    haze: LineHaze | None = LINE_HAZE,
    numerics: Numerics | None = None,
) -> Atmosphere:
    """Compute one model atmosphere.

    Parameters
    ----------
    temperature : astropy.units.Quantity or float
        Effective temperature in K, 4,200 to 40,000.
    logg : float
        log10 of surface gravity in cm s-2, 0 to 5.5.
    feh : float
        log10 of the metals' abundance over the Sun's, -2.5 to 0.5.
    haze : LineHaze or None
        Statistical metal lines; None leaves them out.
    numerics : Numerics, optional
        Fineness and tolerances.

    Returns
    -------
    Atmosphere
        Converged.

    Raises
    ------
    InputError
        A value out of range, or gravity below the push of light (Gamma > 1).
    ConvergenceError
        No convergence; `partial` is the `Atmosphere` reached, status `unconverged`.

    Notes
    -----
    Transfer by Feautrier's method with coherent scattering, Newton's steps to
    constant flux, pressure with the push of light taken off gravity, metal lines
    as a log-normal haze. No convection, no molecules but H2.
    """
    effective = as_float(temperature, "K", "temperature")
    _check_range(effective, "temperature", "K", TEMPERATURE_RANGE, _WHY_TEMPERATURE)
    log_gravity = as_float(logg, "", "log g")
    _check_range(log_gravity, "log g", "(cgs)", LOGG_RANGE, "")
    metals = as_float(feh, "", "[Fe/H]")
    _check_range(metals, "[Fe/H]", "dex", FEH_RANGE, "")
    gravity = 0.01 * 10.0**log_gravity
    electrons = _ELECTRONS_PER_U * SIGMA_T.value / M_U.value
    _check_gamma(
        electrons * SIGMA_SB.value * effective**4 / (C.value * gravity),
        effective, log_gravity, "free electrons alone",
    )  # fmt: skip
    result = solve(effective, gravity, metals, haze, numerics or Numerics())
    model = _atmosphere(result, effective, log_gravity, metals)
    upper = model.gamma[model.tau_rosseland < _STATIC_ABOVE_TAU].max()
    _check_gamma(float(upper), effective, log_gravity, "the layers above optical depth 1")
    if not result.converged:
        raise ConvergenceError(model.message, replace(model, status="unconverged"))
    return model


_WHY_TEMPERATURE = "below, molecules rule, above, winds and departures from LTE: "


def _check_range(value: float, name: str, unit: str, bounds: tuple[float, float], why: str) -> None:
    low, high = bounds
    if not low <= value <= high:
        raise InputError(
            f"{name} = {value:g} {unit} is outside the model atmospheres ({why}"
            f"give {low:g} to {high:g} {unit})"
        )


def _check_gamma(gamma: float, effective: float, logg: float, where: str) -> None:
    if gamma > 1.0:
        raise InputError(
            f"log g = {logg:g} at {effective:g} K: light pushes {gamma:.2f} times as hard as "
            f"gravity pulls on {where} (Gamma > 1), so no static atmosphere exists; give log g "
            f"above {logg + np.log10(gamma):.2f}"
        )


def _atmosphere(result: Solution, effective: float, logg: float, feh: float) -> Atmosphere:
    worst = float(np.abs(result.flux_error).max())
    message = "" if result.converged else (
        f"not converged after {result.iterations} iterations at {effective:g} K, log g {logg:g}, "
        f"[Fe/H] {feh:g}: flux off by {100 * worst:.2g} per cent, temperature still moving by "
        f"{100 * max(result.step, result.skin_step):.2g} per cent; take a neighbouring model"
    )  # fmt: skip
    surface = result.field.h_surface
    scale = SIGMA_SB.value * effective**4 / float(surface @ result.columns.weight)
    return Atmosphere(
        temperature=effective, logg=logg, feh=feh,
        status="ok" if result.converged else "unconverged",
        message=message,
        iterations=result.iterations,
        tau_rosseland=result.tau,
        temperature_k=result.gas.temperature_k,
        gas_pressure_pa=result.gas.gas_pressure_pa,
        radiation_pressure_pa=result.radiation_pressure,
        radiative_acceleration=result.light,
        density=result.gas.density,
        flux_error=result.flux_error,
        wavelength_m=result.columns.single_m,
        surface_flux=scale * result.columns.by_wavelength(surface),
        solution=result,
    )  # fmt: skip
