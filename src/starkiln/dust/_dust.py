"""What is assumed of the dust between a star and the observer."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.dust._catalogue import LAWS, law_info
from starkiln.dust._laws import load_law
from starkiln.errors import DustError

__all__ = ["DEFAULT_LAW", "DEFAULT_RV", "Dust", "law_names"]

#: Gordon et al. 2023, ApJ 950, 86: the one average law of the Milky Way that covers
#: 0.0912 to 32 um, so that every band from GALEX to WISE W4 is inside its range.
DEFAULT_LAW = "G23"

#: R_V of the diffuse Milky Way (Cardelli, Clayton & Mathis 1989, ApJ 345, 245).
DEFAULT_RV = 3.1

_PRIORS = ("column", "free", "zero", "gaussian", "uniform")


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
    prior : {"column", "free", "zero", "gaussian", "uniform"}
        Of `av`. `column`: the row's own `av`, `e_av`, and zero where it has none;
        `free`: half-normal of standard deviation `width`; `zero`: none;
        `gaussian`: normal of `mean` and `width`, cut at 0, as from a dust map;
        `uniform`: between 0 and `width`.
    width, mean : float
        Magnitudes; see `prior`.
    f_a : float
        Share of the Milky Way component, 0 to 1, in the mixture G16 only.

    Notes
    -----
    `av` everywhere is the law's own extinction at 0.55 um in magnitudes.

    Beyond the range that it was published for, a law is refused at short
    wavelengths. At long ones it is continued as a power law with the value and the
    slope that it has at its end, if it ends between 3 and 8 um or beyond 25 um;
    otherwise it is refused. CCM89, O94, F99, F04 and M14 end at 3.33 um, so that W1
    (2.6 to 4.0 um) is half inside and W2, W3 and W4 get the power law. That has no
    silicate feature: at 12 um CCM89 gives A_W3/A_V of 0.010 and F99 0.017 where G23
    gives 0.047, at 22 um 0.003 and 0.007 where G23 gives 0.039 (5,772 K).
    """

    law: str = DEFAULT_LAW
    rv: float = DEFAULT_RV
    prior: str = "column"
    width: float = 1.0
    mean: float = 0.0
    f_a: float = 1.0

    def __post_init__(self) -> None:
        if self.prior not in _PRIORS:
            raise DustError(f"unknown dust prior '{self.prior}': use {', '.join(_PRIORS)}")
        if not (math.isfinite(self.width) and self.width > 0.0):
            raise DustError(f"dust width = {self.width} mag is out of bounds: give one above 0 mag")
        if not (math.isfinite(self.mean) and self.mean >= 0.0):
            raise DustError(f"dust mean = {self.mean} mag is out of bounds: give one of at least 0")
        if not 0.0 <= self.f_a <= 1.0:
            raise DustError(f"f_a = {self.f_a} is out of bounds: give a number between 0 and 1")
        law_info(self.law, self.rv)

    def curve(self, wavelength_m: Any) -> np.ndarray:
        """Return A_lambda / A(0.55 um), 1 at 0.55 um by construction.

        Parameters
        ----------
        wavelength_m : array_like or astropy.units.Quantity
            Metres.

        Returns
        -------
        numpy.ndarray
            Shape of `wavelength_m`. A law that does not reach 0.55 um keeps its
            published A_lambda / A_V.

        Raises
        ------
        DustError
            A wavelength is outside the law's range, and the law is not continued
            there.
        """
        wavelength = as_array(wavelength_m, "m", "wavelength", lower=0.0, exclusive=True)
        law = load_law(self.law, self.rv, self.f_a)
        return law.curve(wavelength.ravel()).reshape(wavelength.shape)

    def extrapolated(self, wavelength_m: Any) -> np.ndarray:
        """Return whether each wavelength (m) is beyond the law's long end."""
        wavelength = as_array(wavelength_m, "m", "wavelength", lower=0.0, exclusive=True)
        return wavelength > self.range_m[1]

    def av_from_ebv(self, ebv: Any) -> np.ndarray:
        """Return `av`, the extinction at 0.55 um, of a colour excess E(B-V) in mag.

        R_V E(B-V) is the A_V of the law's own definition; `av` is that times the
        law's A(0.55 um)/A_V, 0.978 (F99) to 1.000. A single average law has its own
        R_V.
        """
        excess = as_array(ebv, "mag", "E(B-V)", lower=0.0)
        return excess * self.effective_rv * load_law(self.law, self.rv, self.f_a).scale

    @property
    def effective_rv(self) -> float:
        """R_V that the law has: `rv`, or that of a single average or a mixture."""
        if self.law == "G16":
            # Gordon et al. 2016, ApJ 826, 104, eq. 11.
            return 1.0 / (self.f_a / self.rv + (1.0 - self.f_a) / 2.74)
        return LAWS[self.law].own_rv or self.rv

    @property
    def rv_range(self) -> tuple[float, float] | None:
        """Range of R_V of the law; None for a single average."""
        return LAWS[self.law].rv_range

    @property
    def reference(self) -> str:
        """Where the law was published."""
        return LAWS[self.law].reference

    @property
    def range_m(self) -> tuple[float, float]:
        """Shortest and longest wavelength that the law was published for, in metres."""
        law = LAWS[self.law]
        return law.short_um * 1e-6, law.long_um * 1e-6


def law_names() -> tuple[str, ...]:
    """Return the names of all laws."""
    return tuple(LAWS)
