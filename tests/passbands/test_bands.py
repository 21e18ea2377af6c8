"""Bands against the publications that define them."""

from __future__ import annotations

import math

import numpy as np
import pytest

from starkiln.constants import C, H
from starkiln.errors import BandError
from starkiln.passbands import band_names, is_band, load_band, match_band
from starkiln.passbands._kernels import curve_nodes
from starkiln.photons import planck_wavelength

#: Riello et al. 2021, A&A 649, A3: pivot wavelength in nm; zero points of Table 3.
GAIA = {
    "Gaia G": (621.759, 25.6873668671, 25.8010446445),
    "Gaia BP": (None, 25.3385422158, 25.3539555559),
    "Gaia RP": (776.902, 24.7478955012, 25.1039837393),
}

#: Cohen, Wheaton & Megeath 2003, AJ 126, 1090, Table 1: bandwidth um, F_nu Jy and its error.
COHEN = {"2MASS J": (0.162, 1594.0, 27.8), "2MASS H": (0.251, 1024.0, 20.0)}

#: Jarrett et al. 2011, ApJ 735, 112: F_nu (constant), F*_nu Jy, isophotal wavelength um.
JARRETT = {"WISE W1": (309.54, 306.682, 3.3526), "WISE W3": (31.674, 29.045, 11.5608)}

#: Wright et al. 2010, AJ 140, 1868, Table 1: colour corrections of blackbodies.
WRIGHT = {
    "WISE W1": {200: 2.0577, 400: 1.1316, 800: 0.9884, 1131: 0.9801},
    "WISE W3": {200: 1.0006, 400: 0.8622, 800: 0.9125, 1131: 0.9386},
}

#: Bessell, Castelli & Plez 1998, A&A 333, 231, Table A2: F_nu in Jy and (from memory)
#: F_lambda in 1e-11 erg s-1 cm-2 A-1 of magnitude 0. Their ratio is the pivot that the
#: authors used. B is left out: its pair of numbers implies 4390 A, 0.4 per cent from the
#: curve of Bessell 1990 however it is read.
BESSELL = {
    "Johnson U": (1790.0, 417.5),
    "Johnson V": (3636.0, 363.1),
    "Cousins R": (3064.0, 217.7),
    "Cousins I": (2416.0, 112.6),
}


@pytest.mark.parametrize("name", band_names())
def test_every_band_is_whole(name: str) -> None:
    band = load_band(name)
    assert band.name == name
    assert np.all(np.diff(band.wavelength_m) > 0.0)
    assert np.all(band.response >= 0.0)
    assert band.weight.sum() == pytest.approx(1.0, abs=1e-14)
    low, high = band.half_maximum_m
    assert low < band.pivot_m < high
    assert band.wavelength_m[0] < low < high < band.wavelength_m[-1]
    assert band.width_m < band.wavelength_m[-1] - band.wavelength_m[0]
    assert band.source
    assert band.zero_flux_w_m3() > 0.0


@pytest.mark.parametrize("name", GAIA)
def test_gaia_zero_points(name: str) -> None:
    pivot_nm, vega, ab = GAIA[name]
    band = load_band(name)
    if pivot_nm is not None:
        assert band.pivot_m * 1e9 == pytest.approx(pivot_nm, abs=0.05)
    difference = -2.5 * math.log10(band.zero_flux_w_m3("Vega") / band.zero_flux_w_m3("AB"))
    assert difference == pytest.approx(ab - vega, abs=1e-6)
    # The zero points are of photo-electrons through the pupil of 0.7278 m2, so they prove
    # height, shape and photon weighting of the curves (Riello et al. 2021, section 5).
    flux = band.zero_flux_w_m3("AB") * np.ones_like(band.wavelength_m)
    fnu_flat = flux * (band.pivot_m / band.wavelength_m) ** 2
    photons = fnu_flat * band.wavelength_m / (H.value * C.value)
    electrons = 0.7278 * (photons * band.response) @ band.step_m
    assert 2.5 * math.log10(electrons) == pytest.approx(ab, abs=0.003)


@pytest.mark.parametrize("name", COHEN)
def test_2mass_zero_points(name: str) -> None:
    width_um, fnu_jy, error_jy = COHEN[name]
    band = load_band(name)
    fnu = band.zero_flux_w_m3("Vega") * band.pivot_m**2 / C.value * 1e26
    assert fnu == pytest.approx(fnu_jy, abs=0.1 * error_jy)
    # Cohen's responses weight energy: the curve per photon times wavelength.
    energy = band.response * band.wavelength_m
    assert energy @ band.step_m / energy.max() * 1e6 == pytest.approx(width_um, rel=0.005)


