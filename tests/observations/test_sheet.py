"""A column sheet says what foreign headings mean; what it says wrongly is refused."""

import math

import pytest
from astropy import units as u

from starkiln.errors import CatalogueError
from starkiln.observations import BadRow, Star, read_catalogue, read_sheet

FOREIGN = """\
Target,Vmag,eV,gsnr,g,J_AB,K,sK,W3,eW3,lW3,Plx,uPlx,d,ed,red
Adra 1,12.0,0.02,50,15.0,9.0,30,0.5,9.9,0.1,>,2.0,0.1,500,20,0.1
Adra 2,-999,0.02,50,99.99,9.0,bad,0.5,9.9,,,2.0,0.1,,,0.1
"""
SHEET = """\
missing = [-999, 99.99, "bad"]
distance_from = "parallax"
[columns]
Target = "name"
Vmag = { means = "Johnson V", error = "eV" }
g = { means = "SDSS g", signal_to_noise = "gsnr" }
J_AB = { means = "2MASS J", error = 0.05, system = "AB" }
K = { means = "2MASS Ks", unit = "mJy" }
sK = { means = "e_2MASS Ks", unit = "mJy" }
W3 = { error = "eW3", limit = "lW3", limit_sigma = 2, without_error = "limit" }
Plx = { error = "uPlx" }
d = { means = "distance", error = "ed" }
red = { means = "ebv", error = 0.02 }
"""


@pytest.fixture
def read(tmp_path):
    def reader(sheet, content=FOREIGN):
        catalogue = tmp_path / "foreign.csv"
        catalogue.write_text(content)
        path = tmp_path / "sheet.toml"
        path.write_text(sheet)
        return read_catalogue(catalogue, columns=path)

    return reader


def test_every_kind_of_binding(read):
    first, second = read(SHEET).rows()
    # The same star by hand; 50 to 1 is an error of 1 / (50 * 0.4 ln 10) mag.
    by_hand = Star(
        "Adra 1",
        {
            "Johnson V": (12.0, 0.02),
            "SDSS g": (15.0, 1.0 / (50 * 0.4 * math.log(10))),
            "2MASS J": (9.0 * u.ABmag, 0.05 * u.mag),
            "2MASS Ks": (30 * u.mJy, 0.5 * u.mJy),
        },
        parallax=(2.0, 0.1),
        ebv=(0.1, 0.02),
    )
    found = {m.band: m for m in first.measurements}
    w3 = found.pop("WISE W3")
    assert found == {m.band: m for m in by_hand.measurements}
    assert (w3.limit, w3.limit_sigma) == ("upper", 2.0)
    assert (first.av, first.e_av) == (by_hand.av, by_hand.e_av)
    assert first.parallax_mas == 2.0
    assert first.distance_pc is None
    assert set(second.bands) == {"2MASS J", "WISE W3"}
    assert second.limits == ("WISE W3",)


def test_the_distance_may_win(read):
    first, second = read(SHEET.replace('"parallax"', '"distance"')).rows()
    assert (first.parallax_mas, first.distance_pc, first.e_distance_pc) == (None, 500.0, 20.0)
    assert second.parallax_mas == 2.0


def test_a_row_with_both_is_refused_unless_the_sheet_chooses(read):
    first, second = read(SHEET.replace('distance_from = "parallax"', "")).rows()
    assert isinstance(first, BadRow)
    assert "500 pc is given beside a parallax of 2 mas" in first.message
    assert isinstance(second, Star)


def test_the_floor_lifts_small_errors_only(read):
    content = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J\na,10,0.001,9,0.2\n"
    star = read("floor = 0.02", content).rows()[0]
    errors = [m.fractional_error / (0.4 * math.log(10)) for m in star.measurements]
    assert errors == pytest.approx([0.02, 0.2])
    star = read('floor = 0.02\n[columns]\n"Gaia G" = { floor = 0.5 }', content).rows()[0]
    assert star.measurements[0].fractional_error == pytest.approx(0.5 * 0.4 * math.log(10))


def test_the_floor_of_a_flux_is_a_fraction(read):
    content = "name,2MASS J [mJy],e_2MASS J\na,100,0.1\n"
    star = read("floor = 0.02", content).rows()[0]
    assert star.measurements[0].fractional_error == pytest.approx(0.02)


def test_the_floor_serves_a_band_without_column_of_errors_but_fills_no_gap(read):
    content = "name,Gaia G,2MASS J,e_2MASS J\na,10,9,\nb,10,9,0.1\n"
    first, second = read("floor = 0.02", content).rows()
    assert first.bands == ("Gaia G",)
    assert first.left_out == (("2MASS J", "no error is given"),)
    assert second.bands == ("Gaia G", "2MASS J")


