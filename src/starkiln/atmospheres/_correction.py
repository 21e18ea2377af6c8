"""Temperature correction: the flux's response at every depth to the temperature at every depth."""

from __future__ import annotations

import numpy as np

from starkiln.atmospheres._kernels import couplings, solve_tridiagonal

__all__ = ["flux_response", "temperature_step"]


def flux_response(
    planck_slope: np.ndarray,
    thermal: np.ndarray,
    steps: np.ndarray,
    factors: tuple[np.ndarray, np.ndarray, np.ndarray],
    weight: np.ndarray,
) -> np.ndarray:
    """Return d(total Eddington flux)/d(temperature).

    Parameters
    ----------
    planck_slope, thermal, steps : numpy.ndarray
        dB/dT, true absorption over total opacity, (n_depth, n_col); optical steps.
        A sample of the columns will do: the response need not be exact.
    factors : tuple of numpy.ndarray
        Eddington factors, surface and bottom factors of these columns.
    weight : numpy.ndarray
        Integration weights of the columns, (n_col,).

    Returns
    -------
    numpy.ndarray
        (n_depth, n_depth): row 0 the first depth, row i between depths i-1 and i;
        one column per depth at which the temperature changes. Opacities and
        Eddington factors are held (Rybicki 1971, JQSRT 11, 589).
    """
    factor, surface, bottom = factors
    n = thermal.shape[0]
    below, above = couplings(steps)
    loss = thermal / factor
    loss[0] += 2.0 * surface / (factor[0] * steps[0])
    loss[-1] += 2.0 * bottom / (factor[-1] * steps[-1])
    right = np.zeros((n, n, thermal.shape[1]))
    right[np.arange(n), np.arange(n)] = thermal * planck_slope
    slope = planck_slope / (3.0 * steps[-1])
    right[-1, -1] += (2.0 / steps[-1]) * (0.5 * planck_slope[-1] + slope[-1])
    right[-1, -2] -= (2.0 / steps[-1]) * slope[-2]
    k = solve_tridiagonal(below, above, loss, right)
    response = np.empty((n, n))
    response[0] = k[0] @ (weight * surface / factor[0])
    share = weight / steps
    for i in range(1, n):
        response[i] = k[i] @ share[i - 1] - k[i - 1] @ share[i - 1]
    return response


def temperature_step(flux: np.ndarray, response: np.ndarray, target: float) -> np.ndarray:
    """Return the change of temperature that makes the flux constant, (n_depth,) kelvins.

    Parameters
    ----------
    flux : numpy.ndarray
        Total Eddington flux at the first depth, then between depths, (n_depth,).
    response : numpy.ndarray
        As `flux_response` returns it.
    target : float
        Eddington flux sigma T^4/(4 pi).

    Notes
    -----
    The rows are the change of flux from each interval to the next, scaled: above
    the photosphere the flux hardly knows the temperature, its divergence does.
    """
    rows = np.vstack([response[:1], np.diff(response, axis=0)])
    right = np.concatenate([[target - flux[0]], -np.diff(flux)])
    scale = np.abs(rows).max(axis=1)
    return np.linalg.solve(rows / scale[:, None], right / scale)
