"""Files of figures: the same bytes each time, fonts inside, whatever the reader's settings."""

import pytest
from tests.report.fake_run import FakeRun

from starkiln.errors import InputError
from starkiln.report import corner_figure, image_bytes, run_view, sed_figure


@pytest.fixture(scope="module")
def run():
    return FakeRun(["Kiln 1", "Kiln 2", "Kiln 3"], [5800, 9000, 20000])


@pytest.mark.parametrize("image", ["pdf", "svg", "png"])
@pytest.mark.parametrize("draw", [sed_figure, corner_figure])
def test_the_same_figure_has_the_same_bytes(run, draw, image):
    view = run_view(run, 1)
    assert image_bytes(draw(view), image) == image_bytes(draw(view), image)


def test_fonts_are_embedded_as_outlines(run):
    """PDF 32000-1, table 122: a TrueType program is embedded under /FontFile2."""
    pdf = image_bytes(sed_figure(run_view(run, 1)), "pdf")
    assert b"/FontFile2" in pdf
    assert b"/Type3" not in pdf
    assert b"<text" not in image_bytes(sed_figure(run_view(run, 1)), "svg")


def test_readers_own_settings_do_not_matter(run):
    """A reader's matplotlibrc with LaTeX switched on needs no LaTeX here."""
    import matplotlib as mpl

    view = run_view(run, 1)
    plain = image_bytes(sed_figure(view), "svg")
    with mpl.rc_context({"text.usetex": True, "lines.linewidth": 9, "font.size": 30}):
        assert image_bytes(sed_figure(view), "svg") == plain


def test_unknown_width_and_image_are_refused(run):
    view = run_view(run, 1)
    with pytest.raises(InputError, match="give one, two or inches"):
        sed_figure(view, width="three")
    with pytest.raises(InputError, match=r"0\.2 in is out of bounds"):
        sed_figure(view, width=0.2)
    with pytest.raises(InputError, match="one of pdf, png, svg"):
        image_bytes(sed_figure(view), "gif")
