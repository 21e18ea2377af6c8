"""Radiative transfer in a plane-parallel slab, on plain arrays (depth, column).

A column is one wavelength at one haze node; every array is handled for all
columns at once, and depth is the first axis, from the surface down.
"""

from __future__ import annotations

import numpy as np

__all__ = ["Field", "intervals", "radiation_field"]


class Field:
    """Moments of the radiation, per column; intensities in the unit of the source.

    Attributes
    ----------
    j, k : numpy.ndarray
        Mean intensity and K = f J at the depths, (n_depth, n_col).
    h : numpy.ndarray
        Eddington flux: at the first depth, then between depths, (n_depth, n_col).
    h_surface : numpy.ndarray
        Eddington flux that leaves the star, (n_col,).
    factor : numpy.ndarray
        Eddington factors K/J, (n_depth, n_col).
    surface_factor, bottom_factor : numpy.ndarray
        H/J at the first depth, sum of w mu j / J at the last, (n_col,).
    """

    def __init__(self, j: np.ndarray, factor: np.ndarray) -> None:
        self.j, self.factor = j, factor
        self.k = factor * j
        self.h = np.empty_like(j)
        self.h_surface = np.empty(j.shape[1])
        self.surface_factor = np.empty(j.shape[1])
        self.bottom_factor = np.empty(j.shape[1])


def angles(count: int) -> tuple[np.ndarray, np.ndarray]:
    """Return cosines on (0, 1) and their Gauss-Legendre weights, which sum to 1."""
    x, weight = np.polynomial.legendre.leggauss(count)
    return 0.5 * (x + 1.0), 0.5 * weight


