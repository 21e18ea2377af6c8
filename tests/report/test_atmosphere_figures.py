"""Figures of atmospheres: what they draw, and that it is the model's own numbers."""

import numpy as np
import pytest
from matplotlib.figure import Figure

from starkiln.atmospheres import model_atmosphere
from starkiln.errors import InputError
from starkiln.report import (
    atmosphere_spectrum_plot,
    atmosphere_structure_figure,
    colour_temperature_plot,
    image_bytes,
    limb_darkening_plot,
    opacity_plot,
)


@pytest.fixture(scope="module")
def sun():
    return model_atmosphere(5772.0, 4.44)


def line(axes, label):
    return next(drawn for drawn in axes.get_lines() if drawn.get_label() == label)


def test_spectrum_is_drawn_over_the_blackbody(sun):
    axes = atmosphere_spectrum_plot(sun, bands=("Johnson V", "2MASS Ks"))
    x, y = line(axes, "atmosphere").get_data()
    body = line(axes, "blackbody").get_ydata()
    # Both carry sigma T^4 (Stefan and Boltzmann): equal areas over ln lambda.
    assert np.trapezoid(y, np.log(x)) == pytest.approx(np.trapezoid(body, np.log(x)), rel=2e-3)
    assert body.max() == pytest.approx(1.0)
    assert {text.get_text() for text in axes.texts} == {"V", "Ks"}


def test_structure_has_three_panels_on_one_depth(sun):
    figure = atmosphere_structure_figure(sun)
    assert len(figure.axes) == 3
    np.testing.assert_array_equal(figure.axes[0].get_lines()[0].get_ydata(), sun.temperature_k)
    np.testing.assert_array_equal(
        line(figure.axes[1], "light").get_ydata(), sun.radiation_pressure_pa
    )
    np.testing.assert_array_equal(figure.axes[2].get_lines()[0].get_ydata(), sun.gamma)


def test_opacity_shows_the_hminus_gap(sun):
    axes = opacity_plot(sun)
    x, y = line(axes, "all").get_data()
    near = (x > 1.0) & (x < 2.5)
    # The minimum at 1.64 um: John 1988.
    assert x[near][y[near].argmin()] == pytest.approx(1.64, abs=0.03)
    with pytest.raises(InputError, match="outside the model"):
        opacity_plot(sun, tau=1e9)


def test_limb_darkening_is_stronger_in_the_blue(sun):
    axes = limb_darkening_plot(sun)
    blue, infrared = line(axes, "0.45 um").get_ydata(), line(axes, "2.2 um").get_ydata()
    assert blue[0] < 0.5 * infrared[0]
    assert line(axes, "grey").get_ydata()[-1] == 1.0


def test_colours_against_published_relations():
    axes = colour_temperature_plot("Johnson V", "2MASS Ks", observed=[(1.56, 5772.0)])
    labels = [drawn.get_label() for drawn in axes.get_lines()]
    assert "Casagrande 2010, dwarfs" in labels
    assert "Alonso 1999, giants" in labels
    colour, temperature = line(axes, "model, log g 4.4").get_data()
    # The Sun's V - Ks, 1.56 (Casagrande et al. 2012, ApJ 761, 16; from memory).
    assert np.interp(1.56, colour[::-1], temperature[::-1]) == pytest.approx(5772.0, abs=100.0)


def test_axes_of_ones_own_and_an_image(sun):
    own = Figure().subplots()
    assert atmosphere_spectrum_plot(sun, ax=own) is own
    assert image_bytes(atmosphere_structure_figure(sun), "png")[:4] == b"\x89PNG"
