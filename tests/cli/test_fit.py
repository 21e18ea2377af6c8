"""`starkiln fit` and `luminosity` as a user types them: tables, messages, exit codes."""

from __future__ import annotations

import json

import pytest

from starkiln.cli import main

HEAD = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J,2MASS Ks,e_2MASS Ks,parallax,e_parallax,av,e_av"
GOOD = "Mirel 1,10.23,0.01,9.10,0.02,8.66,0.02,2.31,0.03,0.3,0.05"
BAD = "Mirel 2,10.23,0.01,inf,0.02,8.66,0.02,2.31,0.03,0.3,0.05"


@pytest.fixture
def write(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)

    def write(*rows, name="stars.csv"):
        (tmp_path / name).write_text("\n".join([HEAD, *rows]) + "\n")
        return name

    return write


def fit(*words):
    return main(["fit", *words, "--workers", "1"])


def test_a_good_catalogue_prints_its_table_and_its_priors(write, capsys, tmp_path):
    assert fit(write(GOOD), "--run", "run") == 0
    out, err = capsys.readouterr()
    assert out.splitlines()[3].startswith("Mirel 1  ok")
    for words in ("log-uniform, 3000 to 50000 K", "L = 1350 pc", "law G23, R_V 3.1", "1 ok"):
        assert words in err
    assert "\r" not in err  # no progress line where there is no terminal
    meta = json.loads((tmp_path / "run" / "run.json").read_text())
    assert meta["command"].startswith("starkiln fit stars.csv --run run")


def test_a_bad_row_is_told_and_the_exit_code_is_3(write, capsys):
    assert fit(write(GOOD, BAD), "--run", "run", "--quiet") == 3
    out, err = capsys.readouterr()
    assert err == ""
    assert "Mirel 2: rejected: stars.csv, row 2, column '2MASS J'" in out


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["none.csv"], "none.csv: there is no such file"),
        (["."], "is a folder"),
        (["stars.csv", "--law", "Q99"], "Q99"),
        (["stars.csv", "--engine", "fast"], "engine 'fast' is unknown"),
        (["stars.csv", "--emitter", "candle"], "emitter 'candle' is unknown"),
        (["stars.csv", "--settings", "none.toml"], "cannot read settings none.toml"),
        (["stars.csv", "--columns", "none.toml"], "none.toml"),
    ],
)
def test_what_cannot_be_used_is_one_line_and_exit_code_2(write, capsys, words, message):
    write(GOOD)
    assert fit(*words, "--run", "run", "--quiet") == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("starkiln fit: ")
    assert err.count("\n") == 1
    assert message in err


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--seed", "one"], "'one' is not a whole number"),
        (["--seed", "-1"], "-1 is below 0"),
        (["--workers", "0"], "0 is below 1"),
        (["--draws", "many"], "'many' is not a whole number"),
        (["--dust", "some"], "some"),
    ],
)
def test_bad_options_are_exit_code_2(write, capsys, words, message):
    with pytest.raises(SystemExit) as caught:
        main(["fit", write(GOOD), "--run", "run", *words])
    assert caught.value.code == 2
    assert message in capsys.readouterr().err


def test_another_seed_in_the_same_folder_is_refused(write, capsys):
    name = write(GOOD)
    assert fit(name, "--run", "run", "--quiet") == 0
    assert fit(name, "--run", "run", "--quiet") == 0
    assert fit(name, "--run", "run", "--seed", "5", "--quiet") == 2
    assert "seed was 0, now 5" in capsys.readouterr().err


def test_luminosity_of_the_sun_and_of_a_table(tmp_path, capsys):
    assert main(["luminosity", "--radius", "1", "--temperature", "5772", "--format", "csv"]) == 0
    head, row = capsys.readouterr().out.split()
    assert head == "radius,temperature,luminosity,mbol"
    # IAU 2015 Resolution B3: 0.999998 nominal luminosities.
    assert float(row.split(",")[2]) == pytest.approx(0.999998, abs=1e-6)
    table = tmp_path / "stars.csv"
    table.write_text("name,radius,temperature,e_temperature\na,1,5772,50\nb,0,5772,50\n")
    assert main(["luminosity", str(table)]) == 3
    assert "radius = 0 solRad must be above 0" in capsys.readouterr().out


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--radius", "1"], "--temperature is missing"),
        (["--radius", "-1", "--temperature", "5772"], "radius = -1 solRad"),
        (["--radius", "1kg", "--temperature", "5772"], "--radius 1kg is not a number in 'solRad'"),
        (["stars.csv", "--radius", "1"], "not both"),
        (["none.csv"], "there is no such file"),
    ],
)
def test_bad_luminosity_is_one_line(capsys, words, message):
    assert main(["luminosity", *words]) == 2
    err = capsys.readouterr().err
    assert message in err
    assert err.count("\n") == 1