def intervals(ratio: np.ndarray, tau_reference: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return optical depth at the first depth and its steps between depths.

    Parameters
    ----------
    ratio : numpy.ndarray
        Opacity over the opacity of the reference scale, (n_depth, n_col).
    tau_reference : numpy.ndarray
        Reference optical depth, (n_depth,), log-spaced.

    Returns
    -------
    first, steps : numpy.ndarray
        (n_col,) and (n_depth - 1, n_col). Opacity times depth is taken as a power
        law between depths, whose mean is (2 geometric + arithmetic)/3 to a part
        in 1000 for a ratio of 3.
    """
    y = ratio * tau_reference[:, None]
    mean = (2.0 * np.sqrt(y[1:] * y[:-1]) + 0.5 * (y[1:] + y[:-1])) / 3.0
    return y[0], mean * np.diff(np.log(tau_reference))[:, None]


def solve_tridiagonal(
    below: np.ndarray, above: np.ndarray, loss: np.ndarray, right: np.ndarray
) -> np.ndarray:
    """Solve -a_i y_(i-1) + (a_i + c_i + h_i) y_i - c_i y_(i+1) = r_i down the first axis.

    Rybicki & Hummer 1991, A&A 245, 171, appendix A: no difference of large
    numbers, however fine the steps. `below[0]` and `above[-1]` are 0.
    """
    n = loss.shape[0]
    f = np.empty_like(loss)
    z = np.empty_like(right)
    f[0] = loss[0] / above[0]
    z[0] = right[0] / (above[0] + loss[0])
    for i in range(1, n - 1):
        gain = below[i] * (f[i - 1] / (1.0 + f[i - 1])) + loss[i]
        z[i] = (right[i] + below[i] * z[i - 1]) / (above[i] + gain)
        f[i] = gain / above[i]
    gain = below[-1] * (f[-2] / (1.0 + f[-2])) + loss[-1]
    z[-1] = (right[-1] + below[-1] * z[-2]) / gain
    for i in range(n - 2, -1, -1):
        z[i] += z[i + 1] / (1.0 + f[i])
    return z


def couplings(steps: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the neighbours' coefficients of the second derivative at every depth.

    The boundary rows hold 2/step^2, as Auer 1967 (ApJ 150, L53) has them.
    """
    n = steps.shape[0] + 1
    below = np.zeros((n, *steps.shape[1:]))
    above = np.zeros_like(below)
    centre = 0.5 * (steps[1:] + steps[:-1])
    below[1:-1] = 1.0 / (steps[:-1] * centre)
    above[1:-1] = 1.0 / (steps[1:] * centre)
    above[0] = 2.0 / steps[0] ** 2
    below[-1] = 2.0 / steps[-1] ** 2
    return below, above


def radiation_field(
    planck: np.ndarray,
    thermal: np.ndarray,
    first: np.ndarray,
    steps: np.ndarray,
    old_factors: tuple[np.ndarray, np.ndarray, np.ndarray] | None,
    n_angle: int = 3,
) -> Field:
    """Solve the transfer with coherent isotropic scattering.

    Parameters
    ----------
    planck, thermal : numpy.ndarray
        Planck function and true absorption over total opacity, (n_depth, n_col).
    first, steps : numpy.ndarray
        As `intervals` returns them.
    old_factors : tuple of numpy.ndarray or None
        Eddington factors, surface and bottom factors of an earlier, similar
        field; None to start from Eddington's own 1/3, 1/2, 1/2.
    n_angle : int
        Gauss angles.

    Returns
    -------
    Field
        From the source function of the moment equations with the old factors
        (Auer & Mihalas 1970, MNRAS 149, 65); new factors from one formal
        solution (Feautrier 1964).
    """
    if old_factors is None:
        half = np.full(planck.shape[1], 0.5)
        old_factors = (np.full_like(planck, 1.0 / 3.0), half, half)
    mean = moment_solution(planck, thermal, steps, old_factors)
    source = thermal * planck + (1.0 - thermal) * mean
    return _formal_solution(source, planck, first, steps, n_angle)


def moment_solution(
    planck: np.ndarray,
    thermal: np.ndarray,
    steps: np.ndarray,
    factors: tuple[np.ndarray, np.ndarray, np.ndarray],
) -> np.ndarray:
    """Return J from d2(f J)/dtau2 = thermal (J - B)."""
    factor, surface, bottom = factors
    below, above = couplings(steps)
    loss = thermal / factor
    right = thermal * planck
    loss[0] += 2.0 * surface / (factor[0] * steps[0])
    loss[-1] += 2.0 * bottom / (factor[-1] * steps[-1])
    gradient = (planck[-1] - planck[-2]) / steps[-1]
    right[-1] += (2.0 / steps[-1]) * (0.5 * planck[-1] + gradient / 3.0)
    return solve_tridiagonal(below, above, loss, right) / factor


def _formal_solution(
    source: np.ndarray, planck: np.ndarray, first: np.ndarray, steps: np.ndarray, n_angle: int
) -> Field:
    below, above = couplings(steps)
    gradient = (planck[-1] - planck[-2]) / steps[-1]
    j = np.zeros_like(source)
    k = np.zeros_like(source)
    flux, surface, bottom = np.zeros((3, source.shape[1]))
    for mu, weight in zip(*angles(n_angle), strict=True):
        incoming = -source[0] * np.expm1(-first / mu)
        mean = feautrier((below * mu**2, above * mu**2), source, incoming, gradient, steps, mu)
        j += weight * mean
        k += (weight * mu**2) * mean
        surface += weight * mu * (mean[0] - incoming)
        bottom += weight * mu * mean[-1]
        # What leaves: the outward ray at the first depth, through the skin above it.
        through = np.exp(-first / mu)
        outward = (2.0 * mean[0] - incoming) * through + incoming
        flux += 0.5 * weight * mu * outward
    field = Field(j, k / j)
    field.k = k
    field.h[0] = surface
    field.h[1:] = np.diff(k, axis=0) / steps
    field.h_surface = flux
    field.surface_factor = surface / j[0]
    field.bottom_factor = bottom / j[-1]
    return field


def feautrier(
    coupling: tuple[np.ndarray, np.ndarray],
    source: np.ndarray,
    incoming: np.ndarray,
    gradient: np.ndarray,
    steps: np.ndarray,
    mu: float,
) -> np.ndarray:
    """Return the mean of the two opposite rays along one angle, (n_depth, n_col).

    Second-order boundaries: `incoming` radiation at the top, diffusion at the
    bottom with the given `gradient` of the source.
    """
    loss = np.ones_like(source)
    right = source.copy()
    loss[0] += 2.0 * mu / steps[0]
    right[0] += (2.0 * mu / steps[0]) * incoming
    loss[-1] += 2.0 * mu / steps[-1]
    right[-1] += (2.0 * mu / steps[-1]) * (source[-1] + mu * gradient)
    return solve_tridiagonal(coupling[0], coupling[1], loss, right)
