"""Kinds of figure that go back to the run's models and to its catalogue."""

from __future__ import annotations

import numpy as np
import pytest

from starkiln import fit_catalogue, read_catalogue
from starkiln.inference import Settings
from starkiln.report import write_figures
from starkiln.report._files import _with_priors
from starkiln.report._view import run_view
from starkiln.runner import Recipe

ROWS = """name,Gaia BP,e_Gaia BP,Gaia RP,e_Gaia RP,2MASS Ks,e_2MASS Ks,parallax,e_parallax,av,e_av
Ost 1,8.05,0.01,8.12,0.01,8.30,0.02,2.00,0.02,0.20,0.05
"""


@pytest.fixture(scope="module")
def made(tmp_path_factory):
    folder = tmp_path_factory.mktemp("more")
    (folder / "stars.csv").write_text(ROWS)
    catalogue = read_catalogue(folder / "stars.csv")
    recipe = Recipe(settings=Settings(effective_draws=300, walkers=32))
    return catalogue, fit_catalogue(catalogue, folder / "run", recipe=recipe, workers=1)


def test_pressure_is_drawn_from_the_run_itself(made):
    _, run = made
    (drawn,) = write_figures(run, ["pressure"], image="svg")
    assert drawn.path is not None, drawn.message
    assert drawn.path.stat().st_size > 5000
    table = run.pressure_table()
    # A star of about 2.5 solar masses by its luminosity (Eker et al. 2018, MNRAS 479, 5491).
    assert 1.6 < float(table["mass"][0]) < 5.0


def test_priors_of_the_row_itself_come_with_the_catalogue(made):
    catalogue, run = made
    bare = run_view(run, 1)
    assert "av" not in bare.priors
    full = _with_priors(bare, run, 1, catalogue)
    # The row's av is 0.20 +- 0.05 mag: a Gaussian falls to exp(-1/2) at one width.
    at_peak, at_width = full.priors["av"](np.array([0.20, 0.25]))
    assert at_width / at_peak == pytest.approx(np.exp(-0.5), rel=1e-6)
    # Distance: d^2 exp(-d / 1350 pc) is highest at 2700 pc.
    grid = np.linspace(100.0, 9000.0, 8901)
    assert grid[np.argmax(full.priors["distance"](grid))] == pytest.approx(2700.0, abs=2.0)
