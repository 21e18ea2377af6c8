"""The model of one star as figures need it: band fluxes and spectra of given draws."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from starkiln.constants import MAS_RAD
from starkiln.forward import band_fluxes

#: W m-3 to W m-2 um-1.
PER_UM = 1e-6


@dataclass(frozen=True)
class StarModel:
    """Emitter, dust and bands of one star.

    Attributes
    ----------
    emitter, dust
        As they were fitted.
    bands : tuple of str
        The star's bands, in the order of its photometry.
    """

    emitter: Any
    dust: Any
    bands: tuple[str, ...]

    def band_flux(self, draws: Any) -> np.ndarray:
        """Return the band fluxes of draws in W m-2 um-1, shape (n_draws, n_bands).

        Parameters
        ----------
        draws : astropy.table.Table or mapping of arrays
            With `temperature` (K), `angular_diameter` (mas), `av` (mag) and further
            parameters of the emitter.
        """
        free = [_values(draws, "rv")] if _has(draws, "rv") else []
        table = band_fluxes(self.emitter, self.bands, self.dust, free_rv=bool(free))
        ln_flux = table.ln_flux(self._shape(draws), _values(draws, "av"), *free)
        return np.exp(ln_flux) * self._solid_angle(draws)[:, None] * PER_UM

    def spectrum(self, wavelength_m: np.ndarray, draws: Any) -> np.ndarray:
        """Return reddened spectra in W m-2 um-1, shape (n_draws, n_wavelengths)."""
        shape = self._shape(draws)
        columns = [np.exp(shape[:, 0]), *shape[:, 1:].T]
        radiance = self.emitter.radiance(wavelength_m, *columns)
        dimming = -0.4 * _values(draws, "av")[:, None] * self._curves(wavelength_m, draws)
        return radiance * 10.0**dimming * self._solid_angle(draws)[:, None] * PER_UM

    def _curves(self, wavelength_m: np.ndarray, draws: Any) -> np.ndarray:
        if not _has(draws, "rv"):
            return self.dust.curve(wavelength_m)
        laws = (replace(self.dust, rv=float(rv)) for rv in _values(draws, "rv"))
        return np.array([law.curve(wavelength_m) for law in laws])

    def _shape(self, draws: Any) -> np.ndarray:
        first = np.log(_values(draws, "temperature"))
        return np.column_stack([first, *(_values(draws, p) for p in self.emitter.parameters[1:])])

    def _solid_angle(self, draws: Any) -> np.ndarray:
        return 0.25 * np.pi * (_values(draws, "angular_diameter") * MAS_RAD.value) ** 2


def _has(draws: Any, name: str) -> bool:
    return name in (draws.colnames if hasattr(draws, "colnames") else draws)


def _values(draws: Any, name: str) -> np.ndarray:
    return np.asarray(draws[name], dtype=float)
