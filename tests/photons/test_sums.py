"""The sums of `starkiln photons`, and how errors of inputs spread."""

from functools import partial

import numpy as np
import pytest

from starkiln.errors import InputError
from starkiln.photons import INPUT, Answer, PhotonGas, photon_sums, spread

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


def by_name(answers):
    return {a.quantity: a for a in answers}


def test_every_answer_has_formula_and_reference():
    rows = photon_sums(5772.0, at=0.5, lower=0.4, upper=0.7, volume=2.0, radius=1.0, distance=10.0)
    assert len({r.quantity for r in rows}) == len(rows)
    for row in rows:
        assert row.formula
        assert (row.reference == "") == (row.formula == INPUT)
        assert np.isfinite(row.value)


def test_sun_at_one_au():
    # Nominal irradiance 1361 W m-2 (IAU 2015 B3); R, T and au make 1361.16.
    au_in_pc = np.pi / 648000.0
    rows = by_name(photon_sums(5772.0, radius=1.0, distance=au_in_pc))
    assert rows["irradiance"].value == approx(1361.17, abs=0.01)
    assert rows["exitance"].value == approx(6.2938e7, rel=1e-4)
    assert rows["dilution_factor"].value == approx(5.4068e-6, rel=1e-4)


def test_furnace():
    # Handbook figures from memory: 1273.15 K emits 148.97 kW m-2 and peaks at 2.276 um.
    rows = by_name(photon_sums(1273.15, emissivity=0.5))
    assert rows["exitance"].value == approx(0.5 * 148.98e3, rel=1e-4)
    assert rows["peak_wavelength"].value == approx(2.2761, abs=1e-4)


def test_spectral_values_in_the_units_they_state():
    # By hand at 0.5 um and 5772 K: x = 4.98537.
    rows = by_name(photon_sums(5772.0, at=0.5))
    x = 1.438776877e-2 / (0.5e-6 * 5772.0)
    radiance = 1.191042972e-16 / 0.5e-6**5 / np.expm1(x)
    assert rows["spectral_radiance"].value == approx(radiance * 1e-6, rel=1e-8)
    per_hertz = radiance * 0.5e-6**2 / 299792458.0
    assert rows["spectral_radiance_frequency"].value == approx(per_hertz, rel=1e-8)
    photon = 6.62607015e-34 * 299792458.0 / 0.5e-6
    assert rows["spectral_photon_radiance"].value == approx(radiance * 1e-6 / photon, rel=1e-8)
    assert rows["wien_error"].value == approx(-np.exp(-x), rel=1e-8)
    assert rows["rayleigh_jeans_error"].value == approx(np.expm1(x) / x - 1, rel=1e-8)


def test_values_agree_with_the_functions():
    rows = by_name(photon_sums(5772.0, lower=0.4, upper=0.7, volume=2.0))
    gas = PhotonGas(5772.0, 2.0)
    assert rows["exitance"].value == approx(np.pi * rows["radiance"].value, rel=1e-14)
    assert rows["energy"].value == gas.energy.value
    assert rows["entropy"].value == gas.entropy.value
    assert rows["heat_capacity_density"].value == approx(gas.heat_capacity.value / 2)
    assert rows["free_energy"].value == gas.free_energy.value
    assert rows["enthalpy_density"].value == approx(gas.enthalpy.value / 2)
    assert rows["band_exitance"].value == approx(
        rows["band_fraction"].value * rows["exitance"].value, rel=1e-14
    )
    assert rows["band_photon_exitance"].value == approx(
        rows["band_photon_fraction"].value * rows["photon_exitance"].value, rel=1e-14
    )
    assert rows["mean_photon_energy"].value == approx(1.3435, abs=1e-4)


def test_open_band_and_draws():
    t = np.array([3000.0, 6000.0])
    rows = by_name(photon_sums(t, lower=1.0))
    below = by_name(photon_sums(t, upper=1.0))
    assert rows["band_fraction"].value.shape == (2,)
    np.testing.assert_allclose(
        rows["band_fraction"].value + below["band_fraction"].value, 1.0, rtol=1e-14
    )


def test_zero_temperature_gives_limits():
    rows = by_name(photon_sums(0.0, volume=1.0))
    assert rows["exitance"].value == 0.0
    assert rows["peak_wavelength"].value == np.inf
    assert rows["number"].value == 0.0
    assert np.isnan(rows["chromaticity_x"].value)


def test_spread_of_one_input_is_exact():
    rows, low, high = spread(photon_sums, {"temperature": 5772.0}, {"temperature": 100.0})
    index = [r.quantity for r in rows].index("exitance")
    ends = [photon_sums(t)[index].value for t in (5672.0, 5872.0)]
    assert low[index] == approx(ends[0], rel=1e-14)
    assert high[index] == approx(ends[1], rel=1e-14)
    falling = [r.quantity for r in rows].index("peak_wavelength")
    assert low[falling] < rows[falling].value < high[falling]


def test_spread_of_two_inputs_agrees_with_draws():
    # 5e4 draws: the ends are known to 0.6 per cent of the interval.
    rng = np.random.default_rng(5)
    inputs = {"temperature": 9000.0, "radius": 2.0, "distance": 12.0}
    errors = {"temperature": 90.0, "radius": 0.03}
    rows, low, high = spread(photon_sums, inputs, errors)
    index = [r.quantity for r in rows].index("irradiance")
    drawn = photon_sums(
        rng.normal(9000.0, 90.0, 50_000), radius=rng.normal(2.0, 0.03, 50_000), distance=12.0
    )[index].value
    ends = np.percentile(drawn, [15.87, 84.13])
    width = ends[1] - ends[0]
    assert low[index] == approx(ends[0], abs=0.02 * width)
    assert high[index] == approx(ends[1], abs=0.02 * width)


def test_spread_leaves_what_it_does_not_touch():
    def sums(a, b):
        return [
            Answer("a", a, "", "x", "y"),
            Answer("b", b, "", "x", "y"),
            Answer("inf", np.inf, "", "x", "y"),
        ]

    _, low, high = spread(sums, {"a": 1.0, "b": 2.0}, {"a": 0.5})
    assert (low[0], high[0]) == (0.5, 1.5)
    assert np.isnan(low[1])
    assert np.isnan(high[2])


def test_bad_input():
    with pytest.raises(InputError, match="radius and distance together"):
        photon_sums(5772.0, radius=1.0)
    with pytest.raises(InputError, match="wavelength = 0 m"):
        photon_sums(5772.0, at=0.0)
    with pytest.raises(InputError, match="exchange the two"):
        photon_sums(5772.0, lower=0.7, upper=0.4)
    with pytest.raises(InputError, match="error of temperature = -1"):
        spread(photon_sums, {"temperature": 5772.0}, {"temperature": -1.0})
