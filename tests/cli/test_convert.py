"""`starkiln convert` as an observer uses it."""

from __future__ import annotations

from pathlib import Path

import pytest
from astropy.table import Table

from starkiln.cli import main


def printed(capsys: pytest.CaptureFixture, *words: str) -> Table:
    assert main(["convert", *words, "--format", "ecsv"]) == 0
    return Table.read(capsys.readouterr().out, format="ascii.ecsv")


def test_one_value(capsys: pytest.CaptureFixture) -> None:
    table = printed(capsys, "0", "--band", "2MASS J", "--from", "mag", "--to", "Jy")
    assert table.colnames == ["value", "unit"]
    # Cohen, Wheaton & Megeath 2003, Table 1: 1594 +- 27.8 Jy.
    assert table["value"][0] == pytest.approx(1594, abs=2.0)
    assert table["unit"][0] == "Jy"


def test_error_and_unit_with_the_value(capsys: pytest.CaptureFixture) -> None:
    words = ["1594Jy", "--band", "2mass.j", "--to", "mag", "--error", "15.94"]
    table = printed(capsys, *words)
    assert table.colnames == ["value", "unit", "error"]
    assert table["value"][0] == pytest.approx(0.0, abs=0.001)
    assert table["error"][0] == pytest.approx(0.010857, rel=1e-3)


def test_a_negative_magnitude(capsys: pytest.CaptureFixture) -> None:
    words = ["-26.529", "--band", "Pan-STARRS g", "--from", "mag", "--to", "W m-2 um-1"]
    value = printed(capsys, *words)["value"][0]
    # 3631 Jy at 0.4849 um, Oke & Gunn 1983.
    per_um = 3.631e-23 * 2.99792458e8 / 0.4849e-6**2 * 1e-6
    assert value == pytest.approx(per_um * 10.0 ** (0.4 * 26.529), rel=3e-4)


def test_a_column(capsys: pytest.CaptureFixture, tmp_path: Path) -> None:
    path = tmp_path / "stars.csv"
    path.write_text("name,K,eK\nA,0,0.1\nB,,\nC,2.5,0.2\n")
    words = [str(path), "--column", "K", "--error-column", "eK", "--band", "2MASS Ks"]
    table = printed(capsys, *words, "--from", "mag", "--to", "Jy")
    assert list(table["name"]) == ["A", "B", "C"]
    assert table["value"][2] == pytest.approx(66.67, rel=2e-4)
    assert table["value"].mask.tolist() == [False, True, False]
    assert table["error"][2] == pytest.approx(0.2 * 0.921034 * 66.67, rel=2e-4)


def test_fluxes_without_magnitude(capsys: pytest.CaptureFixture, tmp_path: Path) -> None:
    path = tmp_path / "stars.csv"
    path.write_text("f\n1\n-2\n")
    words = ["--band", "Gaia G", "--from", "Jy", "--to", "mag", "--format", "ecsv"]
    assert main(["convert", str(path), "--column", "f", *words]) == 0
    captured = capsys.readouterr()
    assert "1 rows left empty" in captured.err
    assert Table.read(captured.out, format="ascii.ecsv")["value"].mask.tolist() == [False, True]
    assert main(["convert", "-2", *words]) == 2
    assert "-2 Jy is not positive and has no magnitude" in capsys.readouterr().err


def test_between_bands(capsys: pytest.CaptureFixture, tmp_path: Path) -> None:
    words = ["5", "--from", "mag", "--to", "mag", "--band", "Johnson V", "--to-band", "2MASS Ks"]
    # Planck's law at the two pivots and the zero points of Cohen et al. 2003 and Bessell,
    # Castelli & Plez 1998 give V - K = 3.63 for 3500 K, to the 0.03 mag of V's width.
    cool = printed(capsys, *words, "--temperature", "3500K")["value"][0]
    assert cool == pytest.approx(5.0 - 3.63, abs=0.03)
    assert printed(capsys, *words, "--temperature", "3500K", "--av", "2")["value"][0] < cool - 1.5
    (tmp_path / "flat.csv").write_text("wavelength,flux\n0.2,1\n3,1\n")
    flat = printed(capsys, *words, "--spectrum", str(tmp_path / "flat.csv"))["value"][0]
    # Zero points: 3.63e-9 (Bessell, Castelli & Plez 1998) and 4.283e-11 erg s-1 cm-2 A-1.
    assert flat == pytest.approx(5.0 + 2.5 * -1.9284, abs=0.02)


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["x", "--from", "mag"], "VALUE x is not a number"),
        (["5"], "VALUE has no unit: give --from"),
        (["5Jy", "--from", "mJy"], "VALUE is in 'Jy' but --from says 'mJy'"),
        (["5", "--from", "K"], "the unit 'K' is no flux density"),
        (["5", "--from", "mag", "--temperature", "3000"], "--temperature describes a source"),
        (["5", "--from", "mag", "--to-band", "Gaia G"], "--to-band needs a source"),
        (["5", "--from", "mag", "--error-column", "e"], "--error-column needs --column"),
        (["none.csv", "--from", "mag", "--column", "e"], "none.csv: there is no such file"),
        (["none.csv", "--column", "e"], "give --from, the unit of the column"),
        (["none.csv", "--from", "mag", "--column", "e", "--error", "1"], "--error is of one value"),
    ],
)
def test_bad_commands(capsys: pytest.CaptureFixture, words: list[str], message: str) -> None:
    assert main(["convert", *words, "--band", "2MASS J", "--to", "Jy"]) == 2
    error = capsys.readouterr().err
    assert message in error
    assert error.count("\n") == 1
