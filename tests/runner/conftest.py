"""A small catalogue and quick settings for the tests of the runner."""

from __future__ import annotations

import pytest

from starkiln import read_catalogue
from starkiln.inference import Settings
from starkiln.runner import Recipe, fit_catalogue

_HEAD = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J,2MASS Ks,e_2MASS Ks,l_2MASS Ks,parallax,e_parallax"
ROWS = f"""{_HEAD},av,e_av
Mirel 1,10.23,0.01,9.10,0.02,8.66,0.02,,2.31,0.03,0.3,0.05
Mirel 2,11.50,0.01,10.01,0.02,9.40,0.02,,2.20,0.04,0.1,0.05
Mirel 3,12.50,0.01,11.40,0.02,11.0,,>,2.20,0.04,,
Mirel 4,13.50,-0.01,12.01,0.02,11.40,0.02,,2.20,0.04,0.1,0.05
Mirel 5,9.80,0.01,9.50,0.02,9.40,0.02,,-0.20,0.30,0.4,0.10
"""


@pytest.fixture(scope="module")
def recipe():
    return Recipe(settings=Settings(effective_draws=300, walkers=32, draws=50), seed=7)


@pytest.fixture(scope="module")
def catalogue(tmp_path_factory):
    path = tmp_path_factory.mktemp("catalogue") / "stars.csv"
    path.write_text(ROWS)
    return read_catalogue(path)


@pytest.fixture(scope="module")
def finished(catalogue, recipe, tmp_path_factory):
    """A finished run, made once; nothing may change it."""
    return fit_catalogue(
        catalogue, tmp_path_factory.mktemp("runs") / "run", recipe=recipe, workers=1
    )
