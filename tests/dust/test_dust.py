"""Dust laws against their own published tables."""

from __future__ import annotations

import numpy as np
import pytest

from starkiln.dust import Dust, law_names
from starkiln.dust._laws import load_law
from starkiln.errors import DustError

#: Cardelli, Clayton & Mathis 1989, ApJ 345, 245, Table 3, R_V = 3.1: 1/um and A/A_V.
CCM89 = {2.78: 1.569, 1.11: 0.479, 0.8: 0.282, 0.29: 0.056}
#: Fitzpatrick 1999, PASP 111, 63, Table 4, R_V = 3.1: Angstrom and A/E(B-V).
F99 = {26500: 0.265, 6000: 2.688, 5470: 3.055, 4110: 4.315, 2700: 6.265, 2600: 6.591}


@pytest.mark.parametrize("name", law_names())
def test_one_at_the_reference(name: str) -> None:
    law = load_law(name, 3.1)
    if law.short_m <= 0.55e-6 <= law.long_m:
        assert Dust(law=name).curve(0.55e-6) == pytest.approx(1.0, abs=1e-15)
    else:
        assert law.scale == 1.0


def test_ccm89_table() -> None:
    # The table is per A_V of the law's own V, the law here per A(0.55 um): 0.1 per cent.
    scale = load_law("CCM89", 3.1).scale
    for inverse_um, published in CCM89.items():
        ratio = Dust(law="CCM89").curve(1e-6 / inverse_um) * scale
        assert ratio == pytest.approx(published, abs=0.002)


def test_f99_table() -> None:
    # A/E(B-V) = R_V A/A_V for the law's own A_V.
    scale = load_law("F99", 3.1).scale
    for angstrom, published in F99.items():
        ratio = 3.1 * Dust(law="F99").curve(angstrom * 1e-10) * scale
        assert ratio == pytest.approx(published, abs=0.0015)


def test_infrared_continuation_keeps_value_and_slope() -> None:
    # CCM89 eq. 2: a(x) = 0.574 x^1.61 and b(x) = -0.527 x^1.61, a power law by definition.
    dust = Dust(law="CCM89")
    end = dust.range_m[1]
    scale = load_law("CCM89", 3.1).scale
    for micron in (4.6, 12.0, 22.0):
        expected = (0.574 - 0.527 / 3.1) * micron**-1.61 / scale
        assert dust.curve(micron * 1e-6) == pytest.approx(expected, rel=1e-6)
        assert dust.extrapolated(micron * 1e-6)
    assert not dust.extrapolated(end)
    assert not Dust().extrapolated(28e-6)


def test_outside_the_range_is_refused() -> None:
    with pytest.raises(DustError, match=r"CCM89 starts at 0.1 um and is asked for 0.09 um"):
        Dust(law="CCM89").curve([0.09e-6, 1e-6])
    with pytest.raises(DustError, match=r"B92_MWAvg ends at 0.7873 um"):
        Dust(law="B92_MWAvg").curve(1e-6)


def test_shapes_and_units() -> None:
    from astropy import units as u

    dust = Dust(law="F99", rv=5.0)
    values = dust.curve(np.array([[0.4e-6, 0.55e-6], [1e-6, 5e-6]]))
    assert values.shape == (2, 2)
    assert np.all(np.diff(values.ravel()) < 0.0)
    assert dust.curve(0.4 * u.um) == values[0, 0]


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"law": "CCM98"}, "unknown dust law 'CCM98': did you mean CCM89"),
        ({"rv": 9.0}, "R_V = 9 is outside the law G23: give a number between 2.3 and 5.6"),
        ({"prior": "flat"}, "unknown dust prior 'flat'"),
        ({"width": 0.0}, "dust width = 0.0 mag"),
    ],
)
def test_bad_settings(settings: dict, message: str) -> None:
    with pytest.raises(DustError, match=message):
        Dust(**settings)
