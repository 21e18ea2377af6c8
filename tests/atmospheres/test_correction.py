"""The response of the flux against finite differences of the transfer itself."""

import numpy as np
import pytest

from starkiln.atmospheres import hopf
from starkiln.atmospheres._correction import flux_response, temperature_step
from starkiln.atmospheres._kernels import intervals, moment_solution


@pytest.fixture(scope="module")
def slab():
    tau = np.logspace(-4.0, 2.0, 24)
    temperature = 6000.0 * (0.75 * (tau + hopf(tau))) ** 0.25
    strengths = np.array([0.1, 1.0, 30.0])
    _, steps = intervals(np.tile(strengths, (24, 1)), tau)
    thermal = np.tile([1.0, 0.7, 0.2], (24, 1))
    half = np.full(3, 0.5)
    factors = (np.full((24, 3), 1.0 / 3.0), half, half)
    weight = np.array([0.2, 0.5, 0.3])
    return tau, temperature, thermal, steps, factors, weight


def flux(temperature, thermal, steps, factors, weight):
    planck = np.repeat((temperature[:, None] / 6000.0) ** 4, 3, axis=1)
    k = factors[0] * moment_solution(planck, thermal, steps, factors)
    top = factors[1] * k[0] / factors[0][0]
    return np.concatenate([[top], np.diff(k, axis=0) / steps]) @ weight


def test_response_is_the_derivative_of_the_flux(slab):
    _, temperature, thermal, steps, factors, weight = slab
    slope = np.repeat((4.0 * temperature**3 / 6000.0**4)[:, None], 3, axis=1)
    response = flux_response(slope, thermal, steps, factors, weight)
    for depth in (0, 7, 15, 22, 23):
        shift = np.zeros_like(temperature)
        shift[depth] = 0.01
        high = flux(temperature + shift, thermal, steps, factors, weight)
        low = flux(temperature - shift, thermal, steps, factors, weight)
        np.testing.assert_allclose(
            response[:, depth], (high - low) / 0.02, rtol=1e-5, atol=1e-6 * np.abs(response).max()
        )


def test_one_step_makes_the_flux_constant_where_it_is_linear(slab):
    _, temperature, thermal, steps, factors, weight = slab
    slope = np.repeat((4.0 * temperature**3 / 6000.0**4)[:, None], 3, axis=1)
    response = flux_response(slope, thermal, steps, factors, weight)
    off = np.linspace(0.9, 1.1, 24) * 0.25
    step = temperature_step(off, response, 0.25)
    np.testing.assert_allclose(off + response @ step, 0.25, rtol=1e-6)
