"""Band fluxes of an emitter behind dust, tabulated as Chebyshev series."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from starkiln.errors import InputError
from starkiln.forward._build import AV_RANGE
from starkiln.forward._kernels import contract, evaluate, evaluate_slope

__all__ = ["BandFluxTable", "stacked_coefficients", "to_unit"]


@dataclass(frozen=True, eq=False)
class BandFluxTable:
    """Band fluxes of one emitter behind one dust law, as functions of x, av (and rv).

    Attributes
    ----------
    bands : tuple of str
        Names of the bands, the order of the columns.
    ln_temperature : tuple of float
        Lowest and highest ln of the temperature in K.
    coefficients : numpy.ndarray, shape (n_t, n_av, n_rv * n_bands)
        Chebyshev coefficients in ln T, av and R_V; n_rv is 1 where R_V is fixed.
    rv_range : tuple of float or None
        Lowest and highest R_V; None where it is fixed.

    Notes
    -----
    A point's value does not depend on how many points are evaluated with it, nor
    on its place among them, for the same tuple of bands. Callers need do nothing
    for that; they should pass many points at once, for a call costs as much as
    64 points.
    """

    bands: tuple[str, ...]
    ln_temperature: tuple[float, float]
    coefficients: np.ndarray
    rv_range: tuple[float, float] | None = None

    def ln_flux(self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None = None) -> np.ndarray:
        """Return the ln band means of B_lambda 10^(-0.4 av k(lambda)).

        Parameters
        ----------
        x : numpy.ndarray, shape (n, 1)
            ln of the temperature in K.
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
            A point is outside the table or NaN: check the bounds first.
        """
        t, a, r = self._scaled(x, av, rv)
        return self._over_rv(evaluate(self.coefficients, t, a), r)

    def ln_flux_and_slope(
        self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None = None
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return `ln_flux` and its derivative with respect to av, per mag."""
        t, a, r = self._scaled(x, av, rv)
        value, slope = evaluate_slope(self.coefficients, t, a)
        per_mag = 2.0 / (AV_RANGE[1] - AV_RANGE[0])
        return self._over_rv(value, r), self._over_rv(slope, r) * per_mag

    def _over_rv(self, series: np.ndarray, r: np.ndarray | None) -> np.ndarray:
        if r is None:
            return series
        return contract(series, r, self.coefficients.shape[2] // len(self.bands))

    def _scaled(
        self, x: np.ndarray, av: np.ndarray, rv: np.ndarray | None
    ) -> tuple[np.ndarray, np.ndarray, np.ndarray | None]:
        x, av = np.asarray(x, dtype=float), np.asarray(av, dtype=float)
        if x.ndim != 2 or x.shape[1] != 1 or av.shape != x.shape[:1]:
            raise InputError(
                f"x must have shape (n, 1) and av shape (n,), not {x.shape} and {av.shape}"
            )
        t = to_unit(x[:, 0], self.ln_temperature, "ln of the temperature in K")
        a = to_unit(av, AV_RANGE, "av in mag")
        if self.rv_range is None:
            if rv is not None:
                raise InputError("this table has a fixed R_V: make it with free_rv=True")
            return t, a, None
        if rv is None or np.shape(rv) != av.shape:
            raise InputError(f"this table has a free R_V: give rv of shape {av.shape}")
        return t, a, to_unit(np.asarray(rv, dtype=float), self.rv_range, "R_V")


def stacked_coefficients(per_band: Sequence[np.ndarray]) -> np.ndarray:
    """Return the series of several bands in one array, the bands on a last axis.

    Series that are shorter than others along an axis are filled up with zeros.
    """
    if not per_band:
        return np.zeros((2, 2, 0))
    shape = np.max([c.shape for c in per_band], axis=0)
    stacked = np.zeros((*shape, len(per_band)))
    for k, own in enumerate(per_band):
        corner = tuple(slice(n) for n in own.shape)
        stacked[..., k][corner] = own
    return stacked


def to_unit(value: np.ndarray, bounds: tuple[float, float], what: str) -> np.ndarray:
    """Return `value` scaled from its bounds to [-1, 1]; refuse one outside them."""
    low, high = bounds
    if value.size and not (value.min() >= low and value.max() <= high):
        bad = value[~((value >= low) & (value <= high))][0]
        raise InputError(f"{what} = {bad:.6g} is outside the table: {low:.6g} to {high:.6g}")
    return (value - low) * (2.0 / (high - low)) - 1.0
