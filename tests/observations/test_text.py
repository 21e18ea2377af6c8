"""Text tables as spreadsheets, archives and people write them."""

import gzip

import pytest
from astropy.table import Table

from starkiln.observations import read_catalogue, survey_catalogue

PLAIN = "name,Gaia G,e_Gaia G\na,10.25,0.01\nb,11,0.02\n"


def stars_of(path, content, **options):
    path.write_bytes(content if isinstance(content, bytes) else content.encode())
    return read_catalogue(path, **options).rows()


@pytest.fixture
def expected(tmp_path):
    return stars_of(tmp_path / "plain.csv", PLAIN)


MARKDOWN = """\
| name | Gaia G | e_Gaia G |
|------|-------:|---------:|
| a    |  10.25 |     0.01 |
| b    |     11 |     0.02 |
"""
QUERY = """\
 name | gaia_g | e_gaia_g
------+--------+----------
 a    |  10.25 |     0.01
 b    |     11 |     0.02
"""
ARCHIVE = """\
#
#  a query's comment; with, separators
name\tgaia_g\te_gaia_g\t

----\t------\t--------\t
a\t10.25\t0.01\t
b\t11\t0.02\t
"""


@pytest.mark.parametrize(
    "content",
    [
        PLAIN.encode("utf-8-sig"),
        PLAIN.replace("\n", "\r\n"),
        PLAIN.replace("\n", "\r"),
        PLAIN.encode("utf-16"),
        gzip.compress(PLAIN.encode()),
        PLAIN.replace(",", ";").replace(".", ","),
        "sep=;\n" + PLAIN.replace(",", ";"),
        PLAIN.replace(",", "\t"),
        PLAIN.replace(",", " , "),
        PLAIN.replace("\n", ",\n"),
        PLAIN.replace("0.02\n", "0.02,,\n"),
        PLAIN + ",,\n,,\n",
        "# title\n\n" + PLAIN.replace("b,", "\n# c,1,2\nb,") + "# end\n",
        PLAIN.replace("Gaia G", "gaia_g").replace(",", "   "),
        "# of Gaia\n#  name  gaia_g  e_gaia_g\na 10.25 0.01\nb\t11  0.02\n",
        ",name,Gaia G,e_Gaia G\n0,a,10.25,0.01\n1,b,11,0.02\n",
        PLAIN.replace("name", '"name"').replace("b,", '"b",'),
        "name,Gaia G,e_Gaia G\n,mag,mag\na,10.25,0.01\nb,11,0.02\n",
        "NAME,GAIA-G (mag),E_Gaia.G (mmag)\na,10.25,10\nb,11,20\n",
        MARKDOWN,
        QUERY,
        ARCHIVE,
    ],
)
def test_the_same_stars_however_they_are_written(tmp_path, expected, content):
    assert stars_of(tmp_path / "other.txt", content) == expected


def test_a_row_of_marks_for_missing_is_no_rule(tmp_path):
    good, bad = stars_of(tmp_path / "a.txt", "Gaia_G e_Gaia_G\n10 0.1\n--- ---\n")
    assert good.bands == ("Gaia G",)
    assert "row 2, no band can be used" in bad.message


def test_names_keep_zeros_commas_and_greek(tmp_path):
    content = 'name,Gaia G,e_Gaia G\n007,10,0.01\n"b, c",10,0.01\n\u03b1 Adrae,10,0.01\n'
    stars = stars_of(tmp_path / "a.csv", content)
    assert [star.name for star in stars] == ["007", "b, c", "\u03b1 Adrae"]


def test_a_file_that_is_not_utf_8_is_read_and_told(tmp_path):
    path = tmp_path / "a.csv"
    path.write_bytes("name,Gaia G,e_Gaia G\n\u00c9toile,10,0.01\n".encode("latin-1"))
    catalogue = read_catalogue(path)
    assert catalogue.rows()[0].name == "\u00c9toile"
    assert any("Latin-1" in warning for warning in catalogue.warnings)


def test_units_in_a_line_below_the_heading(tmp_path):
    content = (
        "name,2MASS J,e_2MASS J,parallax,e_parallax\n,mJy,uJy,arcsec,mas\na,30,600,0.002,0.1\n"
    )
    (star,) = stars_of(tmp_path / "a.csv", content)
    assert star.measurements[0].fractional_error == pytest.approx(0.02)
    assert star.parallax_mas == pytest.approx(2.0)
    assert star.e_parallax_mas == pytest.approx(0.1)


@pytest.mark.parametrize("style", ["mrt", "ipac"])
def test_formats_of_the_archives(tmp_path, expected, style):
    # Both files are written by astropy.
    table = Table({"name": ["a", "b"], "Gaia_G": [10.25, 11.0], "e_Gaia_G": [0.01, 0.02]})
    table["Gaia_G"].unit = table["e_Gaia_G"].unit = "mag"
    path = tmp_path / "table.txt"
    table.write(path, format=f"ascii.{style}")
    catalogue = read_catalogue(path)
    assert catalogue.format == {"mrt": "CDS", "ipac": "IPAC"}[style]
    assert catalogue.rows() == expected


def test_rows_without_names_are_called_by_their_place_but_not_told_apart_by_it(tmp_path):
    catalogue = survey_catalogue(_write(tmp_path, "Gaia G,e_Gaia G\n10,0.01\n10,0.01\n"))
    first, second = catalogue.rows()
    assert (first.name, second.name) == ("row 1", "row 2")
    assert first.fingerprint() == second.fingerprint()
    assert "no column of names" in catalogue.warnings[0]


def test_one_bad_cell_of_ecsv_spoils_its_row_alone(tmp_path):
    head = (
        "# %ECSV 1.0\n# ---\n# datatype:\n# - {name: name, datatype: string}\n"
        "# - {name: 2MASS J, datatype: float64, unit: mJy}\n"
        "# - {name: e_2MASS J, datatype: float64, unit: uJy}\n# schema: astropy-2.0\n"
        'name "2MASS J" "e_2MASS J"\n'
    )
    catalogue = read_catalogue(_write(tmp_path, head + 'a 10 500\n"b c" -1x 500\nc 10 ""\n'))
    good, bad, empty = catalogue.rows()
    assert good.measurements[0].fractional_error == pytest.approx(0.05)
    assert "row 2, column '2MASS J': '-1x' is not a number" in bad.message
    assert "no error is given" in empty.message


def _write(folder, content):
    path = folder / "catalogue.txt"
    path.write_text(content)
    return path
