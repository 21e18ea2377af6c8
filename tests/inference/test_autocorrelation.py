"""Autocorrelation time of an autoregressive process, known in closed form, and emcee's."""

from __future__ import annotations

import numpy as np
import pytest
from emcee.autocorr import integrated_time

from starkiln.inference._autocorrelation import autocorrelation_time


def autoregressive(rho, steps, walkers, seed=0):
    rng = np.random.default_rng(seed)
    noise = rng.standard_normal((steps, walkers, len(rho)))
    chain = np.empty_like(noise)
    chain[0] = noise[0] / np.sqrt(1.0 - np.square(rho))
    for i in range(1, steps):
        chain[i] = rho * chain[i - 1] + noise[i]
    return chain


def test_autoregressive_process_has_its_closed_form():
    # tau = (1 + rho) / (1 - rho): Sokal 1997, eq. 2.20 for a single exponential.
    rho = np.array([0.0, 0.5, 0.9])
    tau = autocorrelation_time(autoregressive(rho, 20_000, 32))
    assert tau == pytest.approx((1 + rho) / (1 - rho), rel=0.03)


def test_agrees_with_emcee():
    chain = autoregressive(np.array([0.3, 0.8]), 5000, 16)
    assert autocorrelation_time(chain) == pytest.approx(integrated_time(chain), rel=0.03)


def test_a_walker_that_never_moved_lengthens_it_and_none_moving_makes_it_infinite():
    chain = autoregressive(np.array([0.5]), 2000, 16)
    stuck = chain.copy()
    stuck[:, 0] = 4.0
    assert autocorrelation_time(stuck)[0] > 2.0 * autocorrelation_time(chain)[0]
    assert autocorrelation_time(np.ones((100, 4, 1)))[0] == np.inf
