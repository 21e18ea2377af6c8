"""`starkiln inspect`: what it tells, where, and with which exit code."""

import io

import pytest
from astropy.table import Table

from starkiln.cli import main

CLEAN = "name,Gaia G,e_Gaia G\na,10,0.01\nb,11,0.02\n"
MIXED = "name,Gaia G,e_Gaia G,WISE W1,e_WISE W1,Vmag\na,9,0.01,6,0.1,9\nb,11,-1,9,0.1,11\n"


@pytest.fixture
def catalogue(tmp_path):
    def write(content):
        path = tmp_path / "stars.csv"
        path.write_text(content)
        return str(path)

    return write


def test_a_clean_catalogue(catalogue, capsys):
    assert main(["inspect", catalogue(CLEAN)]) == 0
    out, err = capsys.readouterr()
    assert "CSV, 2 rows" in out
    assert "2 of 2 rows can be fitted." in out
    assert err == ""


def test_bad_rows_and_what_is_left_out(catalogue, capsys):
    assert main(["inspect", catalogue(MIXED)]) == 3
    out, err = capsys.readouterr()
    assert "1 of 2 rows can be fitted; 1 cannot:" in out
    assert "b: stars.csv, row 2, column 'e_Gaia G': error -1 mag" in out
    assert "WISE W1: left out, saturated: 1 row" in out
    assert "perhaps Johnson V" in out
    assert '"Vmag" = { means = "Johnson V", error = 0.02 }' in out
    assert err == ""


def test_headings_that_cannot_be_used(catalogue, capsys):
    assert main(["inspect", catalogue("name,Gaia X,Gaia Y\na,10,0.1\n")]) == 2
    out, err = capsys.readouterr()
    assert "cannot be used, see the error" in out
    assert len(err.splitlines()) == 2
    assert "'Gaia X' looks like a band" in err


def test_a_bad_file_is_one_line_on_standard_error(tmp_path, capsys):
    assert main(["inspect", str(tmp_path / "no.csv")]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("starkiln inspect: ")
    assert err.count("\n") == 1


@pytest.mark.parametrize("style", ["ecsv", "csv", "votable", "fits"])
def test_the_table_of_columns_in_a_format(catalogue, capsysbinary, style):
    assert main(["inspect", catalogue(MIXED), "--format", style]) == 3
    out, err = capsysbinary.readouterr()
    reader = {"ecsv": "ascii.ecsv", "csv": "ascii.csv"}.get(style, style)
    table = Table.read(io.BytesIO(out), format=reader)
    assert table.colnames[:2] == ["heading", "meaning"]
    assert len(table) == 6
    assert b"row 2, column 'e_Gaia G'" in err


def test_it_writes_nothing(catalogue, tmp_path, monkeypatch):
    path = catalogue(MIXED)
    monkeypatch.chdir(tmp_path)
    before = sorted(tmp_path.iterdir())
    main(["inspect", path])
    assert sorted(tmp_path.iterdir()) == before
