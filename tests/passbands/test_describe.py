"""Tables of what is known: whole, with units, and with a source for every figure."""

from __future__ import annotations

import pytest

from starkiln.passbands import band_names, band_table, describe_band

CONTRACT = [
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


def test_all_bands_in_order() -> None:
    table = band_table()
    assert table.colnames == CONTRACT
    assert tuple(table["band"]) == band_names()
    units = {name: str(table[name].unit) for name in CONTRACT if table[name].unit}
    assert units == {
        "pivot": "um",
        "width": "um",
        "vega_zero_point": "Jy",
        "ab_zero_point": "Jy",
        "zero_point_error": "mag",
    }
    assert all(0.005 < error < 0.1 for error in table["zero_point_error"])


@pytest.mark.parametrize("name", band_names())
def test_every_figure_has_a_source(name: str) -> None:
    row = describe_band(name)[0]
    assert row.colnames[: len(CONTRACT)] == CONTRACT
    for key in ("source", "vega_source", "offset_source", "saturation_source"):
        assert len(row[key]) > 8
    assert "curve: " in row["source"]
    assert "zero point: " in row["source"]


def test_figures_of_one_band() -> None:
    # Cohen, Wheaton & Megeath 2003, Table 1: 3.129e-13 W cm-2 um-1, 1594 +- 27.8 Jy.
    row = describe_band("2mass j")[0]
    assert row["vega_zero_flux"] == pytest.approx(3.129e-9, rel=1e-9)
    assert row["zero_point_error"] == pytest.approx(1.0857 * 27.8 / 1594, abs=2e-4)
    assert row["half_maximum_short"] < row["pivot"] < row["half_maximum_long"]
    assert row["shortest"] < row["half_maximum_short"]
