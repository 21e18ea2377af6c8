"""Runs: every row accounted for; order, workers and interruption change no bit."""

from __future__ import annotations

import json

import numpy as np
import pytest

from starkiln import fit, read_catalogue
from starkiln.errors import InputError, RunFolderError, SettingsError, StorageError
from starkiln.inference import Settings
from starkiln.runner import Recipe, fit_catalogue, open_run
from starkiln.runner._folder import read_parts

from .conftest import ROWS

TABLES = ("results.ecsv", "photometry.ecsv", "draws.fits")


def content(folder):
    return [(folder / name).read_bytes() for name in TABLES]


def test_a_run_holds_every_row_in_order_and_says_what_failed(finished):
    run = finished
    results = run.results
    assert list(results["name"]) == [f"Mirel {i}" for i in range(1, 6)]
    assert list(results["status"]) == ["ok", "ok", "ok", "rejected", "ok"]
    assert "row 4, column 'e_Gaia G'" in results["message"][3]
    assert np.ma.is_masked(results["temperature"][3])
    assert "dust_assumed_zero" in results["flags"][2]
    assert "likelihood in flux (limit in 2MASS Ks)" in results["message"][2]
    for name in ("temperature", "angular_diameter", "radius", "luminosity"):
        low, middle, high = (results[name + edge][0] for edge in ("_lo", "", "_hi"))
        assert low < middle < high
    photometry = run.photometry
    assert set(photometry["row"]) == {1, 2, 3, 5}
    assert photometry["limit"][photometry["row"] == 3].tolist() == ["", "", "upper"]
    draws = run.draws(1)
    assert len(draws) == 50
    assert run.draws(4) is None
    assert not (run.folder / "parts").exists()
    meta = json.loads((run.folder / "run.json").read_text())
    assert meta["complete"]
    assert "log-uniform" in meta["priors"]["temperature"]
    assert run.model(1).band_flux(draws).shape == (50, 3)


def test_columns_are_those_of_the_contract(finished):
    run = finished
    quantities = ["temperature", "angular_diameter", "av", "misfit", "bolometric_flux"]
    quantities += ["distance", "radius", "luminosity"]
    expected = ["name", "status", "message", "flags", "engine", "emitter", "n_bands"]
    expected += [q + edge for q in quantities for edge in ("", "_lo", "_hi")]
    expected += ["n_eff", "fit_probability", "log_evidence", "seed"]
    assert run.results.colnames == expected
    units = {name: str(run.results[name].unit) for name in quantities if run.results[name].unit}
    assert units["temperature"] == "K"
    assert units["angular_diameter"] == "mas"
    assert units["radius"] == "solRad"
    assert units["luminosity"] == "solLum"


def test_workers_and_order_change_no_bit(catalogue, recipe, finished, tmp_path):
    fit_catalogue(catalogue, tmp_path / "two", recipe=recipe, workers=2)
    assert content(finished.folder) == content(tmp_path / "two")
    head, *rows = ROWS.strip().splitlines()
    path = tmp_path / "turned.csv"
    path.write_text("\n".join([head, *reversed(rows)]) + "\n")
    turned = fit_catalogue(read_catalogue(path), tmp_path / "three", recipe=recipe, workers=1)
    plain = open_run(finished.folder).results
    for name in ("temperature", "radius_hi", "n_eff", "fit_probability"):
        np.testing.assert_array_equal(plain[name], turned.results[name][::-1])


def test_a_star_alone_is_the_star_in_company(catalogue, recipe, finished):
    run = finished
    alone = fit(catalogue.rows(1, 2)[0], settings=recipe.settings, rng=7)
    assert run.results["temperature"][1] == alone.summary["temperature"][0]


