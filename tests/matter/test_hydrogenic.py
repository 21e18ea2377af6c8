"""Hydrogen against the exact cross-section, published oscillator strengths and Gaunt factors."""

import mpmath as mp
import numpy as np
import pytest

from starkiln.matter import bound_free_gaunt, free_free_gaunt, oscillator_strength
from starkiln.matter._hydrogen_lines import line_profile, line_wavelength
from starkiln.matter._hydrogenic import RYDBERG_H, bound_free


def exact_ground_cross_section(ratio):
    # Exact photo-ionisation from 1s (Stobbe 1930; Osterbrock & Ferland 2006, eq. 2.4).
    with mp.workdps(20):
        if ratio == 1:
            return 6.304e-22
        e = mp.sqrt(mp.mpf(ratio) - 1)
        top = mp.exp(4 - 4 * mp.atan(e) / e)
        return float(6.304e-22 * mp.mpf(ratio) ** -4 * top / (1 - mp.exp(-2 * mp.pi / e)))


@pytest.mark.parametrize(("ratio", "tolerance"), [(1.0, 2e-3), (1.5, 0.02), (4.0, 0.05)])
def test_ground_state_cross_section_is_the_exact_one(ratio, tolerance):
    ours = bound_free(1, np.array(1.0 / (RYDBERG_H * ratio)))
    assert ours == pytest.approx(exact_ground_cross_section(ratio), rel=tolerance)


@pytest.mark.parametrize(("n", "gaunt"), [(1, 0.797), (2, 0.876), (3, 0.907)])
def test_gaunt_factors_at_the_threshold(n, gaunt):
    # Karzas & Latter 1961, ApJS 6, 167, as tabulated in the trade (from memory).
    assert bound_free_gaunt(n, np.array(1.0)) == pytest.approx(gaunt, abs=5e-3)


@pytest.mark.parametrize(
    ("n", "m", "f"),
    [
        (1, 2, 0.41620),
        (1, 3, 0.079101),
        (2, 3, 0.64075),
        (2, 4, 0.11934),
        (2, 6, 0.022093),
        (3, 4, 0.84209),
    ],
)
def test_oscillator_strengths(n, m, f):
    # Wiese & Fuhr 2009, J. Phys. Chem. Ref. Data 38, 565, averages over the levels (from memory).
    assert oscillator_strength(n, m) == pytest.approx(f, rel=5e-3)


def test_balmer_lines_stand_where_they_should():
    # H alpha 6564.6, H beta 4862.7 A in vacuum (NIST Atomic Spectra Database).
    assert line_wavelength(2, 3) * 1e10 == pytest.approx(6564.6, abs=0.2)
    assert line_wavelength(2, 4) * 1e10 == pytest.approx(4862.7, abs=0.2)


@pytest.mark.parametrize(
    ("microns", "temperature"), [(0.1, 30000.0), (0.5, 10000.0), (2.2, 10000.0), (1.0, 30000.0)]
)
def test_free_free_gaunt_factor(microns, temperature):
    # Grant 1958, MNRAS 118, 241: the expansion of Menzel & Pekeris to second order, averaged over
    # Maxwell's distribution (from memory); good to 3 per cent while h nu/kT is not small.
    y = 0.0911267 / microns
    kt = microns * 1e-6 * temperature / 0.014387769
    first = 0.1728 * y ** (1 / 3) * (1 + 2 * kt)
    second = 0.0496 * y ** (2 / 3) * (1 + 2 * kt / 3 + 4 * kt**2 / 3)
    got = free_free_gaunt(np.array(microns * 1e-6), np.array(temperature))
    assert got == pytest.approx(1 + first - second, rel=0.03)


@pytest.mark.parametrize(
    ("microns", "temperature"), [(300.0, 10000.0), (1000.0, 10000.0), (2000.0, 20000.0)]
)
def test_free_free_gaunt_factor_in_the_far_infrared(microns, temperature):
    # Draine 2011, Physics of the Interstellar and Intergalactic Medium, eq. 10.9: a fit good to
    # 1.5 per cent for h nu << kT (from memory).
    ghz = 2.99792458e5 / microns
    log = 5.960 - np.sqrt(3) / np.pi * np.log(ghz * (temperature / 1e4) ** -1.5)
    want = np.log(np.exp(log) + np.e)
    got = free_free_gaunt(np.array(microns * 1e-6), np.array(temperature))
    assert got == pytest.approx(want, rel=0.02)


@pytest.mark.parametrize("stark", [1e-12, 3e-11, 1e-9])
def test_profile_has_unit_area_and_holtsmarks_wing(stark):
    doppler = 3e-11
    x = np.concatenate([[0.0], np.geomspace(1e-14, 1e-5, 20001)])
    profile = line_profile(x, np.array(stark), np.array(doppler))
    assert 2.0 * np.trapezoid(profile, x) == pytest.approx(1.0, abs=2e-3)
    assert line_profile(np.array(1e-7), np.array(stark), np.array(doppler)) == pytest.approx(
        1.5 * stark**1.5 / 1e-7**2.5, rel=0.02
    )
