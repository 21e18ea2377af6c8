"""The commands `photons` and `force`: answers, formats, errors, one clear line."""

import io
import subprocess
import sys
from functools import partial

import pytest
from astropy.table import Table
from scipy.constants import Stefan_Boltzmann as stefan_boltzmann

from starkiln.cli import main

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


def run(capfd, *words):
    code = main(words)
    out, err = capfd.readouterr()
    return code, out, err


def table(capfd, *words):
    code, out, err = run(capfd, *words, "--format", "ecsv")
    assert (code, err) == (0, "")
    rows = Table.read(out, format="ascii.ecsv")
    return {row["quantity"]: row for row in rows}, rows.colnames


def test_photons_prints_the_contract_columns(capfd):
    rows, names = table(capfd, "photons", "--temperature", "5772")
    assert names == ["quantity", "value", "unit", "formula", "reference"]
    assert rows["temperature"]["formula"] == "input"
    assert rows["exitance"]["value"] == approx(stefan_boltzmann * 5772.0**4, rel=1e-9)
    assert rows["exitance"]["unit"] == "W / m2"
    assert "CODATA" in rows["exitance"]["reference"]


def test_photons_with_units_band_and_volume(capfd):
    rows, _ = table(
        capfd,
        "photons",
        "--temperature",
        "2.7255K",
        "--from",
        "1mm",
        "--to",
        "0.2cm",
        "--volume",
        "1cm3",
    )
    # 410.7 photons per cm3 (Particle Data Group, from memory).
    assert rows["number"]["value"] == approx(410.7, abs=0.05)
    assert rows["from"]["value"] == approx(1000.0)
    assert 0 < rows["band_fraction"]["value"] < 1


def test_photons_of_a_star_with_error(capfd):
    rows, names = table(
        capfd,
        "photons",
        "--temperature",
        "9600",
        "--e-temperature",
        "96",
        "--radius",
        "2.5",
        "--distance",
        "10pc",
        "--to",
        "400nm",
    )
    assert names[3:5] == ["value_lo", "value_hi"]
    flux = rows["irradiance"]
    assert flux["value_lo"] / flux["value"] == approx(0.99**4, rel=1e-9)
    assert flux["value_hi"] / flux["value"] == approx(1.01**4, rel=1e-9)
    assert rows["band_irradiance"]["value"] < flux["value"]


def test_force_sail(capfd):
    rows, _ = table(capfd, "force", "sail", "--loading", "10g/m2")
    assert rows["critical_loading"]["value"] == approx(1.5313, abs=5e-5)
    assert rows["characteristic_acceleration"]["value"] == approx(0.9081, abs=5e-5)
    rows, _ = table(capfd, "force", "sail", "--loading", "1.9", "--escape")
    lightness = rows["lightness_number"]["value"]
    assert rows["escape_distance"]["value"] == approx(lightness / (lightness - 0.5))
    rows, _ = table(
        capfd, "force", "sail", "--loading", "10", "--cone-angle=-0.6rad", "--target", "0.7"
    )
    assert rows["target_distance"]["value"] == approx(0.7)


def test_force_grain(capfd):
    rows, _ = table(capfd, "force", "grain", "--size", "1000nm", "--density", "3")
    # Burns, Lamy & Soter 1979: 5.7e-5 / (3 x 1e-4) = 0.19.
    assert rows["beta"]["value"] == approx(0.1914, abs=1e-4)
    assert rows["drag_time"]["value"] == approx(2092, abs=1)


def test_force_eddington(capfd):
    rows, _ = table(
        capfd, "force", "eddington", "--mass", "40", "--luminosity", "2.4e5", "--e-mass", "4"
    )
    gamma = rows["eddington_factor"]
    assert gamma["value_lo"] == approx(gamma["value"] * 40 / 44)
    assert gamma["value_hi"] == approx(gamma["value"] * 40 / 36)
    rows, _ = table(capfd, "force", "eddington", "--temperature", "40000", "--logg", "4")
    assert 0 < rows["surface_eddington_factor"]["value"] < 1


def test_force_surface(capfd):
    rows, _ = table(
        capfd, "force", "surface", "--luminosity", "1", "--distance", "1", "--specular", "1"
    )
    assert rows["normal_pressure"]["value"] == approx(9.081e-6, abs=5e-10)
    rows, _ = table(capfd, "force", "surface", "--temperature", "5772")
    assert rows["isotropic_pressure"]["value"] == approx(0.2799, abs=5e-5)
    rows, _ = table(
        capfd,
        "force",
        "surface",
        "--irradiance",
        "1361",
        "--area",
        "10",
        "--body-mass",
        "500",
        "--angle",
        "60deg",
    )
    assert rows["normal_pressure"]["value"] == approx(1361 / 299792458 / 4)


