import pytest

from starkiln.errors import InputError
from starkiln.matter import (
    MIXTURES,
    composition,
    composition_from_abundances,
    eddington_factor,
    element_weights,
    thomson_opacity,
)


def test_solar_mixture_of_asplund_2009():
    # Asplund et al. 2009, ARA&A 47, 481, Table 4 (present photosphere):
    # X = 0.7381, Z = 0.0134, Z/X = 0.0181; mu = 0.6033 computed independently.
    matter = composition_from_abundances("Asplund 2009")
    assert matter.hydrogen == pytest.approx(0.7381, abs=8e-4)
    assert matter.metals == pytest.approx(0.0134, abs=6e-5)
    assert matter.metals / matter.hydrogen == pytest.approx(0.0181, abs=5e-5)
    assert matter.mu == pytest.approx(0.6033, abs=2e-4)


def test_solar_mixture_of_grevesse_1998():
    # Grevesse & Sauval 1998: Z/X = 0.023.
    matter = composition_from_abundances("Grevesse 1998")
    assert matter.metals / matter.hydrogen == pytest.approx(0.0230, abs=1e-4)


def test_mean_weight_with_exact_masses_and_with_rounded_ones():
    # 0.6211 independent calculation with atomic masses; 0.6173 = 1/(2X + 3Y/4 + Z/2).
    matter = composition(0.70, 0.02)
    assert matter.helium == pytest.approx(0.28, abs=1e-15)
    assert matter.mu == pytest.approx(0.6211, abs=1.5e-4)
    assert matter.mu == pytest.approx(1 / (1.4 + 0.21 + 0.01), rel=0.007)
    assert 1 / matter.mu == pytest.approx(1 / matter.mu_ion + 1 / matter.mu_electron, rel=1e-14)


def test_pure_elements():
    # Standard atomic weights of hydrogen and helium (IUPAC 2013): 1.008 and 4.002602.
    hydrogen, helium = composition(1.0, 0.0), composition(0.0, 0.0)
    assert (hydrogen.mu, hydrogen.mu_electron) == pytest.approx((0.504, 1.008), rel=1e-12)
    assert helium.mu == pytest.approx(4.002602 / 3, rel=1e-12)
    assert helium.mu_electron == pytest.approx(2.001301, rel=1e-12)


def test_abundances_by_hand_and_by_name_agree():
    # Hydrogen and helium only, ten atoms to one.
    matter = composition_from_abundances({"H": 12.0, "He": 11.0})
    weights = element_weights()
    assert matter.hydrogen == pytest.approx(10 * weights["H"] / (10 * weights["H"] + weights["He"]))
    assert matter.metals == pytest.approx(0.0, abs=1e-15)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ({"hydrogen": 70.0}, "0.7 if it is in per cent"),
        ({"hydrogen": -0.1}, "between 0 and 1"),
        ({"hydrogen": 0.9, "metals": 0.2}, "X \\+ Z = 1.1 is above 1"),
        ({"hydrogen": 0.7, "helium": 0.3, "metals": 0.02}, "X \\+ Y \\+ Z = 1.02 is not 1"),
        ({"hydrogen": float("nan")}, "between 0 and 1"),
        ({"mixture": "Moon"}, "Asplund 2009"),
    ],
)
def test_bad_fractions_are_refused(arguments, words):
    with pytest.raises(InputError, match=words):
        composition(**arguments)


@pytest.mark.parametrize(
    ("abundances", "words"),
    [
        ({"H": 12.0, "Xx": 7.0}, "'Xx' is unknown"),
        ({"He": 10.9}, "give 'H' as 12"),
        ({"H": 12.0, "Fe": 75.0}, "Fe = 75"),
        ({"H": 12.0, "Fe": float("nan")}, "Fe = nan"),
    ],
)
def test_bad_abundances_are_refused(abundances, words):
    with pytest.raises(InputError, match=words):
        composition_from_abundances(abundances)


def test_electron_scattering():
    # Exact electron count at X = 0.7: 0.3383 cm2/g, not 0.3400 (independent
    # calculation). Common practice: log Gamma_e = -4.815 + log(1 + X) + log(L/M), which
    # rounds that count up by 0.5 per cent.
    opacity = thomson_opacity(composition(0.70, 0.02))
    assert opacity == pytest.approx(0.03383, abs=1e-5)
    assert eddington_factor(1.0, 1.0, opacity) == pytest.approx(1.7 * 10**-4.815, rel=6e-3)


def test_every_named_mixture_is_served():
    for name in MIXTURES:
        assert 0.012 < composition_from_abundances(name).metals < 0.021