def test_an_interrupted_run_resumes_to_the_same_bytes(
    catalogue, recipe, finished, tmp_path, monkeypatch
):
    monkeypatch.setattr("starkiln.runner._progress._UNIT_SECONDS", 1e-9)  # one row a unit

    def stop(state):
        if state.done >= 2:
            raise KeyboardInterrupt

    folder = tmp_path / "broken"
    with pytest.raises(KeyboardInterrupt):
        fit_catalogue(catalogue, folder, recipe=recipe, workers=1, progress=stop)
    kept = [part.start for part in read_parts(folder)]
    assert kept[:2] == [0, 1]
    with pytest.raises(RunFolderError, match="not complete"):
        open_run(folder)
    seen = []
    fit_catalogue(catalogue, folder, recipe=recipe, workers=1, progress=lambda s: seen.append(s))
    assert content(folder) == content(finished.folder)
    assert seen[0].done >= 3
    before = content(folder)
    fit_catalogue(catalogue, folder, recipe=recipe, workers=1)
    assert content(folder) == before


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"seed": 8}, "seed was 7, now 8"),
        ({"settings": Settings(dust="zero")}, "settings dust was 'column', now 'zero'"),
        ({"engine": "ensemble", "emitter": "blackbody", "keep_draws": False}, "draws kept"),
    ],
)
def test_another_run_in_the_same_folder_is_refused(catalogue, recipe, finished, change, words):
    same = {key: getattr(recipe, key) for key in ("emitter", "engine", "settings", "seed")}
    if "settings" in change:
        change = {"settings": Settings(**{**recipe.settings.as_dict(), "dust": "zero"})}
    with pytest.raises(RunFolderError, match=words):
        fit_catalogue(catalogue, finished.folder, recipe=Recipe(**{**same, **change}))


def test_another_catalogue_in_the_same_folder_is_refused(recipe, finished, tmp_path):
    path = tmp_path / "other.csv"
    path.write_text(ROWS.replace("10.23", "10.24"))
    with pytest.raises(RunFolderError, match="catalogue was"):
        fit_catalogue(read_catalogue(path), finished.folder, recipe=recipe)


def test_folders_that_are_no_runs_are_refused(catalogue, recipe, tmp_path):
    (tmp_path / "notes.txt").write_text("mine")
    with pytest.raises(RunFolderError, match=r"holds 'notes.txt' but no run.json"):
        fit_catalogue(catalogue, tmp_path, recipe=recipe)
    with pytest.raises(RunFolderError, match="is no folder"):
        open_run(tmp_path / "nowhere")
    (tmp_path / "empty").mkdir()
    with pytest.raises(RunFolderError, match="not a run folder"):
        open_run(tmp_path / "empty")
    with pytest.raises(StorageError, match="cannot make the run folder"):
        fit_catalogue(catalogue, tmp_path / "notes.txt" / "run", recipe=recipe)


def test_a_damaged_part_is_named(catalogue, recipe, tmp_path):
    def stop(state):
        raise KeyboardInterrupt

    folder = tmp_path / "run"
    with pytest.raises(KeyboardInterrupt):
        fit_catalogue(catalogue, folder, recipe=recipe, workers=1, progress=stop)
    part = next((folder / "parts").glob("*.npz"))
    part.write_bytes(part.read_bytes()[:100])
    with pytest.raises(RunFolderError, match=r"rows-.* is damaged"):
        fit_catalogue(catalogue, folder, recipe=recipe, workers=1)


def test_unknown_names_and_numbers_are_refused(catalogue, tmp_path):
    star = catalogue.rows(0, 1)[0]
    with pytest.raises(SettingsError, match="engine 'fast' is unknown; choose ensemble"):
        fit(star, engine="fast")
    with pytest.raises(SettingsError, match="emitter 'star' is unknown; choose blackbody"):
        fit(star, emitter="star")
    with pytest.raises(SettingsError, match=r"seed = 1\.5"):
        fit(star, rng=1.5)
    with pytest.raises(SettingsError, match="workers = 0"):
        fit_catalogue(catalogue, tmp_path / "run", workers=0)
    with pytest.raises(InputError):
        fit_catalogue(
            catalogue, tmp_path / "run", recipe=Recipe(settings=Settings(dust_law="none"))
        )


def test_as_many_draws_are_kept_as_are_asked_for(catalogue):
    star = catalogue.rows(0, 1)[0]
    for asked in (10, 30_000):
        settings = Settings(effective_draws=300, walkers=32, draws=asked)
        assert len(fit(star, settings=settings).draws) >= asked
