"""Constants against scipy's CODATA, astropy's IAU 2015 constants, and the resolutions."""

from __future__ import annotations

import math

import pytest
import scipy.constants
from astropy import constants as astropy_constants

from starkiln import constants as c


def test_every_constant_says_where_it_comes_from():
    everything = c.all_constants()
    assert len(everything) > 20
    for name, item in everything.items():
        assert item.reference, name
        assert item.uncertainty >= 0.0, name
        assert item.quantity.value == item.value


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        (c.C, scipy.constants.c),
        (c.H, scipy.constants.h),
        (c.K_B, scipy.constants.k),
        (c.SIGMA_SB, scipy.constants.sigma),
        (c.E_CHARGE, scipy.constants.e),
        (c.AU, scipy.constants.au),
        (c.PARSEC, scipy.constants.parsec),
    ],
)
def test_exact_values_are_scipys(ours, theirs):
    assert ours.exact
    assert ours.value == pytest.approx(theirs, rel=2e-10)


@pytest.mark.parametrize(
    ("ours", "key"),
    [
        (c.G, "Newtonian constant of gravitation"),
        (c.M_E, "electron mass"),
        (c.M_U, "atomic mass constant"),
        (c.M_P, "proton mass"),
        (c.SIGMA_T, "Thomson cross section"),
    ],
)
def test_measured_values_are_codatas(ours, key):
    # scipy's release may hold the 2018 or the 2022 adjustment: they differ by less than
    # four of the larger uncertainties.
    value, _, uncertainty = scipy.constants.physical_constants[key]
    assert abs(ours.value - value) <= 4.0 * max(ours.uncertainty, uncertainty)
    assert ours.uncertainty == pytest.approx(uncertainty, rel=0.1)


def test_nominal_solar_values_are_resolution_b3():
    assert c.R_SUN.value == astropy_constants.R_sun.value == 6.957e8
    assert c.L_SUN.value == astropy_constants.L_sun.value == 3.828e26
    assert c.GM_SUN.value == astropy_constants.GM_sun.value == 1.3271244e20
    assert (c.S_SUN.value, c.T_SUN.value) == (1361.0, 5772.0)
    assert c.M_SUN.value == pytest.approx(1.98841e30, rel=2.2e-5)


def test_bolometric_zero_points_are_resolution_b2():
    assert c.L_BOL0.value == astropy_constants.L_bol0.value == 3.0128e28
    # Printed in the resolution: f_0 = 2.518 021 002 ... x 10^-8 W m-2.
    assert f"{c.F_BOL0.value:.9e}" == "2.518021003e-08"
    assert math.floor(c.F_BOL0.value * 1e17) == 2518021002
    ten_parsec = 4.0 * math.pi * (10.0 * c.PARSEC.value) ** 2
    assert c.F_BOL0.value == pytest.approx(c.L_BOL0.value / ten_parsec, rel=1e-14)
