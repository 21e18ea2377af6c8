"""Whatever a file holds, it is read or refused: no other error comes out."""

import tomllib

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from starkiln.errors import CatalogueError
from starkiln.observations import BadRow, Star, survey_catalogue

CELLS = st.one_of(
    st.sampled_from(["", "10", "-999", "inf", "nan", "<10", ">=9", "--", "0.01", "1e400", "10,5"]),
    st.text(max_size=6),
    st.floats().map(str),
)
HEADINGS = st.one_of(
    st.sampled_from(
        ["name", "Gaia G", "e_Gaia G", "l_Gaia G", "2MASS J [mJy]", "e_2MASS J", "parallax"]
    ),
    st.sampled_from(["e_parallax", "distance", "e_distance", "av", "V", "eV", "j_m", "j_msigcom"]),
    st.text(max_size=8),
)
SEPARATORS = st.sampled_from([",", ";", "\t", " ", "|"])
QUIET = settings(
    deadline=None, max_examples=40, suppress_health_check=[HealthCheck.function_scoped_fixture]
)


def look_at(path):
    catalogue, message = None, ""
    try:
        catalogue = survey_catalogue(path)
    except CatalogueError as error:
        message = str(error)
    assert "\n" not in message
    if catalogue is None:
        return
    tomllib.loads(catalogue.proposal())
    catalogue.filled()
    rows = catalogue.rows()
    assert len(rows) == len(catalogue)
    for row in rows:
        assert isinstance(row, Star | BadRow)
        if isinstance(row, Star):
            assert len(row.fingerprint()) == 32


@given(st.lists(HEADINGS, min_size=1, max_size=7), st.data(), SEPARATORS)
@QUIET
def test_any_table_of_text(tmp_path, headings, data, separator):
    row = st.lists(CELLS, min_size=len(headings), max_size=len(headings))
    rows = data.draw(st.lists(row, max_size=4))
    lines = [separator.join(cells) for cells in [headings, *rows]]
    path = tmp_path / "a.csv"
    path.write_bytes("\n".join(lines).encode("utf-8", errors="surrogatepass"))
    look_at(path)


@given(st.one_of(st.binary(max_size=300), st.text(max_size=300).map(str.encode)))
@QUIET
def test_any_bytes(tmp_path, content):
    path = tmp_path / "a.dat"
    path.write_bytes(content)
    look_at(path)


@pytest.mark.parametrize("style", ["fits", "vot", "ecsv"])
@given(data=st.data())
@QUIET
def test_a_damaged_file_of_a_format(tmp_path, style, data, sound):
    content = bytearray(sound[style])
    for _ in range(data.draw(st.integers(1, 4))):
        content[data.draw(st.integers(0, len(content) - 1))] = data.draw(st.integers(0, 255))
    path = tmp_path / f"a.{style}"
    path.write_bytes(bytes(content[: data.draw(st.integers(1, len(content)))]))
    look_at(path)


@pytest.fixture(scope="module")
def sound():
    from astropy.table import Table

    from starkiln.store import table_bytes

    table = Table({"name": ["a", "b"], "Gaia G": [10.0, 11.0], "e_Gaia G": [0.1, 0.2]})
    table["Gaia G"].unit = "mag"
    return {
        "fits": table_bytes(table, "fits"),
        "vot": table_bytes(table, "votable"),
        "ecsv": table_bytes(table, "ecsv"),
    }
