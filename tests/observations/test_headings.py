"""What headings mean, and what they must not be taken for."""

import pytest

from starkiln.observations._headings import looks_like_band, meaning_of, split_unit
from starkiln.observations._quantities import BY_NAME
from starkiln.observations._trade import guess
from starkiln.passbands import band_names


@pytest.mark.parametrize("band", band_names())
@pytest.mark.parametrize(
    "spelling", [str, str.upper, lambda t: t.replace(" ", "_"), lambda t: t.replace(" ", "")]
)
def test_every_band_is_known_with_its_error_and_limit(band, spelling):
    for head, role in (("", "value"), ("e_", "error"), ("l_", "limit")):
        found = meaning_of(head + spelling(band))
        assert (found.role, found.target) == (role, band)
        assert found.heading == head + band


@pytest.mark.parametrize("name", [name for name in BY_NAME if name != "ebv"])
def test_every_quantity_is_known_with_its_error(name):
    assert meaning_of(name).target == name
    assert meaning_of(f"e_{name}").role == "error"
    assert meaning_of(f"{name.upper()}_ERROR").role == "error"


@pytest.mark.parametrize(
    "heading",
    # Colours, positions, identifiers and other columns of real archives (Gaia DR3's
    # gaia_source, the 2MASS point source catalogue, AllWISE; from memory).
    [
        *("ra", "dec", "pmra", "ra_error", "bp_rp", "bp_g", "g_rp", "G-RP", "G-BP", "ruwe"),
        *("phot_g_mean_mag", "phot_g_n_obs", "j_m", "w1mpro", "ph_qual", "designation2"),
        *("ebv", "E(B-V)", "radial_velocity", "V", "J", "Vmag", "parallax_over_error", ""),
    ],
)
def test_nothing_is_taken_for_granted(heading):
    assert meaning_of(heading) is None


@pytest.mark.parametrize(
    ("heading", "head", "band"),
    [
        ("Gaia X", "", "Gaia G"),
        ("e_Gaia X", "e_", "Gaia G"),
        ("l_WISE W5", "l_", "WISE W1"),
        ("2MAS J", "", "2MASS J"),
        ("Jonson V", "", "Johnson V"),
        ("Johnson K", "", "Johnson B"),
    ],
)
def test_a_heading_that_looks_like_a_band(heading, head, band):
    found_head, near = looks_like_band(heading)
    assert found_head == head
    assert band.split()[0] in " ".join(near)


@pytest.mark.parametrize(
    "heading",
    ["gaia_id", "WISE_ra", "sdss_id", "gaia_rv", "Gaia DR3", "2MASS_ID", "source", "teff2", "J-H"],
)
def test_a_heading_that_only_names_a_survey(heading):
    assert looks_like_band(heading)[1] == []


@pytest.mark.parametrize(
    ("heading", "parts"),
    [
        ("WISE W3 [mJy]", ("WISE W3", "mJy")),
        ("parallax (mas)", ("parallax", "mas")),
        ("W3 (erg s-1 cm-2 A-1)", ("W3", "erg s-1 cm-2 A-1")),
        ("Gaia G", ("Gaia G", "")),
        ("[Fe/H]", ("[Fe/H]", "")),
    ],
)
def test_a_unit_in_the_heading(heading, parts):
    assert split_unit(heading) == parts


@pytest.mark.parametrize(
    ("heading", "role", "meaning"),
    # Column names of the archives' own documentation (from memory), and observers' ways.
    [
        ("phot_g_mean_mag", "value", "Gaia G"),
        ("phot_bp_mean_mag", "value", "Gaia BP"),
        ("phot_g_mean_flux_over_error", "signal_to_noise", "Gaia G"),
        ("j_m", "value", "2MASS J"),
        ("j_msigcom", "error", "2MASS J"),
        ("k_m", "value", "2MASS Ks"),
        ("w1mpro", "value", "WISE W1"),
        ("w1sigmpro", "error", "WISE W1"),
        ("w4snr", "signal_to_noise", "WISE W4"),
        ("Jmag", "value", "2MASS J"),
        ("e_Kmag", "error", "2MASS Ks"),
        ("BPmag", "value", "Gaia BP"),
        ("gMeanPSFMag", "value", "Pan-STARRS g"),
        ("gMeanPSFMagErr", "error", "Pan-STARRS g"),
        ("psfMag_r", "value", "SDSS r"),
        ("Vmag", "value", "Johnson V"),
        ("mag_V", "value", "Johnson V"),
        ("sigma_V", "error", "Johnson V"),
        ("J_AB", "value", "2MASS J"),
        ("rgeo", "value", "distance"),
        ("E(B-V)", "value", "ebv"),
        ("parallax_mas", "value", "parallax"),
    ],
)
def test_what_a_heading_most_likely_is(heading, role, meaning):
    found = guess(heading)
    assert (found.role, found.meanings[0]) == (role, meaning)


@pytest.mark.parametrize("heading", ["bp_rp", "M_G", "J-H", "b", "ra", "phot_g_mean_flux", "hip"])
def test_what_is_no_band_is_not_proposed(heading):
    assert guess(heading) is None
