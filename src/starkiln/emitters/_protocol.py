"""What every emitter offers to the rooms above."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Protocol

import numpy as np

__all__ = ["Emitter"]


class Emitter(Protocol):
    """A surface whose radiance depends on a few parameters, the first a temperature.

    An emitter is hashable and compares by value, for tables of its band fluxes
    are kept by it.

    Attributes
    ----------
    name : str
        As on the command line.
    parameters : tuple of str
        Names of the parameters in order, as in the results' columns.
    bounds : mapping of str to (float, float)
        Lowest and highest value of each parameter, in the unit of that column
        (temperature in K), for which the emitter is defined.
    """

    @property
    def name(self) -> str:
        """Name on the command line."""

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the parameters."""

    @property
    def bounds(self) -> Mapping[str, tuple[float, float]]:
        """Range of each parameter."""

    def __hash__(self) -> int:
        """Return a hash of the emitter's value."""

    def radiance(self, wavelength_m: np.ndarray, *parameters: np.ndarray) -> np.ndarray:
        """Return the radiance in W m-3 sr-1.

        `wavelength_m` has shape (n_wavelength,), each parameter shape (n,); the
        result has shape (n, n_wavelength).
        """
