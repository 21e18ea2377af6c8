"""Catalogues of every format give the same stars."""

import hashlib
import warnings

import numpy as np
import pytest
from astropy import units as u
from astropy.io import votable
from astropy.table import MaskedColumn, QTable, Table
from hypothesis import given, settings
from hypothesis import strategies as st

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


def test_single_precision_is_taken_by_the_decimals_it_prints(tmp_path):
    fits, text = tmp_path / "a.fits", tmp_path / "a.csv"
    table = Table({"name": ["a", "b"]})
    table["Gaia G"] = MaskedColumn(np.array([10.23, 99.99], np.float32), mask=[False, False])
    table["e_Gaia G"] = np.array([0.011, 0.1], np.float32)
    write_table(table, fits, "fits")
    text.write_text("name,Gaia G,e_Gaia G\na,10.23,0.011\nb,99.99,0.1\n")
    sheet = tmp_path / "sheet.toml"
    sheet.write_text("missing = [99.99]")
    found = [read_catalogue(path, columns=sheet).rows() for path in (fits, text)]
    assert found[0][0] == found[1][0]
    assert "all are empty" in found[0][1].message


def test_a_votable_of_an_archive(tmp_path):
    # A UCD, a unit outside the standard, an array, long whole numbers and a mask.
    table = Table({"source_id": np.array([4295806720123456789, 2], dtype=np.int64)})
    table["Gaia G"] = MaskedColumn([10.0, 11.0], mask=[False, True], unit="mag")
    table["e_Gaia G"] = [0.01, 0.02]
    table["2MASS J"] = MaskedColumn([9.0, 9.5], unit="mag")
    table["e_2MASS J"] = [0.02, 0.02]
    table["logg"] = [4.0, 4.5]
    table["spectrum"] = np.zeros((2, 3))
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # of IDs made from names with spaces
        document = votable.from_table(table)
    for field in document.get_first_table().fields:
        if field.name == "logg":
            field._unit = u.Unit("log(cm.s**-2)", parse_strict="silent")
        if field.name == "Gaia G":
            field.ucd = "phot.mag;em.opt"
    path = tmp_path / "a.vot"
    document.to_xml(str(path))
    catalogue = read_catalogue(path)
    first, second = catalogue.rows()
    assert (first.name, first.logg) == ("4295806720123456789", 4.0)
    assert second.bands == ("2MASS J",)
    assert catalogue.input_table["Gaia G"].meta["ucd"] == "phot.mag;em.opt"


def test_magnitude_and_flux_columns_that_carry_their_unit(tmp_path):
    # astropy's own magnitudes and flux densities, written by astropy.
    table = QTable({"name": ["a"]})
    table["2MASS J"] = [10.0] * u.ABmag
    table["e_2MASS J"] = [0.02] * u.mag
    table["WISE W3"] = [3.0] * u.Unit("erg s-1 cm-2 Angstrom-1") * 1e-16
    table["e_WISE W3"] = [0.3] * u.Unit("erg s-1 cm-2 Angstrom-1") * 1e-16
    table["parallax"] = [0.0021] * u.arcsec
    table["e_parallax"] = [100.0] * u.uas
    path = tmp_path / "a.ecsv"
    table.write(path)
    (star,) = read_catalogue(path).rows()
    by_hand = Star(
        "a",
        {"2MASS J": (10 * u.ABmag, 0.02), "WISE W3": (3e-15, 3e-16) * u.W / u.m**2 / u.um},
        parallax=(2.1, 0.1),
    )
    assert star.bands == by_hand.bands
    for one, other in zip(star.measurements, by_hand.measurements, strict=True):
        assert one.flux_w_m3 == pytest.approx(other.flux_w_m3, rel=1e-12)
        assert one.error_w_m3 == pytest.approx(other.error_w_m3, rel=1e-12)
    assert star.parallax_mas == pytest.approx(2.1)
    assert star.e_parallax_mas == pytest.approx(0.1)


NUMBERS = st.floats(6.0, 16.0).map(lambda x: round(x, 3))


@given(st.lists(st.tuples(NUMBERS, NUMBERS), min_size=1, max_size=6), st.randoms())
@settings(deadline=None, max_examples=30)
def test_neither_order_nor_company_matters(tmp_path_factory, rows, random):
    lines = [f"s{i},{g},0.01,{j},0.02" for i, (g, j) in enumerate(rows)]
    shuffled = [*random.sample(lines, len(lines)), "other,9,0.01,9,0.02"]
    folder = tmp_path_factory.mktemp("order")
    head = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J\n"
    (folder / "a.csv").write_text(head + "\n".join(lines) + "\n")
    (folder / "b.csv").write_text(head + "\n".join(shuffled) + "\n")
    first = {s.name: s.fingerprint() for s in read_catalogue(folder / "a.csv").rows()}
    second = {s.name: s.fingerprint() for s in read_catalogue(folder / "b.csv").rows()}
    second.pop("other")
    assert first == second


def test_rows_come_in_pieces(table, tmp_path):
    path = write_table(table, tmp_path / "a.ecsv", "ecsv")
    catalogue = read_catalogue(path)
    whole = catalogue.rows()
    assert [catalogue.rows(i, i + 1)[0] for i in range(3)] == whole
    assert [star.row for star in whole] == [1, 2, 3]
    assert len(catalogue) == 3
    assert catalogue.checksum == hashlib.sha256(path.read_bytes()).hexdigest()


def test_e_b_v_takes_the_given_ratio(tmp_path):
    path, sheet = tmp_path / "a.csv", tmp_path / "a.toml"
    path.write_text("name,Gaia G,e_Gaia G,ebv,rv\na,10,0.01,0.1,\nb,10,0.01,0.1,5\n")
    sheet.write_text('[columns]\nebv = "ebv"\n')
    first, second = read_catalogue(path, columns=sheet, rv=3.3).rows()
    assert first.av == pytest.approx(0.33)
    assert second.av == pytest.approx(0.5)
