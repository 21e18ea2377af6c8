"""Plain columns of a table for commands that need no photometry."""

import math

import pytest

from starkiln.errors import CatalogueError
from starkiln.observations import read_columns

UNITS = {"name": "", "radius": "solRad", "temperature": "K"}


def test_units_are_converted_and_gaps_are_nan(tmp_path):
    path = tmp_path / "a.csv"
    path.write_text("Name,Radius,temperature\n,km,K\n007,695700,5772\nb,--,\n")
    found = read_columns(path, UNITS, required=("radius",))
    assert found["name"] == ["007", "b"]
    assert found["radius"][0] == pytest.approx(1.0)
    assert math.isnan(found["radius"][1])
    assert math.isnan(found["temperature"][1])


@pytest.mark.parametrize(
    ("content", "words"),
    [
        ("name,radus\na,1\n", "no column 'radius'; nearest: radus"),
        ("radius,temperature\n1,hot\n2,3\n", "row 1, column 'temperature': 'hot' is not a number"),
        ("radius,temperature\nkm,pc\n1,2\n", "column 'temperature': unit 'pc' cannot be converted"),
    ],
)
def test_what_cannot_be_used_is_told(tmp_path, content, words):
    path = tmp_path / "a.csv"
    path.write_text(content)
    with pytest.raises(CatalogueError) as caught:
        read_columns(path, UNITS, required=("radius",))
    assert words in str(caught.value)
    assert "a.csv" in str(caught.value)
