"""Ticks: plain round numbers, few enough for the axis."""

import pytest
from matplotlib.figure import Figure

from starkiln.report._ticks import round_ticks


@pytest.mark.parametrize(
    ("limits", "marks"),
    [
        ((0.3, 6.0), ["0.3", "0.5", "1", "2", "3", "5"]),
        ((0.15, 30.0), ["0.2", "0.5", "1", "2", "5", "10", "20"]),
        ((2800, 34000), ["3000", "5000", "10000", "20000", "30000"]),
        ((4500, 7000), ["5000", "6000", "7000"]),
        ((0.01, 1000.0), ["0.01", "0.1", "1", "10", "100", "1000"]),
        ((1.05, 1.45), ["1.1", "1.2", "1.3", "1.4"]),
    ],
)
def test_marks(limits, marks):
    ax = Figure().subplots()
    ax.set(xscale="log", xlim=limits)
    round_ticks(ax.xaxis, limits)
    ax.figure.draw_without_rendering()
    assert [text.get_text() for text in ax.get_xticklabels()] == marks
