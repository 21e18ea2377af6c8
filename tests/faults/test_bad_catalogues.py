"""Every bad input gets one line that names file, row or line, column, value and remedy."""

import pytest
from astropy.table import Table

from starkiln.errors import CatalogueError
from starkiln.observations import BadRow, Star, read_catalogue

HEAD = "name,Gaia G,e_Gaia G,parallax,e_parallax,2MASS J [mJy],e_2MASS J,l_2MASS J\n"
GOOD = "good,10,0.01,2,0.1,30,1,\n"


@pytest.mark.parametrize(
    ("row", "column", "value", "remedy"),
    [
        ("bad,10,-0.01,2,0.1,30,1,", "e_Gaia G", "-0.01 mag", "leave the cell empty"),
        ("bad,10,0,2,0.1,30,1,", "e_Gaia G", "0 mag", "leave the cell empty"),
        ("bad,10,inf,2,0.1,30,1,", "e_Gaia G", "inf mag", "leave the cell empty"),
        ("bad,10,0.01,2,0.1,30,-1,", "e_2MASS J", "-1 mJy", "leave the cell empty"),
        ("bad,inf,0.01,2,0.1,30,1,", "Gaia G", "infinite magnitude", "leave the cell empty"),
        ("bad,-inf,0.01,2,0.1,30,1,", "Gaia G", "infinite magnitude", "leave the cell empty"),
        ("bad,10,0.01,2,0.1,inf,1,", "2MASS J", "infinite flux", "leave the cell empty"),
        ("bad,-999,0.01,2,0.1,30,1,", "Gaia G", "-999 mag", "missing = [-999]"),
        ("bad,99.99,0.01,2,0.1,30,1,", "Gaia G", "99.99 mag", "missing = [99.99]"),
        ("bad,faint,0.01,2,0.1,30,1,", "Gaia G", "'faint'", 'missing = ["faint"]'),
        ("bad,10,0.01,2,,30,1,", "e_parallax", "2 mas has no error", "give e_parallax"),
        ("bad,10,0.01,2,0,30,1,", "e_parallax", "0 mas", "above zero"),
        ("bad,10,0.01,-999,0.1,30,1,", "parallax", "-999 mas", "missing = [-999]"),
        ("bad,10,0.01,2,0.1,30,1,U", "l_2MASS J", "'U'", "leave it empty"),
        ("bad,10,0.01,2,0.1,-30,1,<", "2MASS J", "-30 mJy", "above zero"),
        ("bad,10,0.01,2,0.1,<30,1,>", "2MASS J", "'<' stands before the number and '>'", ""),
        ("bad,10_1,0.01,2,0.1,30,1,", "Gaia G", "'10_1' is not a number", "missing"),
        ("bad,,,2,0.1,,,", "no band can be used", "all are empty", ""),
        ("bad,10,,2,0.1,,,", "no band can be used", "Gaia G: no error is given", ""),
        ("bad,>10,,2,0.1,,,", "no band can be used", "only limits", ""),
    ],
)
def test_a_bad_row_is_told_and_the_others_are_read(tmp_path, row, column, value, remedy):
    path = tmp_path / "stars.csv"
    path.write_text(HEAD + GOOD + row + "\n" + GOOD)
    first, bad, last = read_catalogue(path).rows()
    assert isinstance(first, Star)
    assert isinstance(last, Star)
    assert isinstance(bad, BadRow)
    assert (bad.name, bad.row) == ("bad", 2)
    for words in ("stars.csv, row 2", column, value, remedy):
        assert words in bad.message
    assert "\n" not in bad.message


