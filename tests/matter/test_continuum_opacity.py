"""Continuous opacity, source by source, against published curves and identities."""

import numpy as np
import pytest
from scipy.integrate import quad

from starkiln.matter import (
    ABSORPTION_SOURCES,
    LINE_HAZE,
    SCATTERING_SOURCES,
    ContinuumOpacity,
    HydrogenLines,
    bound_free_edges,
    hminus_bound_free,
    hminus_free_free,
    line_wavelength,
    solve_ionisation,
)


def gas(temperature=5772.0, pressure=1e4, feh=0.0):
    return solve_ionisation(np.array([pressure]), np.array([temperature]), feh=feh)


def test_hminus_bound_free_against_wishart():
    # Gray, The Observation and Analysis of Stellar Photospheres, eq. 8.11: a polynomial through
    # Wishart 1979, MNRAS 187, 59P, wavelength in Angstrom, 1e-18 cm2 (from memory).
    angstrom = np.linspace(2500.0, 15000.0, 26)
    fit = (1.99654, -1.18267e-5, 2.64243e-6, -4.40524e-10, 3.23992e-14, -1.39568e-18, 2.78701e-23)
    want = np.polynomial.polynomial.polyval(angstrom, fit) * 1e-22
    np.testing.assert_allclose(hminus_bound_free(angstrom * 1e-10), want, rtol=0.03)


def test_hminus_bound_free_peak_and_threshold():
    wavelength = np.linspace(0.4e-6, 1.7e-6, 1301)
    sigma = hminus_bound_free(wavelength)
    # Peak 3.9e-17 cm2 (to two digits) near 0.85 um: John 1988, Figure 1.
    assert sigma.max() == pytest.approx(3.95e-21, rel=0.02)
    assert wavelength[sigma.argmax()] == pytest.approx(0.85e-6, abs=0.03e-6)
    assert not sigma[wavelength > 1.6419e-6].any()


@pytest.mark.parametrize("theta", [0.6, 0.8, 1.0, 1.4])
def test_hminus_free_free_against_bell_and_berrington(theta):
    # Gray, eq. 8.13: a polynomial through Bell & Berrington 1987, J. Phys. B 20, 801, wavelength
    # in Angstrom, cm4/dyn (from memory). Two fits of the same table, each good to 1-2 per cent.
    x = np.log10(np.array([2600.0, 3400.0, 5000.0, 1e4, 2e4, 5e4, 1e5]))
    f0 = -2.2763 - 1.6850 * x + 0.76661 * x**2 - 0.053346 * x**3
    f1 = 15.2827 - 9.2846 * x + 1.99381 * x**2 - 0.142631 * x**3
    f2 = -197.789 + 190.266 * x - 67.9775 * x**2 + 10.6913 * x**3 - 0.625151 * x**4
    log = np.log10(theta)
    want = 10.0 ** (-26.0 + f0 + f1 * log + f2 * log**2)
    powers, values = hminus_free_free(10.0**x * 1e-10)
    np.testing.assert_allclose((theta**powers) @ values * 1e3, want, rtol=0.04)


def test_sources_are_named_cited_and_sum_up():
    wavelength = np.geomspace(0.03e-6, 30e-6, 60)
    opacity = ContinuumOpacity(wavelength)
    state = gas()
    sources = opacity.absorption_sources(state)
    assert set(sources) == set(ABSORPTION_SOURCES)
    assert set(opacity.scattering_sources(state)) == set(SCATTERING_SOURCES)
    for name, values in sources.items():
        assert values.shape == (1, 60), name
        assert np.all(values >= 0.0), name
    np.testing.assert_allclose(opacity.absorption(state), sum(sources.values()))


def test_hminus_rules_the_sun_and_hydrogen_the_a_stars():
    # Gray, The Observation and Analysis of Stellar Photospheres, Figures 8.5: at 5143 K
    # H- dominates at 0.5 um; at 11572 K it is the bound-free absorption of hydrogen.
    opacity = ContinuumOpacity(np.array([0.5e-6]))
    sun = {k: v[0, 0] for k, v in opacity.absorption_sources(gas()).items()}
    hot = {k: v[0, 0] for k, v in opacity.absorption_sources(gas(11572.0, 100.0)).items()}
    assert max(sun, key=sun.get) == "H- bound-free"
    assert max(hot, key=hot.get) == "H bound-free"


