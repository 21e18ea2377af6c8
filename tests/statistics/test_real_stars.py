"""What an emitter makes of real stars: held against interferometry and the solar spectrum.

Outside checks: Soubiran et al. 2024 (tests/reference/interferometric_stars.csv, and
fundamental_stars.ecsv with gravities and metallicities), and ASTM E490
(tests/reference/solar_spectrum.ecsv). The bounds are a blackbody's and an atmosphere's
limits, stated in the README, not the code's precision.
"""

from __future__ import annotations

import csv
from pathlib import Path

import numpy as np
import pytest
from astropy import units as u
from astropy.table import Table
from scipy.stats import median_abs_deviation

from starkiln import Star, fit, load_band
from starkiln.inference import Settings

REFERENCE = Path(__file__).parent.parent / "reference"
#: Gaia's formal errors leave out its bright-star systematics; 0.01 mag is common practice.
GAIA_ERROR = 0.01
COLUMNS = {
    "Gaia G": "phot_g_mean_mag",
    "Gaia BP": "phot_bp_mean_mag",
    "Gaia RP": "phot_rp_mean_mag",
    "2MASS J": "j_m",
    "2MASS H": "h_m",
    "2MASS Ks": "ks_m",
    "WISE W3": "w3mpro",
}
ERRORS = {"j_m": "j_msigcom", "h_m": "h_msigcom", "ks_m": "ks_msigcom", "w3mpro": "w3mpro_error"}


def rows():
    with (REFERENCE / "interferometric_stars.csv").open() as stream:
        return list(csv.DictReader(line for line in stream if not line.startswith("#")))


def is_unsaturated(row):
    return row["ph_qual_tmass"] == "AAA" and float(row["phot_g_mean_mag"] or 0.0) > 4.0


def star_of(row):
    photometry = {}
    for band, column in COLUMNS.items():
        error = row[ERRORS[column]] if column in ERRORS else GAIA_ERROR
        if row[column] and error:
            photometry[band] = (float(row[column]), float(error))
    return Star(row["hip"], photometry)


def compare(selected, settings):
    """Ratios of temperature and diameter to the measured ones, and whether T is held."""
    ratios = []
    for row in selected:
        result = fit(star_of(row), settings=settings)
        middle, low, high = result.summary["temperature"]
        measured, error = float(row["teff"]), float(row["e_teff"])
        held = abs(middle - measured) < np.hypot(0.5 * (high - low), error)
        diameter = result.summary["angular_diameter"][0] / float(row["theta_ld"])
        ratios.append((middle / measured, diameter, held))
    return np.array(ratios).T


def test_unsaturated_stars_without_dust():
    selected = [row for row in rows() if is_unsaturated(row)]
    assert len(selected) >= 8
    temperature, diameter, _ = compare(selected, Settings(dust="zero"))
    assert np.all(np.abs(temperature - 1.0) < 0.08)
    assert abs(np.median(temperature) - 1.0) < 0.03
    assert abs(np.median(diameter) - 1.0) < 0.05


def test_free_dust_makes_dust_free_stars_too_hot_and_is_flagged():
    selected = [row for row in rows() if is_unsaturated(row)][1:4]
    quick = Settings(dust="free", effective_draws=300, walkers=32)
    temperature, _, _ = compare(selected, quick)
    assert np.median(temperature) > 1.15
    result = fit(star_of(selected[0]), settings=quick)
    assert "degenerate" in result.flags


@pytest.mark.long
def test_all_stars_without_dust():
    selected = rows()
    assert len(selected) > 85
    temperature, diameter, held = compare(selected, Settings(dust="zero"))
    assert abs(np.median(temperature) - 1.0) < 0.04
    assert abs(np.median(diameter) - 1.0) < 0.09
    assert 0.40 <= held.mean() <= 0.80