def test_bands_and_headings_left_out(read):
    content = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J,Gaia X\na,10,0.01,9,0.1,3\n"
    catalogue = read('leave_out = ["2mass_j", "Gaia X", "WISE W4"]', content)
    assert catalogue.bands == ("Gaia G",)
    remarks = {column.heading: column.remark for column in catalogue.columns}
    assert remarks["2MASS J"] == remarks["Gaia X"] == "left out by the sheet"


def test_a_binding_goes_before_a_heading_of_that_name(read):
    content = "name,Gaia G,e_Gaia G,better\na,10,0.01,12\n"
    catalogue = read('[columns]\nbetter = "Gaia G"', content)
    assert catalogue.rows()[0] == Star.from_values(
        "a", Star("a", {"Gaia G": (12.0, 0.01)}).measurements
    )


def test_the_saturation_rule_of_sheet_and_column(read):
    content = "name,Gaia G,e_Gaia G,WISE W1,e_WISE W1\na,9,0.01,7,0.1\n"
    assert read("", content).rows()[0].bands == ("Gaia G",)
    assert read('saturated = "keep"', content).rows()[0].bands == ("Gaia G", "WISE W1")
    sheet = 'saturated = "keep"\n[columns]\n"WISE W1" = { saturated = "drop" }'
    assert read(sheet, content).rows()[0].bands == ("Gaia G",)


def test_where_the_sheet_stands_does_not_enter_its_checksum(tmp_path):
    sheets = [tmp_path / "a.toml", tmp_path / "b.toml", tmp_path / "c.toml"]
    for path, text in zip(sheets, [SHEET, SHEET + "# c\n", SHEET + "x = 'av'\n"], strict=True):
        path.write_text(text)
    first, second, third = (read_sheet(path).checksum() for path in sheets)
    assert first == second != third


@pytest.mark.parametrize(
    ("sheet", "words"),
    [
        ("mising = [1]", "the sheet has an unknown key 'mising'; did you mean 'missing'?"),
        ('[columns]\nVmag = { mean = "V" }', "'Vmag' has an unknown key 'mean'; did you mean"),
        ('Vmag = "Johnson V"', "a heading is bound under [columns]"),
        ('[columns]\nVmag = "Johnson W"', "'Johnson W' is no band and no quantity; nearest"),
        ("[columns]\nVmag = 3", "write the name of what it is, or a table"),
        ('[columns]\nVmag = { unit = "foo" }', "unit 'foo' is not known"),
        ('[columns]\nVmag = { system = "ABC" }', "system = 'ABC' is none of Vega, AB, ST"),
        ("[columns]\nVmag = { error = -1 }", "error = -1 must be a number above zero"),
        ("[columns]\nfloor = 0.1", "the sheet's own keys stand above [columns]"),
        ("floor = -0.1", "floor = -0.1 must be a number above zero"),
        ('limit_sigma = "three"', "limit_sigma = 'three' must be a number above zero"),
        ('saturated = "maybe"', "saturated = 'maybe' is none of widen, drop, keep"),
        ('distance_from = "moon"', "distance_from = 'moon' is none of parallax, distance"),
        ("leave_out = [3]", "leave_out = [3] must be a list of texts"),
        ("missing = [[3]]", "missing = [[3]] must be a list of numbers or texts"),
        ("columns = 3", "[columns] must be a table"),
        ("a b = 3", "the column sheet is not TOML"),
        ('[columns]\nVmagg = "Johnson V"', "binds 'Vmagg', a column that"),
        ('[columns]\nVmag = { means = "Johnson V", error = "eVV" }', "the nearest is 'eV'"),
        ('leave_out = ["Vmagg"]', "leaves out 'Vmagg', a column that"),
        ("[columns]\nVmag = { floor = 0.1 }", "'Vmag' does not say what it means"),
        ("[columns]\nPlx = { error = 1, floor = 0.1 }", "'floor' says nothing of a parallax"),
        (
            '[columns]\nK = { means = "2MASS Ks", unit = "mJy", system = "AB" }',
            "a flux density in mJy has no magnitude system",
        ),
        (
            '[columns]\ng = { means = "SDSS g", error = 1, signal_to_noise = "gsnr" }',
            "both an error and a signal to noise",
        ),
        (
            '[columns]\nVmag = "Johnson V"\ng = { means = "Johnson V" }',
            "the columns 'Vmag' and 'g' both mean Johnson V",
        ),
    ],
)
def test_a_sheet_that_is_wrong_is_refused(read, sheet, words):
    with pytest.raises(CatalogueError) as caught:
        read(sheet)
    assert words in str(caught.value)
    assert "\n" not in str(caught.value)


def test_an_absent_sheet(tmp_path):
    with pytest.raises(CatalogueError, match="there is no such column sheet"):
        read_sheet(tmp_path / "no.toml")
