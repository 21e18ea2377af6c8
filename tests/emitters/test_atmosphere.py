"""The tabulated atmosphere: splines, table against fresh models, bounds, and the public stars."""

from pathlib import Path

import numpy as np
import pytest
from scipy.interpolate import make_interp_spline

from starkiln.atmospheres import model_atmosphere
from starkiln.dust import Dust
from starkiln.emitters import AtmosphereEmitter
from starkiln.emitters._node_grid import NodeGrid, _basis, _inverse, lowest_logg
from starkiln.errors import InputError
from starkiln.forward import band_flux_direct, band_fluxes
from starkiln.passbands import load_band
from starkiln.store import data_path

BANDS = ("Johnson B", "Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W3")


def test_spline_against_scipy():
    rng = np.random.default_rng(3)
    x = np.sort(rng.uniform(0.0, 1.0, 9))
    y = rng.normal(size=9)
    at = np.linspace(x[0], x[-1], 50)
    first, values = _basis(x, at)
    coefficients = _inverse(x) @ y
    got = [v @ coefficients[i : i + 4] for i, v in zip(first, values, strict=True)]
    np.testing.assert_allclose(got, make_interp_spline(x, y, k=3)(at), atol=1e-10)


def test_grid_reproduces_its_nodes_and_a_cubic_between_them():
    grid = NodeGrid(
        np.geomspace(4200.0, 9000.0, 6), np.linspace(0, 1, 5), np.linspace(-2.5, 0.5, 4)
    )
    t, g, f = grid.nodes.T
    share = (g - lowest_logg(t)) / (5.0 - lowest_logg(t))

    def cubic(t, s, f):
        x = np.log(t / 6000.0)
        return (1 + x**3) * (2 - s**2 + s**3) * (1 + 0.1 * f**3)

    coefficients = grid.prefilter(cubic(t, share, f))
    rng = np.random.default_rng(4)
    t = np.append(t, rng.uniform(4200.0, 9000.0, 30))
    s = np.append(share, rng.uniform(0, 1, 30))
    f = np.append(f, rng.uniform(-2.5, 0.5, 30))
    low = lowest_logg(t)
    index, weight = grid.weights(t, np.clip(low + s * (5.0 - low), low, 5.0), f)
    np.testing.assert_allclose(weight.sum(axis=1), 1.0, rtol=1e-12)
    np.testing.assert_allclose(
        (weight * coefficients[index]).sum(axis=1), cubic(t, s, f), rtol=1e-9
    )


@pytest.mark.parametrize(
    ("temperature", "logg", "feh"), [(4850.0, 2.6, -1.1), (5772.0, 4.44, 0.0), (13200.0, 3.9, 0.2)]
)
def test_table_against_a_fresh_model(temperature, logg, feh):
    model = model_atmosphere(temperature, logg, feh=feh)
    emitter = AtmosphereEmitter()
    point = [np.array([v]) for v in (temperature, logg, feh)]
    for name in BANDS:
        band = load_band(name)
        x, y = np.log(model.wavelength_m), np.log(model.surface_flux / np.pi)
        want = np.exp(np.interp(np.log(band.wavelength_m), x, y)) @ band.weight
        got = emitter.radiance(band.wavelength_m, *point)[0] @ band.weight
        # The bound on interpolation is 0.005 mag.
        assert 2.5 * abs(np.log10(got / want)) < 0.005, name


@pytest.mark.parametrize("temperature", [4200.0, 5772.0, 15000.0, 40000.0])
def test_radiance_holds_sigma_t4(temperature):
    # Stefan-Boltzmann: the angular diameter is that of the effective temperature. Interpolated
    # across the Lyman lines the integral errs by up to 0.7 per cent.
    wavelength = np.geomspace(0.0181e-6, 199e-6, 6000)
    radiance = AtmosphereEmitter().radiance(
        wavelength, np.array([temperature]), np.array([4.4]), np.array([-0.3])
    )[0]
    total = np.pi * np.trapezoid(radiance * wavelength, np.log(wavelength))
    assert total == pytest.approx(5.670374e-8 * temperature**4, rel=1e-2)


def test_a_points_value_does_not_depend_on_its_company():
    emitter, wavelength = AtmosphereEmitter(), np.geomspace(0.3e-6, 3e-6, 40)
    t, g, f = np.array([4700.0, 8000.0]), np.array([2.0, 4.0]), np.array([-1.0, 0.1])
    both = emitter.radiance(wavelength, t, g, f)
    np.testing.assert_array_equal(both[1:], emitter.radiance(wavelength, t[1:], g[1:], f[1:]))


def test_keeps_the_contract_of_emitters():
    emitter = AtmosphereEmitter()
    assert emitter == AtmosphereEmitter()
    assert hash(emitter) == hash(AtmosphereEmitter())
    assert tuple(emitter.bounds) == emitter.parameters
    assert emitter.bounds["temperature"] == (4200.0, 40000.0)
    ends = np.array([emitter.bounds[p] for p in emitter.parameters])
    assert np.all(emitter.radiance(np.array([0.4e-6, 1e-6, 10e-6]), *ends) > 0.0)


