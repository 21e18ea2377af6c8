from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.cli import main
from starkiln.runner import Run

PLAIN = [
    "name",
    "mass",
    "mu",
    "radiation_fraction",
    "radiation_to_gas",
    "radiation_fraction_core",
    "radiation_to_gas_core",
    "gamma_e",
]


def table(capsys, *words, code=0):
    assert main(["pressure", *words, "--format", "ecsv"]) == code
    return Table.read(capsys.readouterr().out, format="ascii.ecsv")


def test_standard_model_by_mass(capsys):
    # M mu^2 = 20.44 has 1 - beta = 0.3, 1 - beta over beta = 3/7 (independent calculation).
    rows = table(capsys, "--mass", "20.441395", "--mu", "1", "--model", "standard")
    assert rows.colnames == PLAIN
    assert rows["radiation_fraction"][0] == pytest.approx(0.3, rel=1e-7)
    assert rows["radiation_to_gas_core"][0] == pytest.approx(3 / 7, rel=1e-7)


def test_structure_by_mass(capsys):
    # Independent structure models: centre 0.0592, volume 0.0390 at 10 solar masses.
    rows = table(capsys, "--mass", "10", "40solMass")
    assert rows.colnames == [*PLAIN, "radius", "luminosity", "temperature"]
    assert rows["radiation_fraction"][0] == pytest.approx(0.0390, rel=0.01)
    assert rows["radiation_fraction_core"][0] == pytest.approx(0.0592, rel=0.01)
    assert str(rows["luminosity"].unit) == "solLum"


def test_mass_with_a_unit(capsys):
    rows = table(capsys, "--mass", "3.9768e31kg", "20", "--model", "standard")
    assert rows["radiation_fraction"][0] == pytest.approx(rows["radiation_fraction"][1], rel=1e-3)


def test_text_is_the_default(capsys):
    assert main(["pressure", "--mass", "10"]) == 0
    assert "radiation_to_gas_core" in capsys.readouterr().out


def test_table_of_targets(capsys, tmp_path):
    path = tmp_path / "targets.csv"
    path.write_text(
        "name,temperature,e_temperature,radius,e_radius,logg,e_logg\n"
        "one,30000,1000,6.3,0.1,4.0,0.1\n"
        "dwarf,25000,500,0.012,0.001,,\n",
        encoding="utf-8",
    )
    rows = table(capsys, str(path), code=3)
    assert list(rows["name"]) == ["one", "dwarf"]
    assert list(rows["status"]) == ["ok", "off_grid"]
    assert {"mass_lo", "gamma_e_hi", "age_fraction", "flags", "message"} <= set(rows.colnames)
    assert rows["mass_lo"][0] < rows["mass"][0] < rows["mass_hi"][0]
    again = table(capsys, str(path), code=3)
    assert again["mass"][0] == rows["mass"][0]
    other = table(capsys, str(path), "--seed", "7", code=3)
    assert other["mass"][0] != rows["mass"][0]


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--mass", "ten"], "--mass ten is not a number"),
        (["--mass", "3K"], "--mass 3K is not a number"),
        (["--mass", "-4"], "mass = -4 solMass is out of bounds"),
        (["--mass", "0.5"], "partial ionisation is left out"),
        (["--mass", "4", "--hydrogen", "70"], "X = 70 is out of bounds"),
        (["--mass", "4", "--mu", "0.6"], "ask for the standard model"),
        ([], "give one of --mass, TABLE and --run, not none"),
        (["t.csv", "--mass", "4"], "not TABLE and --mass"),
        (["t.csv", "--hydrogen", "0.7"], "--hydrogen goes with --mass only"),
        (["t.csv", "--at", "1"], "--at 1 is out of bounds"),
        (["--mass", "4", "--at", "0.5"], "--at goes with TABLE or --run only"),
        (["t.csv", "--targets", "u.csv"], "--targets goes with --run only"),
        (["--run", "nowhere"], "nowhere is no folder"),
    ],
)
def test_bad_input_is_one_line_and_code_two(capsys, words, message):
    assert main(["pressure", *words]) == 2
    captured = capsys.readouterr()
    assert message in captured.err
    assert captured.err.count("\n") == 1
    assert captured.out == ""


def test_a_table_without_a_single_known_column(capsys, tmp_path):
    path = tmp_path / "empty.csv"
    path.write_text("colour,shape\nred,round\n", encoding="utf-8")
    assert main(["pressure", str(path)]) == 2
    assert "no column of" in capsys.readouterr().err


def test_a_run_with_its_draws(capsys, monkeypatch):
    # The seam to the runner: results by name, draws by row counted from 1.
    rng = np.random.default_rng(0)
    draws = Table(
        {
            "temperature": 25000.0 * np.exp(0.03 * rng.standard_normal(256)),
            "luminosity": 9000.0 * np.exp(0.1 * rng.standard_normal(256)),
        }
    )

    class Done(Run):
        results = Table({"name": ["one", "two"]})

        def draws(self, row):
            return draws if row == 1 else None

    monkeypatch.setattr("starkiln.runner.open_run", lambda folder: Done(Path(folder), {}))
    rows = table(capsys, "--run", "somewhere", code=3)
    assert list(rows["status"]) == ["ok", "rejected"]
    assert 8.0 < rows["mass"][0] < 11.0
