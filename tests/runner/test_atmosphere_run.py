"""A run with the model atmospheres: rows of every kind, and the model that figures draw."""

from __future__ import annotations

import numpy as np
import pytest

from starkiln import AtmosphereEmitter, Dust, fit_catalogue, read_catalogue
from starkiln.cli import main
from starkiln.forward import band_flux_direct
from starkiln.runner import Recipe

BANDS = ("Gaia BP", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks")
MAGNITUDES = "11.33,0.01,10.52,0.01,9.98,0.02,9.70,0.02,9.63,0.02"


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    folder = tmp_path_factory.mktemp("atmosphere")
    head = ",".join(f"{band},e_{band}" for band in BANDS)
    rows = [
        f"given,{MAGNITUDES},4.4,,-0.2,",
        f"with errors,{MAGNITUDES},4.4,0.1,-0.2,0.1",
        f"neither,{MAGNITUDES},,,,",
        f"too poor,{MAGNITUDES},4.4,,-4,",
    ]
    path = folder / "stars.csv"
    path.write_text("\n".join([f"name,{head},logg,e_logg,feh,e_feh", *rows]) + "\n")
    return fit_catalogue(
        read_catalogue(path), folder / "run", recipe=Recipe("atmosphere"), workers=1
    )


def test_results_tell_gravity_and_metallicity_of_every_row(run):
    table = run.results
    assert list(table["status"]) == ["ok", "ok", "ok", "rejected"]
    assert list(table["emitter"]) == ["atmosphere"] * 4
    assert table["logg"][0] == 4.4
    assert table["logg_lo"][0] == 4.4
    assert table["logg_hi"][1] - table["logg_lo"][1] == pytest.approx(0.2, abs=0.05)
    assert table["logg_hi"][2] - table["logg_lo"][2] > 1.0
    assert table["feh"][0] == -0.2
    assert "no logg given" in table["message"][2]
    assert "feh = -4 is outside the model atmospheres" in table["message"][3]
    assert "feh" in run.meta["priors"]


@pytest.mark.parametrize("row", [1, 2, 3])
def test_the_model_of_a_stored_row_is_that_of_its_draws(run, row):
    draws = run.draws(row)[:20]
    model = run.model(row)
    parameters = [np.asarray(draws[name]) for name in ("temperature", "logg", "feh")]
    x = np.column_stack([np.log(parameters[0]), *parameters[1:]])
    theta = np.asarray(draws["angular_diameter"]) * np.pi / 648e6
    flux = model.band_flux(draws)
    for k, band in enumerate(model.bands):
        direct = band_flux_direct(AtmosphereEmitter(), band, Dust(), x, np.zeros(20))
        expected = 0.25 * np.pi * theta**2 * np.exp(direct) * 1e-6
        np.testing.assert_allclose(flux[:, k], expected, rtol=1e-3)
    spectrum = model.spectrum(np.array([0.5e-6, 2.2e-6]), draws)
    assert spectrum.shape == (20, 2)
    assert np.all(spectrum > 0.0)


def test_figures_are_drawn(run, capsys):
    assert main(["figures", str(run.folder), "--image", "png", "--star", "neither"]) == 0
    names = {path.name for path in (run.folder / "figures").iterdir()}
    assert {"00003_neither_corner.png", "00003_neither_sed.png"} <= names
    assert "corner" in capsys.readouterr().out
