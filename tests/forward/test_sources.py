"""Extinction ratios and conversion between bands, against published ones."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from astropy import units as u
from astropy.table import Table

from starkiln.dust import Dust
from starkiln.errors import BandError, DustError, InputError
from starkiln.forward import convert_between, extinction_ratio, spectrum_source, star_source
from starkiln.passbands import load_band

SUN = Table.read(Path(__file__).parents[1] / "reference" / "solar_spectrum.ecsv")


def per_ebv(band: str, dust: Dust, temperature: float, av: float = 0.3) -> float:
    """A_band / E(B-V)."""
    return float(extinction_ratio(band, temperature, av, dust=dust) * dust.av_from_ebv(1.0))


def test_gaia_ratios_of_a_sun() -> None:
    # Casagrande & VandenBerg 2018, MNRAS 479, L102, Table 2 (coefficients from memory; at
    # 6,120 K they give the means 2.740, 3.374, 2.035 of their abstract), Gaia DR2.
    relations = {
        "Gaia DR2 G": (1.4013, 3.1406, -1.5626),
        "Gaia DR2 BP": (1.7895, 4.2355, -2.7071),
        "Gaia DR2 RP": (1.8593, 0.3985, -0.1771),
    }
    for band, (a, b, c) in relations.items():
        published = a + b * 0.5772 + c * 0.5772**2
        assert per_ebv(band, Dust(law="O94"), 5772.0) == pytest.approx(published, abs=0.05)
    # F99 misses them by 0.06 to 0.17.
    assert abs(per_ebv("Gaia DR2 G", Dust(law="F99"), 5772.0) - 2.6934) > 0.1


def test_schlafly_and_finkbeiner() -> None:
    # Schlafly & Finkbeiner 2011, ApJ 737, 103, Table 6: F99, a star of 7,000 K; the common
    # factor is their renormalisation of the dust map.
    sdss = {"g": 3.303, "r": 2.285, "i": 1.698, "z": 1.263}
    ours = [per_ebv(f"SDSS {b}", Dust(law="F99"), 7000.0) for b in sdss]
    ratio = np.array(ours) / list(sdss.values())
    np.testing.assert_allclose(ratio / np.exp(np.log(ratio).mean()), 1.0, atol=0.01)
    for rv, table in ((2.1, [3.634, 2.241, 1.568, 1.258]), (5.1, [2.835, 2.292, 1.765, 1.369])):
        ours = [per_ebv(f"Pan-STARRS {b}", Dust(law="F99", rv=rv), 7000.0) for b in "griz"]
        ratio = np.array(ours) / table
        np.testing.assert_allclose(ratio / np.exp(np.log(ratio).mean()), 1.0, atol=0.003)


def test_the_limit_of_little_dust() -> None:
    band = load_band("Gaia G")
    at = [float(extinction_ratio(band, 5772.0, av)) for av in (0.0, 1e-9, 1e-3, 1.0)]
    assert at[0] == pytest.approx(at[1], rel=1e-7)
    assert at[2] == pytest.approx(at[0], rel=1e-3)
    # A wide band reddens the light that it takes: the ratio falls with av.
    assert at[3] < at[2] < at[0]
    flux = np.exp(1.0)  # any flux: the ratio is a mean of the curve
    curve = Dust().curve(band.wavelength_m)
    assert curve.min() < at[0] < curve.max() < flux * curve.max()


def test_ratios_broadcast_and_take_quantities() -> None:
    grid = extinction_ratio("SDSS g", np.array([[4000.0], [9000.0]]) * u.K, [0.0, 1.0, 3.0])
    assert grid.shape == (2, 3)
    assert grid[1, 2] == pytest.approx(float(extinction_ratio("SDSS g", 9000.0, 3.0)), rel=1e-13)
    assert np.all(grid[1] > grid[0])
    with pytest.raises(InputError, match="temperature = -5 K"):
        extinction_ratio("SDSS g", -5.0, 1.0)
    with pytest.raises(DustError, match="B92_MWAvg ends at"):
        extinction_ratio("2MASS J", 5000.0, 1.0, dust=Dust(law="B92_MWAvg"))


def test_between_bands_of_the_sun() -> None:
    # Willmer 2018, Tables 3 and 4: apparent AB magnitudes of the Sun.
    source = spectrum_source(SUN["wavelength"].quantity, SUN["irradiance"].quantity)
    result = convert_between(-26.469, "SDSS g", "SDSS r", source, unit="mag(AB)", error=0.01)
    assert result.value == pytest.approx(-26.921, abs=0.04)
    assert result.error == pytest.approx(0.01, rel=1e-12)
    assert result.unit == "mag(AB)"


def test_between_bands_of_a_star() -> None:
    # An independent integral: B_nu at the pivots differs from this by the bands' widths only.
    source = star_source(9000 * u.K)
    jy = convert_between(1.0, "WISE W1", "WISE W2", source, unit="Jy").value
    nu = [299792458.0 / load_band(b).pivot_m for b in ("WISE W1", "WISE W2")]
    x = 6.62607015e-34 * np.array(nu) / (1.380649e-23 * 9000.0)
    planck = np.array(nu) ** 3 / np.expm1(x)
    assert jy == pytest.approx(planck[1] / planck[0], rel=0.01)
    back = convert_between(jy, "WISE W2", "WISE W1", source, unit="Jy", to="mJy")
    assert back.value == pytest.approx(1000.0, rel=1e-12)
    # Dust reddens: A(W1) > A(W2) of the default law.
    dusty = star_source(9000.0, av=5.0)
    assert convert_between(1.0, "WISE W1", "WISE W2", dusty, unit="Jy").value > jy


def test_no_flux_and_no_coverage() -> None:
    dark = spectrum_source([0.1, 30.0], [0.0, 0.0])
    with pytest.raises(InputError, match="the source has no flux in SDSS g"):
        convert_between(1.0, "SDSS g", "SDSS r", dark, unit="Jy")
    short = spectrum_source([0.3, 0.6], [1.0, 1.0])
    with pytest.raises(BandError, match="of 2MASS J"):
        convert_between(1.0, "SDSS g", "2MASS J", short, unit="Jy")
