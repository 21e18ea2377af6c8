"""The time that is foretold is that of the run, and the quick engine is offered."""

from __future__ import annotations

import time
from dataclasses import replace

import pytest

from starkiln import read_catalogue
from starkiln.cli import main
from starkiln.runner import Estimate, estimate, fit_catalogue
from starkiln.runner import _estimate as module

from .conftest import ROWS

HEAD, *STARS = ROWS.strip().splitlines()


@pytest.fixture
def many(tmp_path):
    path = tmp_path / "many.csv"
    path.write_text("\n".join([HEAD, *(STARS[i % 2] for i in range(70))]) + "\n")
    return path


def test_the_estimate_is_about_the_time_of_the_run(many, recipe, tmp_path):
    catalogue, quick = read_catalogue(many), replace(recipe, engine="quadrature")
    expected = estimate(catalogue, tmp_path / "run", quick, 1)
    assert expected.rows == 70
    assert expected.quadrature_seconds is None
    begun = time.perf_counter()
    fit_catalogue(catalogue, tmp_path / "run", recipe=quick, workers=1)
    # A loaded machine may be three times as slow in one of the two.
    assert 1 / 3 < (time.perf_counter() - begun) / expected.seconds < 4
    assert estimate(catalogue, tmp_path / "run", quick, 1) is None


def test_time_goes_with_the_rows_that_are_left_and_the_workers(many, recipe, tmp_path, monkeypatch):
    catalogue = read_catalogue(many)
    monkeypatch.setattr(module, "_seconds", lambda stars, r: {"ensemble": 2.0}.get(r.engine, 0.1))
    assert estimate(catalogue, tmp_path, recipe, 1) == Estimate(70, 140.0, pytest.approx(7.0))
    assert estimate(catalogue, tmp_path, recipe, 7) == Estimate(70, 20.0, pytest.approx(1.0))
    monkeypatch.setattr(module, "done_rows", lambda folder: [(0, 4), (8, 10)])
    assert estimate(catalogue, tmp_path, recipe, 1).rows == 64
    monkeypatch.setattr(module, "done_rows", lambda folder: [(0, 40)])
    assert estimate(catalogue, tmp_path, recipe, 1) is None


def test_a_catalogue_of_bad_rows_has_no_estimate(recipe, tmp_path):
    path = tmp_path / "bad.csv"
    path.write_text("\n".join([HEAD, *[STARS[3]] * 70]) + "\n")
    assert estimate(read_catalogue(path), tmp_path / "run", recipe, 1) is None


def test_fit_offers_the_quick_engine_above_some_minutes(many, tmp_path, monkeypatch, capsys):
    monkeypatch.setattr(module, "_seconds", lambda stars, r: {"ensemble": 9.0}.get(r.engine, 0.1))
    monkeypatch.setattr("starkiln.runner.fit_catalogue", lambda *a, **k: _stop())
    command = ["fit", str(many), "--run", str(tmp_path / "run"), "--workers", "1"]
    assert main(command) == 130
    told = capsys.readouterr().err
    assert "70 rows will take about 10 min; --engine quadrature would take about 7 s\n" in told
    assert main([*command, "--engine", "quadrature"]) == 130
    told = capsys.readouterr().err
    assert "70 rows will take about 7 s\n" in told
    assert main([*command, "--quiet"]) == 130
    assert "will take" not in capsys.readouterr().err


def _stop():
    raise KeyboardInterrupt