def test_hminus_opacity_has_its_minimum_at_the_threshold():
    wavelength = np.linspace(1.3e-6, 2.0e-6, 141)
    total = ContinuumOpacity(wavelength).absorption(gas())[0]
    assert wavelength[total.argmin()] == pytest.approx(1.64e-6, abs=0.02e-6)


def test_electrons_scatter_with_thomsons_cross_section():
    state = gas(30000.0, 100.0)
    got = ContinuumOpacity(np.array([0.5e-6])).scattering_sources(state)["electrons"][0, 0]
    # 0.2 (1 + X) cm2/g for a fully ionised gas, here X = 0.735 (helium once or twice ionised).
    assert got / state.density[0] * 10.0 == pytest.approx(0.2 * (1 + 0.735), rel=0.09)
    assert got == pytest.approx(6.6524587e-29 * state.electron[0])


def test_levels_above_the_ninth_join_on():
    # The integral for n >= 10 is Unsoeld's; a plain sum to n = 200 must agree.
    state = gas(9000.0, 50.0)
    wavelength = np.array([0.3e-6])
    got = ContinuumOpacity(wavelength)._higher_levels(state)[0, 0]
    n = np.arange(10, 400)
    chi = 157803.0 / 9000.0
    kramers = 7.907e-22 * (wavelength[0] * 10967758.34) ** 3
    want = state.h_neutral[0] * kramers * np.sum(np.exp(-chi * (1 - 1 / n**2)) / n**3)
    assert got == pytest.approx(want, rel=0.01)


def test_balmer_lines_run_smoothly_into_the_continuum():
    # Where levels dissolve, lines and continuum together must show no cliff at the edge.
    state = gas(10000.0, 50.0)
    edge = 4.0 / 10967758.34
    wavelength = edge * np.concatenate([[1 - 1e-6, 1 + 1e-6], np.linspace(1.001, 1.01, 400)])
    total = ContinuumOpacity(wavelength).absorption(state)[0]
    total += HydrogenLines(wavelength).absorption(state)[0]
    assert total[1] == pytest.approx(total[0], rel=0.02)
    assert total[2:].mean() == pytest.approx(total[0], rel=0.25)


def test_line_is_centred_and_strong():
    centre = line_wavelength(2, 3)
    wavelength = centre * np.array([0.99, 0.999, 1.0, 1.001, 1.01])
    absorption = HydrogenLines(wavelength).absorption(gas(10000.0, 50.0))[0]
    assert absorption.argmax() == 2
    assert absorption[1] == pytest.approx(absorption[3], rel=0.01)


def test_haze_vanishes_without_metals_and_peaks_in_the_violet():
    wavelength = np.array([0.388e-6, 0.45e-6, 0.55e-6, 1.0e-6])
    # At 8000 K hydrogen gives the electrons, so that iron's stage of ionisation stays.
    rich = LINE_HAZE.median(wavelength, gas(8000.0))
    poor = LINE_HAZE.median(wavelength, gas(8000.0, feh=-2.5))
    assert np.all(np.diff(rich[0]) < 0.0)
    np.testing.assert_allclose(poor / rich, 10.0**-2.5, rtol=0.02)


def test_haze_nodes_integrate_a_step_under_a_normal_distribution():
    # What the flux does with the opacity: a smooth step; its mean by adaptive quadrature.
    def step(multiple):
        return 1.0 / (1.0 + multiple)

    assert LINE_HAZE.nodes(8)[1].sum() == pytest.approx(1.0)
    for shift in (-1.0, 0.0, 0.7):
        want = quad(lambda x, s=shift: step(10.0 ** (LINE_HAZE.sigma * x + s))
                    * np.exp(-0.5 * x * x) / np.sqrt(2 * np.pi), -8, 8)[0]  # fmt: skip
        multiples, weights = LINE_HAZE.nodes(8)
        assert weights @ step(multiples * 10.0**shift) == pytest.approx(want, abs=4e-3)


def test_edges_ascend():
    edges = bound_free_edges()
    assert np.all(np.diff(edges) > 0.0)
    assert 0.09113e-6 < edges[np.searchsorted(edges, 0.0911e-6)] < 0.0912e-6
