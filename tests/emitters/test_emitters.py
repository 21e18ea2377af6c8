"""The contract that every registered emitter keeps, and the blackbody's integral."""

from __future__ import annotations

import math

import numpy as np
import pytest

from starkiln.constants import SIGMA_SB
from starkiln.emitters import EMITTERS, BlackbodyEmitter


@pytest.mark.parametrize("name", EMITTERS)
class TestContract:
    def test_name_parameters_and_bounds(self, name: str) -> None:
        emitter = EMITTERS[name]()
        assert emitter.name == name
        assert emitter.parameters[0] == "temperature"
        assert tuple(emitter.bounds) == emitter.parameters
        assert all(low < high for low, high in emitter.bounds.values())

    def test_equal_emitters_share_a_table(self, name: str) -> None:
        assert EMITTERS[name]() == EMITTERS[name]()
        assert hash(EMITTERS[name]()) == hash(EMITTERS[name]())

    def test_radiance_is_positive_with_the_stated_shape(self, name: str) -> None:
        emitter = EMITTERS[name]()
        ends = np.array([emitter.bounds[p] for p in emitter.parameters])
        wavelength_m = np.array([0.4e-6, 1e-6, 10e-6])
        radiance = emitter.radiance(wavelength_m, *ends)
        assert radiance.shape == (2, 3)
        assert np.all(radiance > 0.0)


@pytest.mark.parametrize("temperature", [2500.0, 5772.0, 60000.0])
def test_pi_b_integrates_to_the_stefan_boltzmann_law(temperature: float) -> None:
    # In ln lambda from 1e-3 to 1e4 times the peak the trapezoid is exact to rounding.
    wavelength_m = np.geomspace(2e-6 / temperature, 2e1 / temperature, 4000)
    radiance = BlackbodyEmitter().radiance(wavelength_m, np.array([temperature]))[0]
    total = math.pi * np.trapezoid(radiance * wavelength_m, np.log(wavelength_m))
    assert total == pytest.approx(SIGMA_SB.value * temperature**4, rel=1e-9)
