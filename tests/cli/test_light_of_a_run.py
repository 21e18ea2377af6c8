"""`photons --run` and `force --run`: the same sums over the draws of fitted stars."""

from functools import partial

import numpy as np
import pytest
from astropy.table import Table

from starkiln import runner
from starkiln.cli import main
from starkiln.errors import InputError

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

RNG = np.random.default_rng(3)
T = RNG.normal(6000.0, 60.0, 256)
R = RNG.normal(2.0, 0.05, 256)


class MadeUpRun:
    """What a run offers: one star with distance, one without, one rejected."""

    results = Table({"name": ["Aldana", "Borim", "Cemal"]})

    def draws(self, row):
        one = Table({"temperature": T, "angular_diameter": R / 10})
        if row == 1:
            one["radius"], one["distance"] = R, np.full(256, 50.0)
            one["luminosity"] = R**2 * (T / 5772) ** 4
        return None if row == 3 else one

    def rows_of(self, name):
        if name not in self.results["name"]:
            raise InputError(f"no star '{name}' in the run")
        return [list(self.results["name"]).index(name) + 1]


@pytest.fixture(autouse=True)
def _run(monkeypatch):
    monkeypatch.setattr(runner, "open_run", lambda _folder: MadeUpRun())


def table(capfd, *words, code=0):
    assert main([*words, "--run", "somewhere", "--format", "ecsv"]) == code
    out, err = capfd.readouterr()
    rows = Table.read(out, format="ascii.ecsv")
    return {(row["name"], row["quantity"]): row for row in rows}, rows.colnames, err


def test_photons_of_every_star(capfd):
    rows, names, err = table(capfd, "photons", "--to", "0.5", code=3)
    assert names[:4] == ["name", "quantity", "value", "unit"]
    assert "row 3 'Cemal' is left out" in err
    flux = rows["Aldana", "irradiance"]
    draws = 5.6703744e-8 * T**4 * (R * 6.957e8 / (50 * 3.0856775814913673e16)) ** 2
    want = np.percentile(draws, [16, 50, 84])
    assert [flux["value_lo"], flux["value"], flux["value_hi"]] == approx(want, rel=1e-7)
    assert ("Borim", "exitance") in rows
    assert ("Borim", "irradiance") not in rows
    assert np.isnan(rows["Borim", "to"]["value_lo"])


def test_one_star_by_name(capfd):
    rows, _, err = table(capfd, "photons", "--star", "Borim")
    assert {name for name, _ in rows} == {"Borim"}
    assert err == ""


def test_eddington_by_mass_with_its_error(capfd):
    rows, _, _ = table(
        capfd, "force", "eddington", "--mass", "1.3", "--e-mass", "0.13", "--star", "Aldana"
    )
    gamma, mass = rows["Aldana", "eddington_factor"], rows["Aldana", "mass"]
    # 256 draws know the width of an interval to about 8 per cent.
    half = 0.5 * (gamma["value_hi"] - gamma["value_lo"]) / gamma["value"]
    spread = np.std(R**2 * T**4) / np.mean(R**2 * T**4)
    assert half == approx(np.hypot(spread, 0.1), rel=0.25)
    assert mass["value"] == approx(1.3, abs=0.03)


def test_other_kinds(capfd):
    rows, _, _ = table(capfd, "force", "eddington", "--logg", "4", code=3)
    assert ("Borim", "surface_eddington_factor") in rows
    rows, _, err = table(capfd, "force", "surface", "--distance", "1", code=3)
    assert "Borim" in err
    power = np.median(R**2 * (T / 5772) ** 4)
    assert rows["Aldana", "irradiance"]["value"] == approx(1361.17 * power, rel=1e-3)
    rows, _, _ = table(
        capfd, "force", "grain", "--size", "1", "--density", "2", "--mass", "1.3", code=3
    )
    assert rows["Aldana", "beta"]["value"] == approx(0.2871 * power / 1.3, rel=1e-3)
    rows, _, _ = table(capfd, "force", "sail", "--loading", "10", "--mass", "1.3", code=3)
    assert rows["Aldana", "critical_loading"]["value"] == approx(1.5313 * power / 1.3, rel=1e-3)


BAD = [
    (["photons", "--temperature", "5000"], "--temperature comes from the run"),
    (["photons", "--e-temperature", "50"], "--temperature comes from the run"),
    (["photons", "--star", "Nobody"], "no star 'Nobody'"),
    (["photons", "--star", "Cemal"], "no star of the run"),
    (["force", "grain", "--size", "1", "--density", "2"], "--mass is missing"),
    (["force", "sail", "--loading", "1", "--mass", "1", "--escape"], "one star alone"),
    (["force", "sail", "--loading", "1", "--mass", "1", "--luminosity", "2"], "comes from the run"),
    (["force", "eddington"], "--logg is missing"),
    (["force", "surface"], "--distance is missing"),
]


@pytest.mark.parametrize(("words", "says"), BAD, ids=[" ".join(w) for w, _ in BAD])
def test_bad_input_is_told(words, says, capfd):
    assert main([*words, "--run", "somewhere"]) == 2
    out, err = capfd.readouterr()
    assert out == ""
    assert says in err
