"""Tables on standard output: aligned, with units, and no more digits than are known."""

import io

import numpy as np
import pytest
from astropy.table import MaskedColumn, Table

from starkiln.cli._tables import PRINT_FORMATS, print_table, table_text


@pytest.fixture
def table():
    table = Table()
    table["name"] = ["a", "longer"]
    table["temperature"] = MaskedColumn([5771.66, 30000.0], unit="K")
    table["temperature_lo"] = MaskedColumn([5700.3, 28000.0], unit="K")
    table["temperature_hi"] = MaskedColumn([5840.3, 32000.0], unit="K")
    table["av"] = MaskedColumn([0.3, 0.0], mask=[False, True], unit="mag")
    table["e_av"] = [0.05, np.nan]
    table["n"] = MaskedColumn([1, 2], mask=[False, True])
    return table


def test_text_is_aligned_and_honest(table):
    lines = table_text(table).splitlines()
    assert lines[0].split() == table.colnames
    assert lines[1].split() == ["K", "K", "K", "mag"]
    assert lines[3].split() == ["a", "5772", "5700", "5840", "0.300", "0.050", "1"]
    assert lines[4].split() == ["longer", "30000", "28000", "32000", "-", "-", "-"]
    assert len({len(line) for line in lines[2:]}) == 1


@pytest.mark.parametrize(
    ("value", "error", "text"),
    [
        (5771.66, 70.0, "5772"),
        (123456.0, 7000.0, "123500"),
        (0.0123456, 0.0005, "0.01235"),
        (1.23456e-12, 2e-14, "1.235e-12"),
        (-0.3, 0.05, "-0.300"),
        (0.999998, np.nan, "0.999998"),
        (3.0e26, np.nan, "3e+26"),
        (np.nan, 0.1, "-"),
    ],
)
def test_digits_follow_the_error(value, error, text):
    table = Table({"x": [value], "e_x": [error]})
    assert table_text(table).splitlines()[-1].split()[0] == text


def test_a_columns_own_format_goes_first():
    table = Table({"x": [1.23456], "e_x": [0.1]})
    table["x"].format = ".4f"
    assert table_text(table).splitlines()[-1].split() == ["1.2346", "0.10"]


def test_an_empty_table_prints_its_headings(table):
    assert table_text(table[:0]).splitlines()[0].split() == table.colnames


@pytest.mark.parametrize("style", PRINT_FORMATS[1:])
def test_every_format_reaches_standard_output(table, style, capsysbinary):
    print_table(table, style)
    reader = {"ecsv": "ascii.ecsv", "csv": "ascii.csv"}.get(style, style)
    back = Table.read(io.BytesIO(capsysbinary.readouterr().out), format=reader)
    assert len(back) == 2
    assert list(back["temperature"]) == [5771.66, 30000.0]