def test_sunlight_is_no_blackbody():
    spectrum = Table.read(REFERENCE / "solar_spectrum.ecsv")
    dilution = (u.au / (10.0 * u.pc)).decompose().value ** 2
    photometry = {}
    bands = ("Johnson B", "Johnson V", "Cousins R", "Cousins I", "2MASS J", "2MASS H", "2MASS Ks")
    for name in bands:
        band = load_band(name)
        at = np.interp(band.wavelength_m * 1e6, spectrum["wavelength"], spectrum["irradiance"])
        flux = dilution * float(at @ band.weight) * u.W / u.m**2 / u.um
        photometry[name] = (flux, 0.01 * flux)
    star = Star("Sun at 10 pc", photometry, distance=(10.0 * u.pc, 0.001 * u.pc))
    result = fit(star, settings=Settings(dust="zero"))
    temperature = result.summary["temperature"][0]
    true_diameter = 1918.4555e3 * (u.au / (10.0 * u.pc)).decompose().value
    assert temperature == pytest.approx(5772.0, rel=0.05)
    assert result.summary["angular_diameter"][0] == pytest.approx(1.09 * true_diameter, rel=0.03)
    assert result.summary["luminosity"][0] == pytest.approx(1.07, abs=0.03)
    assert "poor_blackbody" in result.flags
    assert result.fit_probability < 1e-3
    assert result.summary["misfit"][1] > 0.02


def known_stars(half):
    table = Table.read(REFERENCE / "fundamental_stars.ecsv")
    return table[(table["half"] == half) & (table["teff"] > 4300.0) & (table["teff"] < 7000.0)]


def known_star(row):
    photometry = {}
    for band in COLUMNS:
        column = band.replace(" ", "_")
        if np.isfinite(row[column]):
            error = row[f"e_{column}"] if f"e_{column}" in row.colnames else GAIA_ERROR
            # 0.3 mag stands for a magnitude whose catalogue gives no error.
            error = float(error) if np.isfinite(error) else 0.3
            photometry[band] = (float(row[column]), error)
    known = {"logg": float(row["logg"]), "feh": max(float(row["feh"]), -2.5)}
    return Star(str(row["name"]), photometry, **known)


def compare_known(table, emitter):
    """Ratios less 1, in per cent, and whether the intervals hold, of T and theta."""
    off, held = [], []
    for row in table:
        result = fit(known_star(row), emitter=emitter, settings=Settings(dust="zero"))
        for name, key in (("temperature", "teff"), ("angular_diameter", "theta")):
            middle, low, high = result.summary[name]
            off.append(100.0 * (middle / row[key] - 1.0))
            held.append(abs(middle - row[key]) < np.hypot(0.5 * (high - low), row[f"e_{key}"]))
    return np.reshape(off, (-1, 2)).T, np.reshape(held, (-1, 2)).T


def test_an_atmosphere_comes_closer_in_temperature_than_a_blackbody():
    table = known_stars("test")[::5]
    (ours, _), _ = compare_known(table, "atmosphere")
    (blackbody, _), _ = compare_known(table, "blackbody")
    assert np.sqrt(np.mean(ours**2)) < 0.8 * np.sqrt(np.mean(blackbody**2))
    assert np.max(np.abs(ours)) < 6.0


@pytest.mark.long
def test_an_atmosphere_on_the_half_that_calibrated_nothing():
    table = known_stars("test")
    off, held = compare_known(table, "atmosphere")
    blackbody, _ = compare_known(table, "blackbody")
    bias, scatter = np.median(off, axis=1), median_abs_deviation(off, axis=1, scale="normal")
    assert np.all(np.abs(bias) < (1.5, 3.0))
    assert np.all(scatter < (2.3, 4.0))
    assert np.all((held.mean(axis=1) > 0.55) & (held.mean(axis=1) < 0.8))
    # A blackbody: +2.7 and -4.9 per cent.
    assert np.all(np.abs(bias) < 0.6 * np.abs(np.median(blackbody, axis=1)))
