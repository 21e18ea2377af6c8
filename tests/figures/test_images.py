"""Figures against reference images.

Tolerance: 5 grey levels of 255, root mean square over the picture at 80 dots per inch.
Another release of matplotlib or FreeType moves letters by parts of a pixel and stays
below it; a panel, a band or a row of labels that is lost does not (see the last test).
STARKILN_MAKE_REFERENCES=1 draws the references anew: look at them before they are kept.
"""

import dataclasses
import os
from pathlib import Path

import numpy as np
import pytest
from matplotlib.testing.compare import compare_images
from tests.report.fake_run import FakeRun

from starkiln.report import (
    autocorrelation_plot,
    chain_figure,
    corner_figure,
    hr_plot,
    misfit_plot,
    predictive_plot,
    prior_figure,
    run_view,
    sed_figure,
    style,
    temperature_figure,
)

TOLERANCE = 5.0
REFERENCE = Path(__file__).parent / "reference"
RUN = FakeRun([f"Kiln {n}" for n in range(1, 13)], np.geomspace(3400, 25000, 12))


def chained():
    rng = np.random.default_rng(3)
    chain = rng.standard_normal((400, 32, 2)).cumsum(axis=0) / 20
    return dataclasses.replace(
        run_view(RUN, 5), chain=chain, chain_names=("ln_temperature", "av"), burn_in=100
    )


def temperatures():
    known = np.asarray(RUN.results["temperature"].filled(np.nan)) * np.linspace(0.95, 1.05, 12)
    return temperature_figure(RUN.results, known, np.full(12, 60.0))


FIGURES = {
    "sed": lambda: sed_figure(run_view(RUN, 5)),
    "sed_two": lambda: sed_figure(run_view(RUN, 9), width="two"),
    "corner": lambda: corner_figure(run_view(RUN, 5)),
    "prior": lambda: prior_figure(run_view(RUN, 5)),
    "predictive": lambda: predictive_plot(run_view(RUN, 5)),
    "chain": lambda: chain_figure(chained()),
    "autocorrelation": lambda: autocorrelation_plot(chained()),
    "hr": lambda: hr_plot(RUN),
    "misfit": lambda: misfit_plot(RUN),
    "temperature": temperatures,
}


def draw(made, path):
    figure = getattr(made, "figure", made)
    with style():
        figure.savefig(path, dpi=80, metadata={"Software": None})


@pytest.mark.parametrize("name", FIGURES)
def test_figure_looks_as_it_did(name, tmp_path):
    reference = REFERENCE / f"{name}.png"
    if os.environ.get("STARKILN_MAKE_REFERENCES"):
        draw(FIGURES[name](), reference)
    drawn = tmp_path / f"{name}.png"
    draw(FIGURES[name](), drawn)
    assert compare_images(reference, drawn, TOLERANCE) is None


@pytest.mark.parametrize(
    ("name", "lose"),
    [
        ("sed", lambda figure: figure.axes[2].remove()),
        ("sed", lambda figure: figure.axes[0].remove()),
        (
            "hr",
            lambda ax: (
                [patch.remove() for patch in list(ax.patches)] + [ax.set_title("", loc="left")]
            ),
        ),
        ("misfit", lambda ax: ax.set_xticks([])),
    ],
)
def test_a_lost_part_is_seen(name, lose, tmp_path):
    made = FIGURES[name]()
    lose(made)
    draw(made, tmp_path / "lost.png")
    assert compare_images(REFERENCE / f"{name}.png", tmp_path / "lost.png", TOLERANCE) is not None
