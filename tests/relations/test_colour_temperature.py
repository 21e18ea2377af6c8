"""Colour-temperature relations against temperatures that others computed from them."""

from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.errors import InputError
from starkiln.relations import colour_relations, temperatures_from_colours

REFERENCE = Path(__file__).parents[1] / "reference"

# Colours of the Sun: Ramirez et al. 2012, ApJ 752, 5; Casagrande et al. 2012, ApJ 761, 16 (from
# memory); BP-RP 0.82.
SUN = {
    "Johnson V": 0.0,
    "Johnson B": 0.653,
    "Cousins R": -0.352,
    "2MASS J": -1.198,
    "2MASS H": -1.484,
    "2MASS Ks": -1.560,
    "Gaia BP": 0.82,
    "Gaia RP": 0.0,
}
# Computed from the published coefficients by others than this package.
WANTED = {
    ("Casagrande 2010", "Johnson B - Johnson V"): 5741,
    ("Casagrande 2010", "Johnson V - 2MASS Ks"): 5755,
    ("Casagrande 2010", "Johnson V - 2MASS J"): 5742,
    ("Casagrande 2010", "Johnson V - 2MASS H"): 5742,
    ("Casagrande 2010", "Johnson V - Cousins R"): 5819,
    ("Boyajian 2013", "Johnson B - Johnson V"): 5755,
    ("Ramirez 2005", "Johnson B - Johnson V"): 5662,
    ("Mucciarelli 2021", "Gaia BP - Gaia RP"): 5684,
}


@pytest.mark.parametrize("key", WANTED)
def test_the_suns_temperature(key):
    found = {(e.calibration, e.colour): e for e in temperatures_from_colours(SUN, kind="dwarf")}
    assert found[key].temperature_k == pytest.approx(WANTED[key], abs=2.0)


def test_metallicity_enters_as_printed():
    # Worked by hand from the printed equations at [Fe/H] -1: Casagrande et al. 2010, equation 3,
    # V - Ks 1.6; Mucciarelli et al. 2021, equation 1, BP - RP 0.8.
    magnitudes = {"Johnson V": 0.0, "2MASS Ks": -1.6, "Gaia BP": 0.8, "Gaia RP": 0.0}
    found = temperatures_from_colours(magnitudes, kind="dwarf", feh=-1.0)
    by_name = {e.calibration: e.temperature_k for e in found}
    assert by_name["Casagrande 2010"] == pytest.approx(5040.0 / 0.878084, abs=0.1)
    assert by_name["Mucciarelli 2021"] == pytest.approx(5040.0 / 0.888068, abs=0.1)


def test_giants_of_soubiran():
    # Soubiran et al. 2024, A&A 682, A145, against Mucciarelli et al. 2021: median +33 K, robust
    # scatter 74 K for giants with BP and RP; here for those of the reference table.
    differences = []
    for star in Table.read(REFERENCE / "fundamental_stars.ecsv"):
        if star["logg"] < 3.5:
            magnitudes = {"Gaia BP": star["Gaia_BP"], "Gaia RP": star["Gaia_RP"]}
            for e in temperatures_from_colours(magnitudes, kind="giant", feh=star["feh"]):
                differences.append(e.temperature_k - star["teff"])
    assert len(differences) > 15
    assert abs(np.median(differences)) < 60.0
    assert 1.48 * np.median(np.abs(differences - np.median(differences))) < 110.0


def test_three_calibrations_each_for_dwarfs_and_two_for_giants():
    kinds = {kind: {r.calibration for r in colour_relations() if r.kind == kind} for kind in
             ("dwarf", "giant")}  # fmt: skip
    assert len(kinds["dwarf"]) >= 3
    assert len(kinds["giant"]) >= 2


def test_error_holds_scatter_and_the_colours_error():
    magnitudes = {"Johnson V": 0.0, "2MASS Ks": -1.56}
    exact = temperatures_from_colours(magnitudes, kind="dwarf")[0]
    noisy = temperatures_from_colours(magnitudes, {"2MASS Ks": 0.05}, kind="dwarf")[0]
    assert exact.error_k == 25.0
    # dT/d(V-Ks) at the Sun is about -1420 K/mag by the polynomial itself.
    assert noisy.error_k == pytest.approx(np.hypot(25.0, 0.05 * 1420.0), rel=0.03)


def test_nothing_is_extrapolated():
    assert temperatures_from_colours({"Johnson B": 2.5, "Johnson V": 0.0}, kind="dwarf") == ()
    assert temperatures_from_colours(SUN, kind="dwarf", feh=3.0) == ()


def test_every_relation_falls_with_colour():
    for relation in colour_relations():
        x = np.linspace(*relation.colour_range, 50)
        t = np.array([relation.temperature_k(c, 0.0) for c in x])
        assert np.all(np.diff(t) < 0.0), relation
        assert 3000.0 < t.min() < t.max() < 11000.0, relation


def test_bad_input_is_refused():
    with pytest.raises(InputError, match="dwarf or giant"):
        temperatures_from_colours(SUN, kind="hedgehog")
    with pytest.raises(InputError, match="error of Johnson V"):
        temperatures_from_colours(SUN, {"Johnson V": -1.0}, kind="dwarf")
