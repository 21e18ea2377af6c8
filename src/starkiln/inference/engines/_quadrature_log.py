"""The likelihood that is Gaussian in ln flux, with the angular diameter integrated out.

The covariance of the bands is a fixed matrix (errors, system offsets) plus f^2
times unity, so one rotation makes it diagonal for every misfit f. In ln theta the
posterior is then Gaussian: it is integrated in closed form.
"""

from __future__ import annotations

import math

import numpy as np

from starkiln.inference._problem import LN_SOLID_ANGLE, Problem
from starkiln.inference.engines import _truncated

_LN_2PI = math.log(2.0 * math.pi)


class LogForm:
    """ln of the likelihood, integrated over ln theta, and what a step in A_V needs.

    Attributes
    ----------
    rotation : numpy.ndarray
        From bands to the components of `Surface`, shape (n_bands, n_bands).
    offset : numpy.ndarray
        To be added to ln flux per steradian before the rotation, per band.
    """

    #: Share of the draws of A_V that follow its prior where the data say little of it.
    defence = 0.0

    def __init__(self, problem: Problem) -> None:
        bands = problem.bands
        shared = (bands.member * bands.offset_variance) @ bands.member.T
        self._variance, self.rotation = np.linalg.eigh(np.diag(bands.variance) + shared)
        # eigh may return a variance of 0 as -1e-20.
        self._variance = np.maximum(self._variance, 0.0)
        self.offset = np.full(len(bands.names), LN_SOLID_ANGLE)
        self._data = bands.ln_data @ self.rotation
        self._one = self.rotation.sum(axis=0)
        self._bounds = problem.bounds[problem.names.index("ln_diameter")]

    def fit_av(
        self, value: np.ndarray, slope: np.ndarray, misfit: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Return ln likelihood, its derivative with respect to A_V and its curvature.

        Parameters
        ----------
        value, slope : numpy.ndarray
            Components of the model and their derivatives, shape (j, k, n).
        misfit : numpy.ndarray
            f, shape (k,).

        Returns
        -------
        ln_likelihood, score, information : numpy.ndarray
            Shape (j, k); ln theta integrated out. The information is that of the
            linearised model (Gauss-Newton).
        """
        weight = 1.0 / (self._variance + misfit[:, None] ** 2)
        one = weight * self._one
        total = one @ self._one
        residual = self._data - value
        ln_like, centre = self._integrated(residual, weight, one, total)
        weighted = weight * slope
        mean_slope = np.einsum("jkn,kn->jk", slope, one) / total
        score = np.einsum("jkn,jkn->jk", weighted, residual) - 2.0 * centre * mean_slope * total
        information = np.einsum("jkn,jkn->jk", weighted, slope) - mean_slope**2 * total
        return ln_like, score, information

    def settle(
        self, value: np.ndarray, misfit: np.ndarray, u: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return draws of ln theta and ln of likelihood over their density.

        Parameters
        ----------
        value : numpy.ndarray
            Components of the model, shape (m, n).
        misfit, u : numpy.ndarray
            f and levels between 0 and 1, shape (m,).
        """
        weight = 1.0 / (self._variance + misfit[:, None] ** 2)
        one = weight * self._one
        total = one @ self._one
        ln_like, centre = self._integrated(self._data - value, weight, one, total)
        low, high = self._bounds
        width = 0.5 / np.sqrt(total)
        z, _ = _truncated.draw(u, (low - centre) / width, (high - centre) / width)
        return centre + width * z, ln_like

    def _integrated(
        self, residual: np.ndarray, weight: np.ndarray, one: np.ndarray, total: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return ln of the likelihood's integral over the prior of ln theta, and its centre."""
        pull = np.sum(residual * one, axis=-1)
        chi2 = np.sum(residual * residual * weight, axis=-1) - pull * pull / total
        centre = 0.5 * pull / total
        low, high = self._bounds
        scale = 2.0 * np.sqrt(total)
        mass = _truncated.ln_mass((low - centre) * scale, (high - centre) * scale)
        ln_norm = 0.5 * np.sum(np.log(weight), axis=-1) - 0.5 * weight.shape[-1] * _LN_2PI
        ln_norm = ln_norm + 0.5 * _LN_2PI - np.log(scale) - math.log(high - low)
        return ln_norm + mass - 0.5 * chi2, centre