def test_a_row_with_two_faults_tells_both(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text(HEAD + "bad,inf,0.01,2,,30,1,\n")
    (bad,) = read_catalogue(path).rows()
    assert "infinite magnitude" in bad.message
    assert "has no error" in bad.message


def test_both_parallax_and_distance(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text("name,Gaia G,e_Gaia G,parallax,e_parallax,distance,e_distance\na,9,1,2,1,3,1\n")
    (bad,) = read_catalogue(path).rows()
    for words in ("row 1", "'distance'", "3 pc", "2 mas", 'distance_from = "parallax"'):
        assert words in bad.message


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (HEAD + GOOD + "a,10\n", ["line 3", "found 2 cells", "has 8", "leave an empty cell"]),
        (HEAD + GOOD[:-1] + "7,8\n", ["line 2", "found 9 cells", "has 8"]),
        ("# c\n\n" + HEAD + "# c\n" + GOOD + "\na,10\n", ["line 7", "found 2 cells"]),
        ("", ["the file is empty"]),
        (" \n\n", ["the file is empty"]),
        ("# only a comment\n", ["only comments"]),
        (HEAD, ["headings but no rows"]),
        ("a,10,0.01\nb,11,0.01\n", ["line 1", "numbers, not headings", "2MASS J, e_2MASS J"]),
        ("name,Gaia G\na," + "9" * 140_000 + "\n", ["line 2 cannot be read", "field larger"]),
        ("Dear all,\nno table\nhere, I fear\n", ["line 3"]),
        ("This is prose\nand no table at all\n", ["does not look like a table", "line 2"]),
        ("<!DOCTYPE html>\n<html></html>", ["a web page, not a table"]),
        ('{"name": "a"}', ["a JSON file, not a table"]),
        ("name,Gaia G,e_Gaia G,Gaia G\na,1,2,3\n", ["'Gaia G' stands over columns 2 and 4"]),
        (
            "name,Gaia G,e_Gaia G,Gaia X\na,10,0.1,10\n",
            ["'Gaia X' looks like a band", "nearest: Gaia G", 'leave_out = ["Gaia X"]'],
        ),
        (
            "name,Gaia G,e_Gaia G,e_2MAS J\na,10,0.1,10\n",
            ["'e_2MAS J' looks like a band", '"e_2MAS J" = "e_2MASS J"'],
        ),
        (
            "name,Gaia G [foo],e_Gaia G\na,10,0.1\n",
            ["column 'Gaia G [foo]'", "unit 'foo' is not known", 'unit = "mag"'],
        ),
        (
            "name,Gaia G [K],e_Gaia G\na,10,0.1\n",
            ["column 'Gaia G [K]'", "unit 'K' is neither a magnitude nor a flux density"],
        ),
        (
            "name,Gaia G [mJy],e_Gaia G [mag]\na,10,0.1\n",
            ["'e_Gaia G [mag]', has unit 'mag'", "'mJy'"],
        ),
        (
            "name,Gaia G,e_Gaia G,parallax [pc],e_parallax\na,10,0.1,1,1\n",
            ["column 'parallax [pc]'", "'pc' cannot be converted to mas"],
        ),
        (
            "name,Gaia G,e_Gaia G,parallax\na,10,0.1,1\n",
            ["column 'parallax'", "needs an error", "e_parallax", 'leave_out = ["parallax"]'],
        ),
        (
            "name,Vmag,e_Vmag\na,10,0.1\n",
            ["no usable band", "('Vmag' may be Johnson V)", "starkiln inspect", "proposes"],
        ),
        ("name,Gaia G\na,10\n", ["no usable band among the headings (Gaia G)"]),
        ("name,Gaia G,e_Gaia G,gaia_g\na,1,2,3\n", ["'Gaia G' and 'gaia_g' both mean Gaia G"]),
    ],
)
def test_a_bad_file_is_told_in_one_line(tmp_path, content, words):
    path = tmp_path / "stars.csv"
    path.write_text(content)
    with pytest.raises(CatalogueError) as caught:
        read_catalogue(path)
    assert caught.value.exit_code == 2
    message = str(caught.value)
    assert str(path) in message
    assert "\n" not in message
    for part in words:
        assert part in message


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (bytes(range(256)) * 8, "is not a table that can be read; give ECSV, CSV, FITS"),
        (b"PAR1" + bytes(90), "Parquet"),
        (b"SIMPLE  =                    T" + b" " * 50, "the FITS table cannot be read"),
        (b'<?xml version="1.0"?><VOTABLE><RESOURCE><TABLE>', "the VOTable cannot be read"),
        (b'<?xml version="1.0"?><VOTABLE><RESOURCE/></VOTABLE>', "the VOTable cannot be read"),
        (b"\x1f\x8b\x08\x00broken", "the gzip file is damaged"),
    ],
)
def test_a_damaged_file(tmp_path, content, words):
    path = tmp_path / "stars.dat"
    path.write_bytes(content)
    with pytest.raises(CatalogueError, match=words):
        read_catalogue(path)


def test_a_fits_file_cut_short(tmp_path):
    path = tmp_path / "stars.fits"
    Table({"name": ["a"] * 900, "Gaia G": [1.0] * 900, "e_Gaia G": [1.0] * 900}).write(path)
    path.write_bytes(path.read_bytes()[:9000])
    with pytest.raises(CatalogueError, match="the FITS table cannot be read"):
        read_catalogue(path)


def test_a_fits_image_is_no_table(tmp_path):
    import numpy as np
    from astropy.io import fits

    path = tmp_path / "image.fits"
    fits.PrimaryHDU(np.zeros((4, 4))).writeto(path)
    with pytest.raises(CatalogueError, match="holds no table, only images"):
        read_catalogue(path)


def test_absent_and_folder(tmp_path):
    with pytest.raises(CatalogueError, match="there is no such file"):
        read_catalogue(tmp_path / "no.csv")
    with pytest.raises(CatalogueError, match="is a folder; give the catalogue file"):
        read_catalogue(tmp_path)


def test_an_array_in_a_cell(tmp_path):
    path = tmp_path / "stars.fits"
    table = Table({"name": ["a"], "Gaia G": [[1.0, 2.0]], "e_Gaia G": [[1.0, 2.0]]})
    table.write(path)
    with pytest.raises(CatalogueError, match="holds an array in every row"):
        read_catalogue(path)


def test_duplicate_names_are_allowed_and_warned_of(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text(HEAD + GOOD + GOOD + "b" + GOOD[4:])
    catalogue = read_catalogue(path)
    assert [star.name for star in catalogue.rows()] == ["good", "good", "b"]
    assert "the name 'good' stands in rows 1 and 2" in catalogue.warnings[0]


def test_a_magnitude_without_any_error_is_warned_of(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text("name,Gaia G,2MASS J,e_2MASS J\na,10,9,0.1\n")
    catalogue = read_catalogue(path)
    assert catalogue.bands == ("2MASS J",)
    assert "no errors are given for Gaia G, which is not used" in catalogue.warnings[0]


def test_the_first_of_several_faults_counts_the_others(tmp_path):
    path = tmp_path / "stars.csv"
    path.write_text("name,Gaia X,e_Gaia X,Gaia Y\na,1,2,3\n")
    with pytest.raises(CatalogueError, match="and 2 more; `starkiln inspect` lists them"):
        read_catalogue(path)