def test_given_values_are_no_longer_parameters():
    emitter = AtmosphereEmitter(logg=4.0, feh=-1.0)
    assert emitter.parameters == ("temperature",)
    t, wavelength = np.array([5000.0, 9000.0]), np.geomspace(0.4e-6, 2e-6, 5)
    free = AtmosphereEmitter().radiance(wavelength, t, np.full(2, 4.0), np.full(2, -1.0))
    np.testing.assert_array_equal(emitter.radiance(wavelength, t), free)
    assert AtmosphereEmitter(feh=-1.0).parameters == ("temperature", "logg")
    assert emitter != AtmosphereEmitter(logg=4.0)
    with pytest.raises(InputError, match="logg = 9"):
        AtmosphereEmitter(logg=9.0)


def test_given_gravity_bounds_the_temperature():
    emitter = AtmosphereEmitter(logg=3.0, feh=0.0)
    low, high = emitter.bounds["temperature"]
    assert low == 4200.0
    assert lowest_logg(np.array(high)) == pytest.approx(3.0)
    assert np.all(emitter.radiance(np.array([1e-6]), np.array([low, high])) > 0.0)


def test_band_fluxes_behind_dust_are_tabulated():
    # forward's table against its own plain integration, for one star's log g and [Fe/H].
    emitter = AtmosphereEmitter(logg=4.4, feh=-0.2)
    table = band_fluxes(emitter, ("Gaia BP", "2MASS Ks"), Dust())
    x, av = (
        np.log(np.array([[4300.0], [5772.0], [9000.0], [20000.0]])),
        np.array([0, 0.5, 2.0, 1.0]),
    )
    for k, band in enumerate(("Gaia BP", "2MASS Ks")):
        want = band_flux_direct(emitter, band, Dust(), x, av)
        np.testing.assert_allclose(table.ln_flux(x, av)[:, k], want, atol=2e-3)


def test_contains_says_what_radiance_accepts():
    emitter = AtmosphereEmitter()
    t = np.array([4100.0, 6000.0, 30000.0, 30000.0])
    g = np.array([4.0, 4.0, 2.0, 4.0])
    inside = emitter.contains(t, g, np.zeros(4))
    assert inside.tolist() == [False, True, False, True]


@pytest.mark.parametrize(
    ("point", "words"),
    [
        ((4000.0, 4.5, 0.0), "molecules"),
        ((50000.0, 4.5, 0.0), "winds"),
        ((20000.0, 2.0, 0.0), "below the model atmospheres"),
        ((6000.0, 5.5, 0.0), "logg"),
        ((6000.0, 4.0, 1.0), "feh"),
        ((float("nan"), 4.0, 0.0), "temperature"),
    ],
)
def test_out_of_range_is_refused(point, words):
    with pytest.raises(InputError, match=words):
        AtmosphereEmitter().radiance(np.array([1e-6]), *[np.array([v]) for v in point])


def test_notes_near_the_edges():
    emitter = AtmosphereEmitter()
    assert emitter.note(5772.0, 4.44, 0.0) == ""
    assert "molecules" in emitter.note(4300.0, 4.5, 0.0)
    assert "winds" in emitter.note(35000.0, 4.2, 0.0)
    assert "lowest" in emitter.note(9000.0, 1.5, 0.0)
    assert "[Fe/H]" in emitter.note(6000.0, 4.0, 0.5)
    assert "WISE W2" in emitter.note(5000.0, 4.5, 0.0, ("Gaia G", "WISE W2"))
    assert emitter.note(5000.0, 4.5, 0.0, ("Gaia G",)) == ""


def test_given_values_are_no_parameters():
    emitter = AtmosphereEmitter(feh=-0.3)
    assert emitter.parameters == ("temperature", "logg")
    assert dict(emitter.given) == {"feh": -0.3}
    _, _, feh = emitter.complete(np.array([5000.0, 6000.0]), np.array([4.0, 4.5]))
    np.testing.assert_array_equal(feh, [-0.3, -0.3])
    # What rounding to single precision does to a value at the edge is no refusal.
    emitter.complete(np.array([4200.0 * (1.0 - 6e-8)]), np.array([5.0 + 2e-7]))
    with pytest.raises(InputError, match="outside the model atmospheres"):
        emitter.complete(np.array([4199.0]), np.array([4.0]))


def test_file_is_small_and_says_where_it_comes_from():
    assert Path(data_path("emitters", "atmosphere.npz")).stat().st_size < 6e6
    provenance = AtmosphereEmitter().provenance
    assert "build_atmosphere_table" in provenance["reference"]
    for band, (rms, worst) in provenance["interpolation_error_mag"].items():
        if not band.startswith("Johnson U"):
            assert rms < 0.005, band
            assert worst < 0.02, band
