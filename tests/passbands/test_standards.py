"""The Sun and Vega through the bands, against Willmer 2018."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.passbands import load_band, synthetic_magnitude
from starkiln.passbands._vega import vega_mean_w_m3

REFERENCE = Path(__file__).parents[1] / "reference"
#: Willmer 2018, ApJS 236, 47, Tables 3 and 4.
WILLMER = {row["band"]: row for row in Table.read(REFERENCE / "willmer2018.ecsv")}
SUN = Table.read(REFERENCE / "solar_spectrum.ecsv")

#: Pivots that differ by more than 0.5 per cent, for Willmer used other curves there: for
#: Johnson-Cousins not those of Bessell 1990, which weight energy; for SDSS u none with the
#: red leak of Doi et al. 2010; for LSST the design of 2016, here the throughputs of 2023;
#: for W3 none of Wright et al. 2010, whose colour corrections this one reproduces.
OTHER_CURVE = {
    "Johnson U": 0.008,
    "Johnson B": 0.006,
    "Cousins R": 0.013,
    "SDSS u": 0.011,
    "LSST u": 0.015,
    "WISE W3": 0.04,
}


@pytest.mark.parametrize("name", WILLMER)
def test_pivot(name: str) -> None:
    published = WILLMER[name]["pivot"]
    allowed = OTHER_CURVE.get(name, 0.005)
    assert load_band(name).pivot_m * 1e6 == pytest.approx(published, rel=allowed)


@pytest.mark.parametrize("name", WILLMER)
def test_sun(name: str) -> None:
    # ASTM E490 here, a composite of CALSPEC and others there.
    magnitude = synthetic_magnitude(
        SUN["wavelength"].quantity, SUN["irradiance"].quantity, name, system="AB"
    )
    allowed = 0.065 if name == "Johnson U" else 0.05
    assert magnitude == pytest.approx(WILLMER[name]["sun"], abs=allowed)


@pytest.mark.parametrize("name", WILLMER)
def test_vega(name: str) -> None:
    # Vega is 3 per cent brighter there in every band: another absolute scale.
    band = load_band(name)
    vega = -2.5 * np.log10(band.zero_flux_w_m3("Vega") / band.zero_flux_w_m3("AB"))
    allowed = 0.07 if name == "WISE W3" else 0.05
    assert vega == pytest.approx(-2.5 * np.log10(WILLMER[name]["vega"] / 3631.0), abs=allowed)


def test_vega_through_gaia_bands() -> None:
    # Riello et al. 2021: AB magnitudes of Vega, whose spectrum they scale to
    # 3.62286e-11 W m-2 nm-1 at 550 nm; CALSPEC has 3.5469e-11. For DR2 the published
    # difference of the revised zero points (Evans et al. 2018, from memory).
    published = {
        "Gaia G": (0.113678, 0.004),
        "Gaia BP": (0.015413, 0.004),
        "Gaia DR2 G": (0.100111, 0.011),
        "Gaia DR2 BP": (0.037345, 0.011),
        "Gaia DR2 RP": (0.353492, 0.011),
    }
    for name, (magnitude, allowed) in published.items():
        band = load_band(name)
        mean = vega_mean_w_m3(name, band.wavelength_m, band.response, photon=True)
        scaled = mean * 3.62286e-11 / 3.5469e-11
        ours = -2.5 * np.log10(scaled / band.zero_flux_w_m3("AB"))
        assert ours == pytest.approx(magnitude, abs=allowed)
        used = -2.5 * np.log10(band.zero_flux_w_m3("Vega") / band.zero_flux_w_m3("AB"))
        assert used == pytest.approx(magnitude, abs=1e-6)


def test_vega_of_blanton_and_roweis() -> None:
    # Blanton & Roweis 2007, AJ 133, 734, Table 1 (from memory): AB minus Vega.
    published = {"SDSS u": 0.91, "SDSS g": -0.08, "SDSS r": 0.16, "SDSS i": 0.37, "SDSS z": 0.54}
    for name, difference in published.items():
        band = load_band(name)
        vega = -2.5 * np.log10(band.zero_flux_w_m3("Vega") / band.zero_flux_w_m3("AB"))
        assert vega == pytest.approx(difference, abs=0.021)
