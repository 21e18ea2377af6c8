"""Catalogues of every format give the same stars."""

import numpy as np
import pytest
from astropy import units as u
from astropy.table import MaskedColumn, QTable, Table

from starkiln.observations import BadRow, Star, read_catalogue
from starkiln.store import FORMATS, write_table


@pytest.fixture
def table():
    table = Table()
    table["name"] = ["Adra 1", "Adra 2", "Adra 3"]
    table["Gaia G"] = MaskedColumn([10.1, 9.7, 12.0], mask=[0, 0, 1], unit="mag")
    table["e_Gaia G"] = MaskedColumn([0.01, 0.02, 0.01], mask=[0, 0, 1], unit="mag")
    table["2MASS J"] = MaskedColumn([9.2, 8.7, 10.9], unit="mag")
    table["e_2MASS J"] = [0.02, 0.03, 0.02]
    table["l_2MASS J"] = ["", ">", ""]
    table["WISE W3"] = MaskedColumn([50.0, -2.0, 20.0], unit="mJy")
    table["e_WISE W3"] = MaskedColumn([2.0, 3.0, 2.0], unit="mJy")
    table["parallax"] = MaskedColumn([2.1, -0.2, 3.0], mask=[0, 0, 1], unit="mas")
    table["e_parallax"] = MaskedColumn([0.1, 0.1, np.nan], mask=[0, 0, 1], unit="mas")
    return table


@pytest.mark.parametrize(
    "style",
    FORMATS,
)
def test_every_format_gives_the_same_stars(table, tmp_path, style):
    reference = tmp_path / "reference.ecsv"
    table.write(reference, format="ascii.ecsv")
    path = tmp_path / "stars.dat"
    if style == "csv":
        # CSV keeps no unit: the heading carries it.
        table.rename_column("WISE W3", "WISE W3 [mJy]")
        table.rename_column("e_WISE W3", "e_WISE W3 [mJy]")
    write_table(table, path, style)
    expected = read_catalogue(reference).rows()
    found = read_catalogue(path).rows()
    assert all(isinstance(star, Star) for star in expected)
    assert found == expected
    assert [s.fingerprint() for s in found] == [s.fingerprint() for s in expected]


def test_a_bad_row_leaves_the_others(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text("name,Gaia G,e_Gaia G\na,10,0.01\nb,10,-0.01\nc,11,0.01\n")
    first, bad, last = read_catalogue(path).rows()
    assert first.name == "a"
    assert last.name == "c"
    assert isinstance(bad, BadRow)
    for part in ("stars.csv", "row 2", "e_Gaia G", "-0.01"):
        assert part in bad.message


def test_a_catalogue_and_python_give_the_same_star(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text(
        "name,Gaia G,e_Gaia G,WISE W3 (Jy),e_WISE W3,parallax,e_parallax\n"
        "Adra 7,10.23,0.01,0.21,0.01,2.31,0.03\n"
    )
    star = Star(
        "Adra 7",
        {"WISE W3": (0.21 * u.Jy, 0.01 * u.Jy), "Gaia G": (10.23, 0.01)},
        parallax=(2.31, 0.03) * u.mas,
    )
    assert read_catalogue(path).rows()[0].fingerprint() == star.fingerprint()


def test_quantity_columns_of_a_qtable_are_read(tmp_path):
    path = tmp_path / "stars.ecsv"
    table = QTable({"name": ["a"], "2MASS J": [0.1] * u.Jy, "e_2MASS J": [3.0] * u.mJy})
    table.write(path, format="ascii.ecsv")
    (star,) = read_catalogue(path).rows()
    assert star.measurements[0].fractional_error == pytest.approx(0.03)
