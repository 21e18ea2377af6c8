"""Autocorrelation time of an ensemble's chain, all walkers and parameters at once."""

from __future__ import annotations

import numpy as np

#: Sokal's window: the sum ends at the first lag of at least this many times tau.
_WINDOW = 5.0


def autocorrelation_time(chain: np.ndarray) -> np.ndarray:
    """Return the integrated autocorrelation time of each parameter, in steps.

    The walkers' autocovariances are averaged before they are divided by their
    variance, so that a walker that never moved counts for what it is; then
    tau = 1 + 2 sum rho(lag), summed to the first lag that exceeds five tau (Sokal
    1997, in Functional Integration, p. 131; Goodman & Weare 2010, Comm. App. Math.
    Comp. Sci. 5, 65).

    Parameters
    ----------
    chain : numpy.ndarray
        Shape (steps, walkers, parameters).

    Returns
    -------
    numpy.ndarray
        Shape (parameters,), at least 1; infinite where nothing moved.
    """
    from scipy.fft import irfft, next_fast_len, rfft

    steps = len(chain)
    centred = chain - chain.mean(axis=(0, 1))
    size = next_fast_len(2 * steps, real=True)
    power = np.abs(rfft(centred, size, axis=0)) ** 2
    covariance = irfft(power.sum(axis=1), size, axis=0)[:steps]
    tau = np.full(chain.shape[2], np.inf)
    moved = covariance[0] > 0.0
    rho = covariance[:, moved] / covariance[0, moved]
    sums = 2.0 * np.cumsum(rho, axis=0) - 1.0
    beyond = np.arange(steps)[:, None] >= _WINDOW * sums
    ends = np.where(beyond.any(axis=0), beyond.argmax(axis=0), steps - 1)
    tau[moved] = np.maximum(sums[ends, np.arange(sums.shape[1])], 1.0)
    return tau
