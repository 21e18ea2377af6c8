"""Tables written and read back, in every format."""

import warnings

import numpy as np
import pytest
from astropy import units as u
from astropy.io import fits
from astropy.table import MaskedColumn, Table

from starkiln.errors import InputError, StorageError
from starkiln.store import FORMATS, table_bytes, write_table

STYLE = {"ecsv": "ascii.ecsv", "csv": "ascii.csv", "fits": "fits", "votable": "votable"}


@pytest.fixture
def table():
    table = Table(meta={"description": "an invented table", "seed": 7})
    table["name"] = MaskedColumn(["a", "\u03b1 Adrae", "\u00c9toile"], description="the name")
    table["flags"] = MaskedColumn(["", "x y", ""], mask=[True, False, False])
    table["Gaia G"] = MaskedColumn([0.1, 2.0 / 3.0, 0.0], mask=[False, False, True], unit="mag")
    table["radius"] = MaskedColumn([1.0, 2.0, 3.0], unit="solRad", description="radius")
    table["flux"] = MaskedColumn([1e-9, 2e-9, 3e-9], unit="W m-2 um-1")
    table["logg"] = MaskedColumn([4.4, 4.0, 3.0], unit="dex")
    table["n"] = MaskedColumn([1, 2, 3], mask=[False, True, False])
    table["ok"] = [True, False, True]
    return table


@pytest.mark.parametrize("style", FORMATS)
def test_numbers_gaps_and_units_come_back_without_a_warning(table, tmp_path, style):
    path = write_table(table, tmp_path / "t", style)
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        back = Table.read(path, format=STYLE[style])
    names = [name.replace(" ", "_") for name in table.colnames] if style == "votable" else None
    assert back.colnames == (names or table.colnames)
    for old, new in zip(table.colnames, back.colnames, strict=True):
        if table[old].dtype.kind in "fi":
            np.testing.assert_array_equal(
                np.ma.getmaskarray(np.ma.asarray(back[new])),
                np.ma.getmaskarray(np.ma.asarray(table[old])),
            )
            assert list(np.ma.asarray(back[new]).compressed()) == list(
                np.ma.asarray(table[old]).compressed()
            )
        if style != "csv" and table[old].unit not in (None, u.dex):
            assert back[new].unit == table[old].unit


@pytest.mark.parametrize("style", FORMATS)
def test_the_same_table_gives_the_same_bytes(table, style):
    content = table_bytes(table, style)
    assert content == table_bytes(table.copy(), style)
    assert b"DATE" not in content.upper().replace(b"UPDATE", b"")


def test_letters_that_fits_cannot_hold(table, tmp_path):
    back = Table.read(write_table(table, tmp_path / "t", "fits"), format="fits")
    back.convert_bytestring_to_unicode()
    assert list(back["name"]) == ["a", "alpha Adrae", "Etoile"]
    for style in ("ecsv", "csv", "votable"):
        back = Table.read(write_table(table, tmp_path / style, style), format=STYLE[style])
        assert list(back["name"]) == list(table["name"])


def test_a_unit_that_fits_does_not_know_stands_in_the_description(table, tmp_path):
    path = write_table(table, tmp_path / "t", "fits")
    assert Table.read(path, format="fits")["logg"].unit is None
    header = fits.getheader(path, 1)
    assert header["TCOMM6"] == "logg [dex]"
    assert header["TCOMM4"] == "radius"


def test_the_table_itself_is_left_alone(table):
    before = table_bytes(table, "ecsv")
    for style in FORMATS:
        table_bytes(table, style)
    assert table_bytes(table, "ecsv") == before


def test_what_is_wrong_is_told(table, tmp_path):
    with pytest.raises(InputError, match="'xls' is none of ecsv, fits, votable, csv"):
        write_table(table, tmp_path / "t", "xls")
    with pytest.raises(StorageError, match="the folder does not exist"):
        write_table(table, tmp_path / "no" / "t", "csv")
    assert list(tmp_path.iterdir()) == []
