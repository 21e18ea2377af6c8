"""A star made by hand: quantities in, bare numbers in, and what identifies it."""

import pickle

import pytest
from astropy import units as u
from hypothesis import given, settings
from hypothesis import strategies as st

from starkiln.errors import BandError, InputError
from starkiln.observations import Star

PHOTOMETRY = {"Gaia G": (10.23, 0.01), "2MASS J": (9.1, 0.02), "WISE W3": (8.4, 0.05)}


def test_the_example_of_the_readme():
    star = Star(
        "Adra 7",
        {
            "Gaia G": (10.23, 0.01),
            "2MASS J": (9.1 * u.mag, 0.02 * u.mag),
            "WISE W3": (0.21 * u.Jy, 0.01 * u.Jy),
        },
        parallax=(2.31, 0.03) * u.mas,
        av=(0.3, 0.05),
        teff=(5800 * u.K, 60 * u.K),
        mass=1.0 * u.Msun,
    )
    assert star.bands == ("Gaia G", "2MASS J", "WISE W3")
    assert (star.parallax_mas, star.e_parallax_mas) == (2.31, 0.03)
    assert (star.av, star.e_av, star.teff_k, star.e_teff_k) == (0.3, 0.05, 5800.0, 60.0)
    assert star.mass_msun == 1.0
    assert star.e_mass_msun is None
    assert star.row is None


def test_quantities_in_other_units_are_converted():
    star = Star("x", PHOTOMETRY, distance=(0.4 * u.kpc, 3 * u.pc), radius=u.R_sun.to(u.km) * u.km)
    assert star.distance_pc == pytest.approx(400.0)
    assert star.e_distance_pc == pytest.approx(3.0)
    assert star.radius_rsun == pytest.approx(1.0)


def test_band_names_are_matched_freely_and_sorted():
    star = Star("x", {"wise_w3": (8.4, 0.05), "gaia-g": (10.23, 0.01), "2mass.j": (9.1, 0.02)})
    assert star == Star("x", PHOTOMETRY)


def test_reddening_becomes_extinction():
    # A_V = R_V E(B-V), the definition of R_V.
    star = Star("x", PHOTOMETRY, ebv=(0.1, 0.02))
    assert star.av == pytest.approx(0.31)
    assert star.e_av == pytest.approx(0.062)
    assert star.notes == ("av is 3.1 E(B-V)",)
    assert Star("x", PHOTOMETRY, ebv=0.1, rv=5.0).av == pytest.approx(0.5)
    assert Star("x", PHOTOMETRY, ebv=0.1, av=0.2).av == 0.2


@pytest.mark.parametrize(
    ("known", "words"),
    [
        ({"parallax": 2.0}, "parallax = 2 mas has no error; give e_parallax"),
        ({"distance": 2.0}, "distance = 2 pc has no error"),
        ({"parallax": (2.0, 0.1), "distance": (500, 10)}, "a parallax or a distance, not both"),
        ({"paralax": (2.0, 0.1)}, "did you mean parallax?"),
        ({"parallax": (2.0, 0.0)}, "e_parallax = 0 mas is not above zero"),
        ({"parallax": (-999.0, 0.1)}, "parallax = -999 mas is out of bounds"),
        ({"teff": (0.0, 10.0)}, "teff = 0 K is out of bounds"),
        ({"av": (0.2, -0.1)}, "e_av = -0.1 mag is not above zero"),
        ({"rv": (3.1, 0.1)}, "rv takes no error"),
        ({"parallax": (2.0, 0.1) * u.pc}, "cannot be converted"),
        ({"logg": "high"}, "is not a number"),
    ],
)
def test_a_quantity_that_cannot_be_is_refused(known, words):
    with pytest.raises(InputError) as caught:
        Star("Adra 1", PHOTOMETRY, **known)
    assert words in str(caught.value)
    assert "Adra 1" in str(caught.value)


def test_an_extinction_may_be_exact():
    assert Star("x", PHOTOMETRY, av=(0.0, 0.0)).e_av == 0.0


def test_an_unknown_band_offers_the_nearest():
    with pytest.raises(BandError, match="2MASS J"):
        Star("x", {"2MAS J": (9.1, 0.02)})


def test_a_band_may_be_given_once_only():
    with pytest.raises(InputError, match="2MASS J is given twice"):
        Star("x", {"2MASS J": (9.1, 0.02), "2mass_j": (9.1, 0.02)})


def test_limits_alone_make_no_star():
    with pytest.raises(InputError, match="no band is left"):
        Star("x", {"2MASS J": (">", 15.0)})


@settings(deadline=None)
@given(st.permutations(list(PHOTOMETRY)))
def test_the_order_of_the_bands_does_not_matter(order):
    star = Star("x", {band: PHOTOMETRY[band] for band in order})
    assert star.fingerprint() == Star("x", PHOTOMETRY).fingerprint()


def test_the_fingerprint_knows_every_value():
    changes = [
        {"av": (0.3, 0.05)},
        {"av": (0.3, 0.06)},
        {"av": 0.3},
        {"parallax": (2.0, 0.1)},
        {"distance": (2.0, 0.1)},
        {"logg": 4.0},
    ]
    stars = [Star("x", PHOTOMETRY), Star("y", PHOTOMETRY)]
    stars += [Star("x", PHOTOMETRY, **change) for change in changes]
    stars.append(Star("x", PHOTOMETRY, feh=0.4))
    stars.append(Star("x", PHOTOMETRY | {"2MASS J": (9.1, 0.0200000001)}))
    stars.append(Star("x", PHOTOMETRY | {"2MASS J": (9.100000001, 0.02)}))
    stars.append(Star("x", PHOTOMETRY | {"2MASS J": (">", 9.1)}))
    stars.append(Star("x", PHOTOMETRY | {"2MASS J": ("<", 9.1)}))
    stars.append(Star("x", PHOTOMETRY | {"2MASS J": ("<", 9.1)}, limit_sigma=5))
    prints = {star.fingerprint() for star in stars}
    assert len(prints) == len(stars)
    assert {len(each) for each in prints} == {32}


def test_a_star_survives_pickling():
    star = Star("x", PHOTOMETRY, parallax=(2.0, 0.1))
    copy = pickle.loads(pickle.dumps(star))
    assert copy == star
    assert copy.fingerprint() == star.fingerprint()


def test_a_star_cannot_be_changed():
    star = Star("x", PHOTOMETRY)
    with pytest.raises(AttributeError):
        star.av = 1.0


def test_a_notebook_shows_the_star():
    page = Star("<b>", PHOTOMETRY, parallax=(2.0, 0.1))._repr_html_()
    assert "&lt;b&gt;" in page
    assert "parallax 2" in page
    assert page.count("<tr>") == 4
