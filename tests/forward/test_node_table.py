"""The tabulated band fluxes of model atmospheres against plain integration of their spectra."""

from __future__ import annotations

import numpy as np
import pytest

from starkiln.dust import Dust
from starkiln.emitters import AtmosphereEmitter
from starkiln.errors import InputError
from starkiln.forward import BandFluxTable, NodeFluxTable, band_flux_direct, band_fluxes
from starkiln.forward._build import _kept
from starkiln.passbands import band_names

EMITTER = AtmosphereEmitter()
BANDS = ("Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W3")
#: Wider than 1e-3: there the spectra of cool stars fall by powers of ten from model to model.
WIDER = {"GALEX NUV": 4e-3, "GALEX FUV": 0.1}


def points(n: int, seed: int = 3) -> tuple[np.ndarray, np.ndarray]:
    rng = np.random.default_rng(seed)
    temperature = np.exp(rng.uniform(np.log(4200.0), np.log(40000.0), n))
    temperature[:2] = 4200.0, 40000.0
    low = EMITTER.lowest_logg(temperature)
    logg = low + rng.uniform(0.0, 1.0, n) * (5.0 - low)
    logg[2:4] = low[2], 5.0
    feh = rng.uniform(-2.5, 0.5, n)
    feh[4:6] = -2.5, 0.5
    return np.column_stack([np.log(temperature), logg, feh]), rng.uniform(0.0, 10.0, n)


def direct(emitter: AtmosphereEmitter, bands, dust: Dust, x, av) -> np.ndarray:
    return np.stack([band_flux_direct(emitter, band, dust, x, av) for band in bands], axis=1)


@pytest.mark.parametrize(
    "bands",
    [
        (*BANDS, "Johnson U", "SDSS u", *WIDER),
        pytest.param(band_names(), marks=pytest.mark.long),
    ],
)
def test_table_agrees_with_integration(bands) -> None:
    x, av = points(80)
    value = band_fluxes(EMITTER, bands, Dust()).ln_flux(x, av)
    difference = np.abs(value - direct(EMITTER, bands, Dust(), x, av)).max(axis=0)
    for band, largest in zip(bands, difference, strict=True):
        assert largest < WIDER.get(band, 1e-3), band


@pytest.mark.parametrize(("logg", "feh"), [(4.44, 0.0), (2.3, -0.4), (1.32, -2.5)])
def test_given_gravity_and_metallicity(logg: float, feh: float) -> None:
    emitter = AtmosphereEmitter(logg, feh)
    table = band_fluxes(emitter, BANDS, Dust())
    assert isinstance(table, BandFluxTable)
    ends = np.log(emitter.bounds["temperature"])
    x = np.random.default_rng(5).uniform(*ends, (80, 1))
    x[:2, 0] = ends
    av = np.linspace(0.0, 10.0, 80)
    value = table.ln_flux(x, av)
    np.testing.assert_allclose(value, direct(emitter, BANDS, Dust(), x, av), rtol=0.0, atol=1e-3)
    whole = np.column_stack([x, np.full(80, logg), np.full(80, feh)])
    of_all = band_fluxes(EMITTER, BANDS, Dust()).ln_flux(whole, av)
    np.testing.assert_allclose(value, of_all, rtol=0.0, atol=4e-4)


def test_one_of_them_given() -> None:
    x, av = points(20)
    x[:, 1] = 4.2
    keep = EMITTER.contains(np.exp(x[:, 0]), x[:, 1], x[:, 2])
    x, av = x[keep], av[keep]
    of_all = band_fluxes(EMITTER, BANDS, Dust()).ln_flux(x, av)
    given = band_fluxes(AtmosphereEmitter(logg=4.2), BANDS, Dust())
    assert isinstance(given, NodeFluxTable)
    np.testing.assert_array_equal(given.ln_flux(x[:, [0, 2]], av), of_all)


def test_free_rv() -> None:
    bands, law = ("Gaia BP", "2MASS Ks"), "F99"
    x, av = points(40)
    free = band_fluxes(EMITTER, bands, Dust(law=law), free_rv=True)
    sun = AtmosphereEmitter(4.44, 0.0)
    cut = band_fluxes(sun, bands, Dust(law=law), free_rv=True)
    for rv in (2.0, 3.1, 5.5):
        dust, at = Dust(law=law, rv=rv), np.full(40, rv)
        value, slope = free.ln_flux_and_slope(x, av, at)
        np.testing.assert_allclose(value, direct(EMITTER, bands, dust, x, av), atol=1e-3, rtol=0)
        fixed = band_fluxes(EMITTER, bands, dust)
        np.testing.assert_allclose(fixed.ln_flux(x, av), value, rtol=0.0, atol=2e-5)
        np.testing.assert_allclose(slope, fixed.ln_flux_and_slope(x, av)[1], rtol=0.0, atol=1e-3)
        np.testing.assert_allclose(
            cut.ln_flux(x[:, :1], av, at),
            band_fluxes(sun, bands, dust).ln_flux(x[:, :1], av),
            rtol=0.0,
            atol=2e-5,
        )


def test_slope_is_the_derivative() -> None:
    table = band_fluxes(EMITTER, BANDS, Dust())
    x, av = points(100)
    av = np.clip(av, 0.01, 9.99)
    value, slope = table.ln_flux_and_slope(x, av)
    np.testing.assert_array_equal(value, table.ln_flux(x, av))
    difference = (table.ln_flux(x, av + 1e-4) - table.ln_flux(x, av - 1e-4)) / 2e-4
    np.testing.assert_allclose(slope, difference, rtol=0.0, atol=1e-7)


def test_company_does_not_change_a_point() -> None:
    table = band_fluxes(EMITTER, BANDS, Dust())
    x, av = points(1000)
    whole = table.ln_flux(x, av)
    rng = np.random.default_rng(8)
    for n in (1, 2, 63, 64, 65, 300):
        chosen = rng.integers(0, 1000, n)
        np.testing.assert_array_equal(table.ln_flux(x[chosen], av[chosen]), whole[chosen])
    assert table.ln_flux(np.empty((0, 3)), np.empty(0)).shape == (0, len(BANDS))


@pytest.mark.parametrize(
    ("point", "av", "message"),
    [
        ([np.log(4000.0), 4.0, 0.0], 0.0, "temperature = 4000 K is outside the model atmospheres"),
        ([np.log(20000.0), 2.0, 0.0], 0.0, "logg = 2 at 20000 K is below the model atmospheres"),
        ([np.log(6000.0), 4.0, np.nan], 0.0, "feh = nan is outside"),
        ([np.log(6000.0), 4.0, 0.0], 11.0, "av in mag = 11 is outside the table"),
        ([np.log(6000.0)], 0.0, r"x must have shape \(n, 3\)"),
    ],
)
def test_outside_the_models_is_refused(point: list, av: float, message: str) -> None:
    table = band_fluxes(EMITTER, ("Gaia G",), Dust())
    with pytest.raises(InputError, match=message):
        table.ln_flux(np.array([point]), np.array([av]))


def test_it_is_kept_on_disk(tmp_path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("STARKILN_CACHE", str(tmp_path))
    _kept.cache_clear()
    for logg in (4.0, 4.1):
        band_fluxes(AtmosphereEmitter(logg, 0.0), ("Johnson B",), Dust())
    # The blackbody's, and one for every log g.
    assert len(list((tmp_path / "band-fluxes").iterdir())) == 2
