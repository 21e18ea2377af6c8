"""One passband: its response on quadrature nodes, and its zero points."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property
from typing import Any, Literal

import numpy as np

from starkiln.constants import C
from starkiln.errors import BandError
from starkiln.passbands._vega import vega_mean_w_m3

__all__ = ["AB_ZERO_W_M2_HZ", "ST_ZERO_W_M3", "Band", "zero_flux_w_m3"]

#: Flux density of AB magnitude 0, 10^(-48.6/2.5) erg s-1 cm-2 Hz-1 (Oke & Gunn 1983,
#: ApJ 266, 713), in W m-2 Hz-1.
AB_ZERO_W_M2_HZ = 10.0 ** (-48.6 / 2.5) * 1e-3
#: Flux density of ST magnitude 0, 10^(-21.1/2.5) erg s-1 cm-2 A-1 (Koornneef et al.
#: 1986, Highlights of Astronomy 7, 833), in W m-3.
ST_ZERO_W_M3 = 10.0 ** (-21.1 / 2.5) * 1e7


@dataclass(frozen=True, eq=False)
class Band:
    """A passband with its photometric system.

    Attributes
    ----------
    name, system : str
        Such as `2MASS Ks` and `2MASS`; the zero points of a system's bands share
        an offset.
    response_kind : {"photon", "energy"}
        Whether the response weights photons or energy.
    wavelength_m, response : numpy.ndarray, shape (n,)
        Quadrature nodes in metres, the samples of the published curve and three
        between each two, and the response there.
    step_m : numpy.ndarray, shape (n,)
        Quadrature weights: `f @ step_m` is the integral of f over wavelength.
    native_system : {"Vega", "AB"}
        System of a magnitude that is given without one.
    published_vega_zero_w_m3 : float or None
        Band mean of F_lambda of Vega magnitude 0 as published; None: Vega's own
        spectrum through the band is magnitude 0.
    ab_offset_mag : float
        AB magnitude minus catalogue magnitude, for a native system of AB.
    asinh_softening : float or None
        Softening b of the survey's asinh magnitudes (Lupton, Gunn & Szalay 1999,
        AJ 118, 1406), in units of the flux of magnitude 0.
    zero_point_error_mag, offset_error_mag : float
        Standard error of the band's own zero point, and of the offset that all
        bands of the system share.
    saturation_mag, saturation_error_mag : float or None
        Catalogue magnitude brighter than which the survey saturates, and the
        error then added in quadrature; None for the latter: the band is dropped.
    curve_source, zero_point_source, offset_source, saturation_source : str
        Where each comes from.
    """

    name: str
    system: str
    response_kind: Literal["photon", "energy"]
    wavelength_m: np.ndarray
    response: np.ndarray
    step_m: np.ndarray
    native_system: str = "AB"
    published_vega_zero_w_m3: float | None = None
    ab_offset_mag: float = 0.0
    asinh_softening: float | None = None
    zero_point_error_mag: float = 0.0
    offset_error_mag: float = 0.0
    saturation_mag: float | None = None
    saturation_error_mag: float | None = None
    curve_source: str = ""
    zero_point_source: str = ""
    offset_source: str = ""
    saturation_source: str = ""

    @cached_property
    def weight(self) -> np.ndarray:
        """Weights of the band mean: `flux_lambda @ weight`, as the detector takes it.

        Shape (n,), sum 1: response times wavelength (photon) or response alone
        (energy), times the quadrature weight.
        """
        factor = self.wavelength_m if self.response_kind == "photon" else 1.0
        weight = self.response * factor * self.step_m
        return weight / weight.sum()

    @cached_property
    def pivot_m(self) -> float:
        """Pivot wavelength: F_nu = F_lambda pivot^2 / c for the band means of any source."""
        return 1.0 / math.sqrt(float(self.wavelength_m**-2 @ self.weight))

    @cached_property
    def mean_m(self) -> float:
        """Mean wavelength, weighted by the response alone."""
        plain = self.response * self.step_m
        return float(self.wavelength_m @ plain / plain.sum())

    @cached_property
    def width_m(self) -> float:
        """Effective width: the integral of the response over its peak."""
        return float(self.response @ self.step_m / self.response.max())

    @cached_property
    def photon_mean_m(self) -> float:
        """Mean wavelength of the response per photon.

        A band mean of F_lambda times it, over h c, is the band mean of the photon
        flux per wavelength, of any source.
        """
        plain = self.response * self.step_m
        if self.response_kind == "photon":
            return self.mean_m
        return float(plain.sum() / (plain / self.wavelength_m).sum())

    @cached_property
    def rate_width_m(self) -> float:
        """Integral of the response per photon, as published (peak that of the response)."""
        if self.response_kind == "photon":
            return float(self.response @ self.step_m)
        per_photon = self.response / self.wavelength_m
        return float(per_photon @ self.step_m * self.response.max() / per_photon.max())

    @cached_property
    def half_maximum_m(self) -> tuple[float, float]:
        """Outermost wavelengths at which the response is half its peak."""
        above = np.flatnonzero(self.response >= 0.5 * self.response.max())
        return self._crossing(above[0], -1), self._crossing(above[-1], 1)

    @property
    def range_m(self) -> tuple[float, float]:
        """Shortest and longest wavelength of the curve."""
        return float(self.wavelength_m[0]), float(self.wavelength_m[-1])

    @property
    def pivot(self) -> Any:
        """Pivot wavelength as a quantity in um."""
        return self._micron(self.pivot_m)

    @property
    def wavelength(self) -> Any:
        """Wavelengths of the nodes as a quantity in um."""
        return self._micron(self.wavelength_m)

    @property
    def vega_source(self) -> str:
        """Where the Vega zero point comes from."""
        if self.published_vega_zero_w_m3 is None:
            return "Vega of CALSPEC alpha_lyr_stis_008 (Bohlin 2014, AJ 147, 127) is magnitude 0"
        return self.zero_point_source

    @property
    def source(self) -> str:
        """Where curve and zero point come from, in one line."""
        return f"curve: {self.curve_source}; zero point: {self.zero_point_source}"

    @cached_property
    def vega_zero_w_m3(self) -> float:
        """Band mean of F_lambda of Vega magnitude 0, W m-3; see `vega_source`."""
        if self.published_vega_zero_w_m3 is not None:
            return self.published_vega_zero_w_m3
        photon = self.response_kind == "photon"
        return vega_mean_w_m3(self.name, self.wavelength_m, self.response, photon=photon)

    def zero_flux_w_m3(self, system: str | None = None) -> float:
        """Return the band mean of F_lambda of magnitude 0, in W m-3.

        Parameters
        ----------
        system : {"Vega", "AB", "ST"}, optional
            Default: the catalogue's own, with the survey's offset from AB
            (SDSS u and z) applied. `"AB"` is AB proper, without it.

        Raises
        ------
        BandError
            Unknown system, or Vega's spectrum does not cover the band.
        """
        if system is None and self.native_system == "AB":
            return self.zero_flux_w_m3("AB") * 10.0 ** (-0.4 * self.ab_offset_mag)
        chosen = (system or self.native_system).upper()
        if chosen == "AB":
            return AB_ZERO_W_M2_HZ * C.value / self.pivot_m**2
        if chosen == "ST":
            return ST_ZERO_W_M3
        if chosen != "VEGA":
            raise BandError(f"unknown magnitude system '{system}': use Vega, AB or ST")
        return self.vega_zero_w_m3

    def _crossing(self, index: int, direction: int) -> float:
        half = 0.5 * self.response.max()
        other = index + direction
        if not 0 <= other < self.response.size:
            return float(self.wavelength_m[index])
        inside, outside = self.response[index], self.response[other]
        share = (inside - half) / (inside - outside)
        span = self.wavelength_m[other] - self.wavelength_m[index]
        return float(self.wavelength_m[index] + share * span)

    @staticmethod
    def _micron(value_m: Any) -> Any:
        from astropy import units as u

        return u.Quantity(value_m, u.m).to(u.um)


def zero_flux_w_m3(value: float, unit: str, pivot_m: float) -> float:
    """Return the band mean of F_lambda of magnitude 0 from a zero point in any form.

    Parameters
    ----------
    value, unit : float, str
        A flux density per wavelength: the band mean itself; per frequency: that of
        a source of constant F_nu; `mag`: the AB magnitude of a source of magnitude 0.
    pivot_m : float
        Pivot wavelength of the band.

    Raises
    ------
    BandError
        The unit is none of these.
    """
    from astropy import units as u

    try:
        parsed = u.Unit(unit)
        if parsed == u.mag:
            return AB_ZERO_W_M2_HZ * 10.0 ** (-0.4 * value) * C.value / pivot_m**2
        if parsed.is_equivalent(u.Jy):
            return value * float(parsed.to(u.W / u.m**2 / u.Hz)) * C.value / pivot_m**2
        return value * float(parsed.to(u.W / u.m**3))
    except (ValueError, u.UnitConversionError) as error:
        raise BandError(
            f"the zero point's unit '{unit}' is unknown: use Jy, W m-2 um-1 or mag (the AB "
            "magnitude of a source of magnitude 0)"
        ) from error
