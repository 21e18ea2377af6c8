"""Figures of light: what is drawn says what the functions say, in every form."""

from functools import partial

import matplotlib as mpl
import numpy as np
import pytest
from astropy import units as u

from starkiln import photons
from starkiln.errors import InputError
from starkiln.forces import star_field
from starkiln.report._light import light_pressure_plot, spectra_plot

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


@pytest.fixture(autouse=True)
def _no_display():
    with mpl.rc_context():
        yield


def rendered(axes):
    axes.figure.canvas.draw()
    return axes


@pytest.mark.parametrize("variable", photons.VARIABLES)
@pytest.mark.parametrize("form", ["radiance", "photon_density"])
def test_lines_are_the_law_and_both_limits(variable, form):
    axes = rendered(spectra_plot([3000.0, 9000.0], variable=variable, form=form))
    lines = axes.get_lines()
    assert len(lines) == 6
    by_label = {line.get_label(): line for line in lines}
    assert {"9,000 K", "3,000 K", "Wien", "Rayleigh-Jeans"} <= set(by_label)
    hot = by_label["9,000 K"]
    unit = u.Unit(
        {"wavelength": "um", "frequency": "THz", "wavenumber": "cm-1", "energy": "eV"}.get(
            variable, "rad / ps"
        )
    )
    exact = photons.planck(hot.get_xdata() * unit, 9000.0, variable=variable, form=form)
    ratio = exact.value / hot.get_ydata()
    np.testing.assert_allclose(ratio, ratio[0], rtol=1e-12)
    wien, jeans = by_label["Wien"].get_ydata(), by_label["Rayleigh-Jeans"].get_ydata()
    assert np.all(wien <= hot.get_ydata() * (1 + 1e-12))
    assert np.all(jeans >= hot.get_ydata() * (1 - 1e-12))


def test_labels_carry_units_and_colours_are_planckian():
    axes = rendered(spectra_plot([3000, 12000] * u.K, at_unit="nm", unit="W / (m2 sr nm)"))
    assert "nm" in axes.get_xlabel()
    assert "nm" in axes.get_ylabel()
    colours = {line.get_label(): line.get_color() for line in axes.get_lines()}
    np.testing.assert_allclose(colours["12,000 K"], photons.srgb(12000.0))
    texts = [text.get_text() for text in axes.texts]
    assert {"visible", "3,000 K", "12,000 K"} <= set(texts)
    legend = [text.get_text() for text in axes.get_legend().get_texts()]
    assert legend == ["12,000 K", "3,000 K", "Wien", "Rayleigh-Jeans"]


@pytest.mark.parametrize("variable", photons.VARIABLES)
def test_visible_range_is_marked_where_it_is(variable):
    axes = rendered(spectra_plot(5772.0, variable=variable))
    patch = next(p for p in axes.patches if p.get_width() > 0)
    low, high = patch.get_x(), patch.get_x() + patch.get_width()
    unit = {"wavelength": "um", "frequency": "THz", "wavenumber": "cm-1", "energy": "eV"}
    if variable == "angular_frequency":
        ends = (np.array([760, 380]) * u.nm).to(u.THz, u.spectral()).value * 2 * np.pi
    else:
        ends = (np.array([760, 380]) * u.nm).to_value(unit[variable], u.spectral())
    np.testing.assert_allclose([low, high], np.sort(ends), rtol=1e-12)


def test_no_visible_range_far_from_it():
    axes = rendered(spectra_plot(2.7255, variable="frequency", at_unit="GHz"))
    assert not axes.patches


def test_draws_on_given_axes():
    from matplotlib.figure import Figure

    axes = Figure().subplots()
    assert spectra_plot(300.0, ax=axes, limits=False) is axes
    assert len(axes.get_lines()) == 1


def test_pressure_against_distance():
    axes = rendered(light_pressure_plot(1.0, 1.0, farthest=5.0))
    lines = {line.get_label(): line for line in axes.get_lines()}
    black = lines["black plate"]
    field = star_field(1.0, 1.0, black.get_xdata())
    np.testing.assert_allclose(black.get_ydata(), field.radial_pressure.value, rtol=1e-12)
    np.testing.assert_allclose(lines["mirror"].get_ydata(), 2 * black.get_ydata(), rtol=1e-12)
    # At the surface a mirror feels the isotropic pressure a T^4 / 3.
    inside = next(line for label, line in lines.items() if "isotropic" in label)
    assert inside.get_ydata()[0] == approx(lines["mirror"].get_ydata()[0], rel=1e-9)
    assert "[Pa]" in axes.get_ylabel()
    assert "[au]" in axes.get_xlabel()


BAD = [
    (lambda: spectra_plot([300.0, 0.0]), "temperature = 0 K"),
    (lambda: spectra_plot(300.0, form="glow"), "choose one of"),
    (lambda: spectra_plot(300.0, at_unit="kg"), "'kg'"),
    (lambda: light_pressure_plot(1.0, 1.0, farthest=0.001), "farthest = 0.001 au"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
