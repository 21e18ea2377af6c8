"""Band fluxes of the model atmospheres behind dust, tabulated on the models' nodes."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln.emitters import AtmosphereEmitter
from starkiln.errors import InputError
from starkiln.forward._build import AV_RANGE, ln_temperature_range, nodes_within
from starkiln.forward._kernels import (
    BLOCK,
    chebyshev,
    chebyshev_fit,
    chebyshev_slope,
    contract,
    over_nodes,
)
from starkiln.forward._table import BandFluxTable, to_unit

__all__ = ["NodeFluxTable"]

#: Terms in ln T of a cut at given log g and [Fe/H].
_CUT_TERMS = 40


@dataclass(frozen=True, eq=False)
class NodeFluxTable:
    """Band fluxes of model atmospheres behind one dust law, as functions of x, av (and rv).

    Attributes
    ----------
    emitter : AtmosphereEmitter
        Its free parameters are the columns of x.
    blackbody : BandFluxTable
        A blackbody's fluxes in the same bands, behind the same dust.
    coefficients : numpy.ndarray, shape (n_node, n_av, n_rv * n_bands)
        Spline coefficients on the models' nodes of the Chebyshev series, in av and R_V,
        of ln of the ratio to the blackbody.

    Notes
    -----
    The ratio is interpolated, for it changes far less with temperature and dust than the
    flux. As with `BandFluxTable`, a point's value does not depend on its company.
    """

    emitter: AtmosphereEmitter
    blackbody: BandFluxTable
    coefficients: np.ndarray

    @property
    def bands(self) -> tuple[str, ...]:
        """Names of the bands, the order of the columns."""
        return self.blackbody.bands

    @property
    def rv_range(self) -> tuple[float, float] | None:
        """Lowest and highest R_V; None where it is fixed."""
        return self.blackbody.rv_range

    def ln_flux(self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None = None) -> np.ndarray:
        """Return the ln band means of the radiance times 10^(-0.4 av k(lambda)).

        Parameters
        ----------
        x : numpy.ndarray, shape (n, n_parameters)
            ln of the temperature in K, then those of log g and [Fe/H] that are free.
        av : numpy.ndarray, shape (n,)
            A(0.55 um), mag.
        rv : numpy.ndarray, shape (n,), optional
            R_V, where the table was made with a free one.

        Returns
        -------
        numpy.ndarray, shape (n, n_bands)
            In W m-3 sr-1.

        Raises
        ------
        InputError
            A point is outside the models or the table, or NaN.
        """
        x, series, a, r = self._series(x, av, rv)
        ratio = self._summed(series, chebyshev(a, self.coefficients.shape[1]), r)
        return self.blackbody.ln_flux(x[:, :1], av, rv) + ratio[: len(x)]

    def ln_flux_and_slope(
        self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None = None
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return `ln_flux` and its derivative with respect to av, per mag."""
        x, series, a, r = self._series(x, av, rv)
        value, slope = self.blackbody.ln_flux_and_slope(x[:, :1], av, rv)
        n, terms = len(x), self.coefficients.shape[1]
        per_mag = 2.0 / (AV_RANGE[1] - AV_RANGE[0])
        value += self._summed(series, chebyshev(a, terms), r)[:n]
        slope += self._summed(series, chebyshev_slope(a, terms), r)[:n] * per_mag
        return value, slope

    def at(self, logg: float, feh: float) -> BandFluxTable:
        """Return the table of temperature alone, at a log g and an [Fe/H].

        It is made in about a millisecond, so that every star may have its own, and
        follows this one to 4e-4 in ln flux (0.02 in GALEX FUV).
        """
        bounds = ln_temperature_range(AtmosphereEmitter(logg, feh))
        t = nodes_within(bounds, _CUT_TERMS)
        given = (np.full(t.size, value) for value in (logg, feh))
        index, weight = self.emitter.grid.weights(np.exp(t), *given)
        ratio = over_nodes(self._flat, index, weight).reshape(t.size, *self.coefficients.shape[1:])
        low, high = self.blackbody.ln_temperature
        whole = self.blackbody.coefficients
        basis = chebyshev((t - low) * (2.0 / (high - low)) - 1.0, len(whole))
        series = (basis @ whole.reshape(len(whole), -1)).reshape(t.size, *whole.shape[1:])
        total = _sum_of_series(series, ratio, len(self.bands))
        return BandFluxTable(self.bands, bounds, chebyshev_fit(total, (0,)), self.rv_range)

    @property
    def _flat(self) -> np.ndarray:
        return self.coefficients.reshape(len(self.coefficients), -1)

    def _series(
        self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None
    ) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray | None]:
        """Return x, and the series in av, av and R_V of its points filled up to whole blocks."""
        x = np.asarray(x, dtype=float)
        names = self.emitter.parameters
        if x.ndim != 2 or x.shape[1] != len(names):
            raise InputError(
                f"x must have shape (n, {len(names)}), the columns {', '.join(names)} "
                f"(ln of the temperature), not {x.shape}"
            )
        filled = np.pad(x, ((0, -len(x) % BLOCK), (0, 0)), mode="edge") if len(x) else x
        point = self.emitter.complete(np.exp(filled[:, 0]), *filled[:, 1:].T)
        series = over_nodes(self._flat, *self.emitter.grid.weights(*point))
        a = self._padded(to_unit(np.asarray(av, dtype=float), AV_RANGE, "av in mag"))
        r = None
        if rv is not None and self.rv_range is not None:
            r = self._padded(to_unit(np.asarray(rv, dtype=float), self.rv_range, "R_V"))
        return x, series.reshape(-1, *self.coefficients.shape[1:]), a, r

    @staticmethod
    def _padded(value: np.ndarray) -> np.ndarray:
        return np.pad(value, (0, -value.size % BLOCK), mode="edge") if value.size else value

    def _summed(self, series: np.ndarray, basis: np.ndarray, r: np.ndarray | None) -> np.ndarray:
        total = np.einsum("nj,njb->nb", basis, series)
        return total if r is None else contract(total, r, total.shape[1] // len(self.bands))


def _sum_of_series(first: np.ndarray, second: np.ndarray, n_bands: int) -> np.ndarray:
    """Add series of shapes (n, n_av, n_rv * n_bands) that differ in n_av and n_rv."""
    parts = [part.reshape(*part.shape[:2], -1, n_bands) for part in (first, second)]
    total = np.zeros(np.max([part.shape for part in parts], axis=0))
    for part in parts:
        total[:, : part.shape[1], : part.shape[2]] += part
    return total.reshape(*total.shape[:2], -1)