@pytest.mark.parametrize("name", JARRETT)
def test_wise_zero_points(name: str) -> None:
    constant_jy, vega_jy, isophotal_um = JARRETT[name]
    band = load_band(name)
    fnu = band.zero_flux_w_m3() * band.pivot_m**2 / C.value * 1e26
    assert fnu == pytest.approx(constant_jy, rel=1e-9)
    # The isophotal wavelength is where Vega's own F_lambda is the band mean.
    assert band.zero_flux_w_m3() == pytest.approx(
        vega_jy * 1e-26 * C.value / (isophotal_um * 1e-6) ** 2, rel=1e-3
    )


@pytest.mark.parametrize("name", WRIGHT)
def test_wise_colour_corrections(name: str) -> None:
    # Weighting by energy misses these by 3 to 30 per cent.
    band = load_band(name)
    isophotal_m = JARRETT[name][2] * 1e-6
    for temperature, published in WRIGHT[name].items():
        mean = planck_wavelength(band.wavelength_m, temperature) @ band.weight
        ratio = mean / planck_wavelength(isophotal_m, temperature)
        assert ratio == pytest.approx(published, rel=0.006)


@pytest.mark.parametrize("name", BESSELL)
def test_bessell_curves_weight_energy(name: str) -> None:
    fnu_jy, flambda = BESSELL[name]
    implied_m = math.sqrt(fnu_jy * 1e-26 * C.value / (flambda * 1e-11 * 1e7))
    band = load_band(name)
    assert band.response_kind == "energy"
    assert band.pivot_m == pytest.approx(implied_m, rel=0.0015)
    photon_weight = band.weight * band.wavelength_m
    photon_pivot = 1.0 / math.sqrt(band.wavelength_m**-2 @ photon_weight / photon_weight.sum())
    assert abs(photon_pivot / implied_m - 1.0) > 0.003


def test_sdss_offsets_from_ab() -> None:
    # SDSS photometric documentation (from memory): u_AB = u - 0.04, z_AB = z + 0.02.
    for name, offset in (("SDSS u", -0.04), ("SDSS g", 0.0), ("SDSS z", 0.02)):
        band = load_band(name)
        brighter = -2.5 * math.log10(band.zero_flux_w_m3() / band.zero_flux_w_m3("AB"))
        assert brighter == pytest.approx(offset, abs=1e-12)


def test_nodes_integrate_a_curve_times_a_power() -> None:
    # A triangle times x^4, in closed form: int_0^1 x^5 + int_1^2 (2 - x) x^4.
    x = np.array([0.0, 1.0, 2.0, 3.0])
    nodes, values, steps = curve_nodes(x, np.array([0.0, 1.0, 0.0, 0.0]))
    assert (values * nodes**4) @ steps == pytest.approx(1 / 6 + 2 * 31 / 5 - 63 / 6, rel=1e-14)
    assert nodes.max() == 2.0


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("gaia_bp", "Gaia BP"),
        ("2MASS.KS", "2MASS Ks"),
        ("2mass k", "2MASS Ks"),
        ("PS1 g", "Pan-STARRS g"),
        ("panstarrs-z", "Pan-STARRS z"),
        ("W3", "WISE W3"),
        ("J", None),
        ("V", None),
        ("Johnson R", None),
        ("parallax", None),
    ],
)
def test_names(text: str, name: str | None) -> None:
    assert match_band(text) == name
    assert is_band(text) is (name is not None)


def test_unknown_band_offers_the_nearest() -> None:
    with pytest.raises(BandError, match=r"unknown band 'Gaia B': did you mean .*Gaia BP"):
        load_band("Gaia B")
    with pytest.raises(BandError, match="starkiln bands"):
        load_band("qqqqqq")
    with pytest.raises(BandError, match="the curve of 'Tycho VT' is not part of starkiln"):
        load_band("Tycho VT")


def test_unknown_magnitude_system() -> None:
    with pytest.raises(BandError, match="unknown magnitude system 'Jy': use Vega, AB or ST"):
        load_band("Gaia G").zero_flux_w_m3("Jy")


def test_gaia_dr2_electrons() -> None:
    # As for DR3; Evans et al. 2018, revised AB zero points (from memory), to the 0.3 per
    # cent that their pupil differs by.
    published = {"G": 25.7915509947, "BP": 25.3861560855, "RP": 25.1161664528}
    for letter, ab in published.items():
        band = load_band(f"Gaia DR2 {letter}")
        photons = band.zero_flux_w_m3("AB") * band.pivot_m**2 / band.wavelength_m
        electrons = 0.7278 * (photons * band.response / (H.value * C.value)) @ band.step_m
        assert 2.5 * math.log10(electrons) == pytest.approx(ab, abs=0.004)
