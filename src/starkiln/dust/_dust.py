"""What is assumed of the dust between a star and the observer."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.dust._laws import load_law
from starkiln.errors import DustError

__all__ = ["DEFAULT_LAW", "Dust"]

#: Gordon et al. 2023, ApJ 950, 86: the one average law of the Milky Way that covers
#: 0.0912 to 32 um, so that every band from GALEX to WISE W4 is inside its range.
DEFAULT_LAW = "G23"

_PRIORS = ("column", "free", "zero")


@dataclass(frozen=True)
class Dust:
    """An extinction law and what is known of its amount.

    Parameters
    ----------
    law : str
        Published name as in the dust_extinction package (`G23`, `F99`, `CCM89`,
        ...; `dust.law_names()`). Default: Gordon et al. 2023, because it is the
        one law that covers 0.0912 to 32 um and so needs no extrapolation in any
        band of the library.
    rv : float
        A(V)/E(B-V); ignored by a single average law.
    prior : {"column", "free", "zero"}
        `column`: the row's own `av`, `e_av`, and zero where it has none;
        `free`: half-normal; `zero`: none.
    width : float
        Standard deviation of the half-normal, mag.

    Notes
    -----
    `av` everywhere is the law's own extinction at 0.55 um in magnitudes.
    """

    law: str = DEFAULT_LAW
    rv: float = 3.1
    prior: str = "column"
    width: float = 1.0

    def __post_init__(self) -> None:
        if self.prior not in _PRIORS:
            raise DustError(f"unknown dust prior '{self.prior}': use {', '.join(_PRIORS)}")
        if not (math.isfinite(self.width) and self.width > 0.0):
            raise DustError(f"dust width = {self.width} mag is out of bounds: give one above 0 mag")
        load_law(self.law, self.rv)

    def curve(self, wavelength_m: Any) -> np.ndarray:
        """Return A_lambda / A(0.55 um), 1 at 0.55 um by construction.

        Parameters
        ----------
        wavelength_m : array_like or astropy.units.Quantity
            Metres.

        Returns
        -------
        numpy.ndarray
            Shape of `wavelength_m`. Beyond the law's long end it is continued as
            a power law with the value and the slope that the law has there (see
            `extrapolated`).

        Raises
        ------
        DustError
            A wavelength is shorter than the law was published for.
        """
        wavelength = as_array(wavelength_m, "m", "wavelength", lower=0.0, exclusive=True)
        law = load_law(self.law, self.rv)
        return law.curve(wavelength.ravel()).reshape(wavelength.shape)

    def extrapolated(self, wavelength_m: Any) -> np.ndarray:
        """Return whether each wavelength (m) is beyond the law's long end."""
        wavelength = as_array(wavelength_m, "m", "wavelength", lower=0.0, exclusive=True)
        return wavelength > self.range_m[1]

    @property
    def range_m(self) -> tuple[float, float]:
        """Shortest and longest wavelength that the law was published for, in metres."""
        law = load_law(self.law, self.rv)
        return law.short_m, law.long_m
