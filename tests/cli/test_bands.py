"""`starkiln bands` as a photometrist uses it."""

from __future__ import annotations

from pathlib import Path

import pytest
from astropy.table import Table

from starkiln.cli import main
from starkiln.passbands import band_names


def printed(capsys: pytest.CaptureFixture, *words: str) -> Table:
    assert main(["bands", *words, "--format", "ecsv"]) == 0
    return Table.read(capsys.readouterr().out, format="ascii.ecsv")


def test_all_bands(capsys: pytest.CaptureFixture) -> None:
    table = printed(capsys)
    assert tuple(table["band"]) == band_names()
    # The contract's columns.
    assert table.colnames == [
        "band",
        "system",
        "response",
        "pivot",
        "width",
        "vega_zero_point",
        "ab_zero_point",
        "zero_point_error",
        "source",
    ]


def test_where_a_zero_point_comes_from(capsys: pytest.CaptureFixture) -> None:
    assert main(["bands", "2mass ks"]) == 0
    text = capsys.readouterr().out
    assert "Cohen, Wheaton & Megeath 2003" in text
    # One line per figure, to read.
    line = next(line for line in text.splitlines() if line.startswith("vega_zero_point"))
    assert line.split() == ["vega_zero_point", "Jy", "666.73"]
    assert any(line.startswith("asinh_softening") and "-" in line for line in text.splitlines())


def test_extinction_ratio(capsys: pytest.CaptureFixture) -> None:
    row = printed(capsys, "Gaia G", "--law", "O94", "--temperature", "5772K", "--av", "0.3")[0]
    # Casagrande & VandenBerg 2018 (see tests/forward): 2.693 of E(B-V), R_V 3.1.
    assert row["extinction_ratio"] * 3.1 == pytest.approx(2.693, abs=0.05)
    assert row["extrapolated"] == "no"
    assert "Gaia" in row["source"] or "Riello" in row["source"]
    row = printed(capsys, "WISE W3", "--law", "CCM89")[0]
    assert row["extrapolated"] == "yes"


def test_a_law_that_reaches_few_bands(capsys: pytest.CaptureFixture) -> None:
    table = printed(capsys, "--law", "B92_MWAvg")
    ratios = dict(zip(table["band"], table["extinction_ratio"], strict=True))
    assert ratios["Johnson V"] == pytest.approx(1.0, abs=0.02)
    assert table["extinction_ratio"].mask[list(table["band"]).index("2MASS J")]
    assert main(["bands", "2MASS J", "--law", "B92_MWAvg"]) == 2
    assert "ends at 0.7873 um" in capsys.readouterr().err


def test_a_file(capsys: pytest.CaptureFixture, tmp_path: Path) -> None:
    path = tmp_path / "mine.csv"
    path.write_text(
        "# response_kind: photon\n# magnitude_system: AB\nwavelength,response\n1,0\n2,1\n3,0\n"
    )
    assert main(["bands", str(path)]) == 2
    error = capsys.readouterr().err
    assert error.count("\n") == 1
    assert "the wavelengths have no unit" in error
    path.write_text("# wavelength_unit: um\n" + path.read_text())
    assert printed(capsys, str(path))["pivot"][0] == pytest.approx(1.97, abs=0.02)


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["Gaia B"], "unknown band 'Gaia B': did you mean"),
        (["Gaia G", "--law", "CCM98"], "did you mean CCM89"),
        (["Gaia G", "--temperature", "hot"], "--temperature hot is not a number"),
        (["Gaia G", "--rv", "12"], "R_V = 12 is outside the law G23"),
        (["Gaia G", "--av", "-1"], "av = -1 mag is out of bounds"),
    ],
)
def test_bad_commands(capsys: pytest.CaptureFixture, words: list[str], message: str) -> None:
    assert main(["bands", *words]) == 2
    error = capsys.readouterr().err
    assert message in error
    assert error.count("\n") == 1
