"""A blackbody."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np

from starkiln.photons import planck_wavelength

__all__ = ["BlackbodyEmitter"]

_BOUNDS = MappingProxyType({"temperature": (2500.0, 60000.0)})


@dataclass(frozen=True)
class BlackbodyEmitter:
    """A blackbody: one parameter, its temperature.

    Attributes
    ----------
    name, parameters, bounds
        See `Emitter`. The bounds are those of the tabulated band fluxes; the
        temperature's prior lies within them.
    """

    @property
    def name(self) -> str:
        """Name on the command line."""
        return "blackbody"

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the parameters."""
        return ("temperature",)

    @property
    def bounds(self) -> Mapping[str, tuple[float, float]]:
        """Range of the temperature, K."""
        return _BOUNDS

    def radiance(self, wavelength_m: np.ndarray, *parameters: np.ndarray) -> np.ndarray:
        """Return Planck's B_lambda in W m-3 sr-1.

        Parameters
        ----------
        wavelength_m : numpy.ndarray, shape (n_wavelength,)
            Metres.
        *parameters : numpy.ndarray, shape (n,)
            One array: the temperatures in K.

        Returns
        -------
        numpy.ndarray, shape (n, n_wavelength)
        """
        (temperature_k,) = parameters
        return planck_wavelength(wavelength_m, np.asarray(temperature_k, dtype=float)[:, None])