def test_force_on_a_planet_with_errors_that_carry_units(capfd):
    rows, _ = table(
        capfd,
        *("force", "surface", "--luminosity", "1", "--distance", "1au", "--e-distance", "1496e6m"),
        *("--body-radius", "6371km", "--diffuse", "0.3", "--body-mass", "5.972e24"),
    )
    force = rows["force"]
    assert force["value"] == approx(6.562e8, rel=1e-3)
    assert force["value_lo"] / force["value"] == approx(1.01**-2, rel=1e-4)


@pytest.mark.parametrize("format", ["csv", "votable", "fits", "text"])
def test_other_formats(format, capfdbinary):
    assert main(["photons", "--temperature", "300", "--format", format]) == 0
    out, err = capfdbinary.readouterr()
    assert err == b""
    if format == "text":
        assert b"Stefan-Boltzmann law" in out
        return
    known = {"csv": "ascii.csv"}.get(format, format)
    rows = Table.read(io.BytesIO(out), format=known)
    names = [str(q).strip() for q in rows["quantity"]]
    value = rows["value"][names.index("exitance")]
    assert value == approx(459.3, abs=0.01)


BAD = [
    (["photons"], "--temperature is missing"),
    (["photons", "--temperature=-5"], "temperature = -5 K"),
    (["photons", "--temperature", "inf"], "not finite"),
    (["photons", "--temperature", "nan"], "not finite"),
    (["photons", "--temperature", "hot"], "--temperature hot"),
    (["photons", "--temperature", "5m"], "--temperature 5m"),
    (["photons", "--temperature", "300", "--from", "2", "--to", "1"], "exchange the two"),
    (["photons", "--temperature", "300", "--from", "0"], None),
    (["photons", "--temperature", "300", "--volume", "0"], "volume = 0 m3"),
    (["photons", "--temperature", "300", "--e-radius", "1"], "--e-radius is the error"),
    (["photons", "--temperature", "300", "--e-temperature=-1"], "error of temperature = -1"),
    (["photons", "--temperature", "300", "--radius", "1"], "together"),
    (["force", "sail"], "--loading is missing"),
    (["force", "sail", "--loading", "10", "--target", "2", "--escape"], "not both"),
    (["force", "sail", "--loading", "10", "--diffuse", "0.5"], "add up to at most 1"),
    (["force", "grain", "--size", "1"], "--density is missing"),
    (["force", "eddington"], "give a mass"),
    (["force", "surface"], "give the light as"),
    (
        ["force", "surface", "--irradiance", "1", "--body-radius", "1", "--angle", "3"],
        "a sphere takes --diffuse",
    ),
]


@pytest.mark.parametrize(("words", "says"), BAD, ids=[" ".join(w) for w, _ in BAD])
def test_bad_input_gives_one_clear_line(words, says, capfd):
    code, out, err = run(capfd, *words)
    if says is None:
        assert code == 0
        return
    assert code == 2
    assert out == ""
    assert says in err
    assert err.count("\n") == 1


@pytest.mark.parametrize("temperature", ["0", "1e-300", "1e100"])
def test_extreme_temperatures_give_limits_without_a_warning(temperature, capfd):
    rows, _ = table(
        capfd, "photons", "--temperature", temperature, "--at", "0.5", "--from", "0.4", "--to", "1"
    )
    hot = temperature == "1e100"
    assert rows["exitance"]["value"] == (float("inf") if hot else 0.0)
    assert rows["peak_wavelength"]["value"] == approx(0.0, abs=1e-90) if hot else True
    assert rows["spectral_radiance"]["value"] >= 0.0
    assert str(rows["free_energy_density"]["value"]) != "-0.0"


def test_a_flight_that_fails_exits_with_1(capfd):
    words = ["force", "sail", "--loading", "50", "--escape", "--time-limit", "1"]
    code, out, err = run(capfd, *words)
    assert (code, out) == (1, "")
    assert "does not reach its escape" in err


def test_help_states_the_unit_of_a_bare_number():
    result = subprocess.run(
        [sys.executable, "-m", "starkiln", "photons", "--help"],
        capture_output=True,
        text=True,
        check=True,
    )
    assert "shorter limit of a band, um" in result.stdout
    kind = subprocess.run(
        [sys.executable, "-m", "starkiln", "force", "grain", "--help"],
        capture_output=True,
        text=True,
        check=True,
    )
    assert "radius of the grain, um" in kind.stdout
