"""The tabulated band fluxes against plain integration."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from starkiln.dust import Dust
from starkiln.emitters import BlackbodyEmitter
from starkiln.errors import DustError, InputError
from starkiln.forward import band_flux_direct, band_fluxes, extrapolated_bands
from starkiln.passbands import band_names, load_band
from starkiln.photons import planck_wavelength

EMITTER = BlackbodyEmitter()


def points(n: int, seed: int = 3) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    x = rng.uniform(np.log(2500.0), np.log(60000.0), (n, 1))
    av = rng.uniform(0.0, 10.0, n)
    x[:4, 0] = np.log([2500.0, 60000.0, 2500.0, 60000.0])
    av[:4] = [0.0, 0.0, 10.0, 10.0]
    return x, av


@pytest.mark.parametrize("law", ["G23", "F99", "G03_SMCBar"])
def test_table_agrees_with_integration(law: str) -> None:
    dust, (x, av) = Dust(law=law), points(100)
    value = band_fluxes(EMITTER, band_names(), dust).ln_flux(x, av)
    direct = [band_flux_direct(EMITTER, band, dust, x, av) for band in band_names()]
    np.testing.assert_allclose(value, np.stack(direct, axis=1), rtol=0.0, atol=1e-6)


@pytest.mark.parametrize("law", ["G23", "F99"])
def test_free_rv(law: str) -> None:
    bands = ("Gaia BP", "GALEX NUV", "2MASS Ks", "WISE W3")
    low, high = Dust(law=law).rv_range
    table = band_fluxes(EMITTER, bands, Dust(law=law), free_rv=True)
    assert table.rv_range == (low, high)
    x, av = points(60)
    for rv in (low, 3.1, 4.321, high):
        value, slope = table.ln_flux_and_slope(x, av, np.full(60, rv))
        fixed = band_fluxes(EMITTER, bands, Dust(law=law, rv=rv))
        direct = [band_flux_direct(EMITTER, b, Dust(law=law, rv=rv), x, av) for b in bands]
        np.testing.assert_allclose(value, np.stack(direct, axis=1), rtol=0.0, atol=1e-5)
        np.testing.assert_allclose(fixed.ln_flux(x, av), value, rtol=0.0, atol=2e-6)
        np.testing.assert_allclose(slope, fixed.ln_flux_and_slope(x, av)[1], rtol=0.0, atol=1e-4)
    alone = table.ln_flux(x[7:8], av[7:8], np.array([high]))
    np.testing.assert_array_equal(alone[0], value[7])


def test_rv_is_wanted_or_not() -> None:
    x, av = points(5)
    with pytest.raises(InputError, match="this table has a fixed R_V"):
        band_fluxes(EMITTER, ("Gaia G",), Dust()).ln_flux(x, av, av)
    free = band_fluxes(EMITTER, ("Gaia G",), Dust(), free_rv=True)
    with pytest.raises(InputError, match="this table has a free R_V"):
        free.ln_flux(x, av)
    with pytest.raises(InputError, match="R_V = 9 is outside the table"):
        free.ln_flux(x, av, np.full(5, 9.0))
    with pytest.raises(DustError, match="G03_SMCBar is a single average"):
        band_fluxes(EMITTER, ("Gaia G",), Dust(law="G03_SMCBar"), free_rv=True)


def test_a_band_of_the_users_own(tmp_path: Path) -> None:
    text = "# response_kind: photon\n# magnitude_system: AB\n# wavelength_unit: um\n"
    (tmp_path / "mine.csv").write_text(text + "wavelength,response\n0.5,0\n0.55,1\n0.6,0\n")
    x, av = points(50)
    table = band_fluxes(EMITTER, (str(tmp_path / "mine.csv"), load_band("Gaia G")), Dust())
    assert table.bands == (str(tmp_path / "mine.csv"), "Gaia G")
    direct = band_flux_direct(EMITTER, str(tmp_path / "mine.csv"), Dust(), x, av)
    np.testing.assert_allclose(table.ln_flux(x, av)[:, 0], direct, rtol=0.0, atol=1e-6)


def test_direct_integration_by_an_independent_rule() -> None:
    # speclite's own samples, refined 400 times, by the trapezoid; dust by dust_extinction.
    from astropy import units as u
    from dust_extinction.parameter_averages import F99
    from speclite.filters import load_filter

    for name, curve in (("SDSS g", "sdss2010-g"), ("2MASS Ks", "twomass-Ks")):
        published = load_filter(curve)
        wave = np.interp(
            np.linspace(0, 1, 400 * (published.wavelength.size - 1) + 1),
            np.linspace(0, 1, published.wavelength.size),
            published.wavelength,
        )
        response = np.interp(wave, published.wavelength, published.response)
        law = F99(Rv=3.1)
        ratio = law(wave * u.AA) / law(0.55 * u.um)
        flux = planck_wavelength(wave * 1e-10, 6500.0) * 10.0 ** (-0.4 * 2.5 * ratio)
        mean = np.trapezoid(flux * response * wave, wave) / np.trapezoid(response * wave, wave)
        x, av = np.log([[6500.0]]), np.array([2.5])
        assert band_flux_direct(EMITTER, name, Dust(law="F99"), x, av)[0] == pytest.approx(
            np.log(mean), abs=1e-6
        )


def test_slope_is_the_derivative() -> None:
    table = band_fluxes(EMITTER, ("Gaia G", "SDSS u", "WISE W3"), Dust())
    x, av = points(200)
    av = np.clip(av, 0.01, 9.99)
    value, slope = table.ln_flux_and_slope(x, av)
    np.testing.assert_array_equal(value, table.ln_flux(x, av))
    step = 1e-4
    difference = (table.ln_flux(x, av + step) - table.ln_flux(x, av - step)) / (2 * step)
    np.testing.assert_allclose(slope, difference, rtol=0.0, atol=1e-7)
    # Without dust the slope is -0.4 ln 10 times a mean of A_lambda / A.
    bare = table.ln_flux_and_slope(x, np.zeros(200))[1] / (-0.4 * np.log(10.0))
    for k, name in enumerate(table.bands):
        ratio = Dust().curve(load_band(name).wavelength_m)
        assert np.all((bare[:, k] > ratio.min()) & (bare[:, k] < ratio.max()))


def test_company_does_not_change_a_point() -> None:
    table = band_fluxes(EMITTER, ("Gaia G", "Gaia BP", "2MASS J", "WISE W1"), Dust())
    x, av = points(5000)
    whole = table.ln_flux(x, av)
    rng = np.random.default_rng(8)
    for n in (1, 2, 63, 64, 65, 700):
        chosen = rng.integers(0, 5000, n)
        np.testing.assert_array_equal(table.ln_flux(x[chosen], av[chosen]), whole[chosen])


def test_bands_do_not_depend_on_each_other() -> None:
    x, av = points(100)
    both = band_fluxes(EMITTER, ("SDSS u", "2MASS J"), Dust()).ln_flux(x, av)
    alone = band_fluxes(EMITTER, ("2MASS J",), Dust()).ln_flux(x, av)
    np.testing.assert_allclose(both[:, 1], alone[:, 0], rtol=0.0, atol=1e-13)


def test_no_points_no_rows() -> None:
    table = band_fluxes(EMITTER, ("Gaia G",), Dust())
    assert table.ln_flux(np.empty((0, 1)), np.empty(0)).shape == (0, 1)


@pytest.mark.parametrize(
    ("x", "av", "message"),
    [
        (np.log([[2000.0]]), [0.0], "ln of the temperature in K = 7.6009 is outside the table"),
        (np.log([[5000.0]]), [10.5], "av in mag = 10.5 is outside the table: 0 to 10"),
        (np.log([[5000.0]]), [np.nan], "av in mag = nan"),
        (np.log([5000.0]), [0.0], "must have shape"),
    ],
)
def test_outside_the_table_is_refused(x: np.ndarray, av: list, message: str) -> None:
    table = band_fluxes(EMITTER, ("Gaia G",), Dust())
    with pytest.raises(InputError, match=message):
        table.ln_flux(x, np.array(av))


def test_extrapolated_bands_are_told() -> None:
    bands = ("2MASS Ks", "WISE W1", "WISE W4")
    assert extrapolated_bands(bands, Dust()) == ()
    assert extrapolated_bands(bands, Dust(law="CCM89")) == ("WISE W1", "WISE W4")


def test_a_law_that_does_not_reach_a_band() -> None:
    with pytest.raises(DustError, match="ends at"):
        band_fluxes(EMITTER, ("2MASS J",), Dust(law="B92_MWAvg"))
