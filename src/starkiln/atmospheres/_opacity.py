"""Opacity of every column of an atmosphere: continua, hydrogen lines and the nodes of the haze."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln.atmospheres._wavelengths import wavelength_weights
from starkiln.constants import C2
from starkiln.matter import ContinuumOpacity, HydrogenLines, IonisationState, LineHaze
from starkiln.photons import planck_wavelength

__all__ = ["ColumnOpacity", "Columns"]


@dataclass(frozen=True)
class ColumnOpacity:
    """Opacity per mass in m2 kg-1 and the share of true absorption, (n_depth, n_col)."""

    total: np.ndarray
    thermal: np.ndarray


class Columns:
    """The columns of a model: each wavelength at each node of the haze.

    Parameters
    ----------
    wavelength_m : numpy.ndarray
        Metres, ascending.
    haze : LineHaze or None
        None leaves the lines of the metals out.
    n_node : int
        Nodes of the haze; 1 without haze.

    Attributes
    ----------
    single_m, share : numpy.ndarray
        The wavelengths in metres, (n_wave,), and the weight of each node, (n_node,).
    wavelength_m, weight : numpy.ndarray
        Of each column, (n_col,): metres, and the weight of its share in an
        integral over wavelength. Columns run over wavelength first.
    """

    def __init__(self, wavelength_m: np.ndarray, haze: LineHaze | None, n_node: int) -> None:
        self.single_m = wavelength_m
        self._haze = haze
        self._continuum = ContinuumOpacity(wavelength_m)
        self._lines = HydrogenLines(wavelength_m)
        multiples, share = (np.zeros(1), np.ones(1)) if haze is None else haze.nodes(n_node)
        self._multiples, self.share = multiples, share
        self.wavelength_m = np.tile(wavelength_m, share.size)
        self.weight = np.outer(share, wavelength_weights(wavelength_m)).ravel()

    def opacity(self, gas: IonisationState) -> ColumnOpacity:
        """Return the opacity of every column."""
        smooth = self._continuum.absorption(gas) + self._lines.absorption(gas)
        scattering = self._continuum.scattering(gas)
        n_depth = gas.density.size
        absorption = np.repeat(smooth[:, None, :], self.share.size, axis=1)
        if self._haze is not None:
            median = self._haze.median(self.single_m, gas)
            absorption += self._multiples[:, None] * median[:, None, :]
        total = absorption + scattering[:, None, :]
        thermal = (absorption / total).reshape(n_depth, -1)
        return ColumnOpacity(total.reshape(n_depth, -1) / gas.density[:, None], thermal)

    def planck(self, temperature_k: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return the Planck function and its slope dB/dT, (n_depth, n_col)."""
        t = temperature_k[:, None]
        planck = planck_wavelength(self.single_m, t)
        with np.errstate(over="ignore"):
            x = C2.value / (self.single_m * t)
            slope = planck * x / (t * -np.expm1(-x))
        repeats = (1, self.share.size)
        return np.tile(planck, repeats), np.tile(slope, repeats)

    def sample_weight(self, chosen: np.ndarray) -> np.ndarray:
        """Return integration weights for the wavelengths `chosen` alone, at every node."""
        return np.outer(self.share, wavelength_weights(self.single_m[chosen])).ravel()

    def by_wavelength(self, values: np.ndarray) -> np.ndarray:
        """Return the average of `values` (..., n_col) over the nodes, (..., n_wave)."""
        split = values.reshape(*values.shape[:-1], self.share.size, self.single_m.size)
        return np.einsum("...qw,q->...w", split, self.share)


def rosseland(total: np.ndarray, planck_slope: np.ndarray, weight: np.ndarray) -> np.ndarray:
    """Return the harmonic mean opacity weighted with dB/dT (Rosseland 1924), (n_depth,)."""
    weighted = planck_slope * weight
    return weighted.sum(axis=1) / (weighted / total).sum(axis=1)
