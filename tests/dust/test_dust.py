"""Dust laws against their own published tables."""

from __future__ import annotations

import numpy as np
import pytest
from dust_extinction import averages, parameter_averages

from starkiln.dust import Dust, law_names
from starkiln.dust._catalogue import LAWS
from starkiln.dust._laws import load_law
from starkiln.errors import DustError

#: Cardelli, Clayton & Mathis 1989, ApJ 345, 245, Table 3, R_V = 3.1: 1/um and A/A_V.
CCM89 = {2.78: 1.569, 1.11: 0.479, 0.8: 0.282, 0.29: 0.056}
#: Fitzpatrick 1999, PASP 111, 63, Table 4, R_V = 3.1: Angstrom and A/E(B-V).
F99 = {26500: 0.265, 6000: 2.688, 5470: 3.055, 4110: 4.315, 2700: 6.265, 2600: 6.591}
#: Rieke & Lebofsky 1985, ApJ 288, 618, Table 3 (from memory): um and A/A_V of J H L M.
RL85 = {1.25: 0.282, 1.65: 0.175, 3.5: 0.058, 4.8: 0.023}
#: Gordon et al. 2003, ApJ 594, 279, Table 4 (from memory): 1/um and A/A_V of SMC bar.
G03 = {0.606: 0.169, 1.235: 0.567, 1.538: 0.801, 1.818: 1.0, 2.273: 1.374, 2.703: 1.672}


def published(name: str, micron: float, rv: float = 3.1) -> float:
    """A/A_V in the law's own normalisation: the project's is per A(0.55 um)."""
    return float(Dust(law=name, rv=rv).curve(micron * 1e-6)) * load_law(name, rv).scale


def test_the_catalogue_is_that_of_the_package() -> None:
    names = {*parameter_averages.__all__, *averages.__all__}
    assert set(law_names()) == names
    for name, law in LAWS.items():
        kind = getattr(parameter_averages, name, None) or getattr(averages, name)
        low, high = kind.x_range
        assert law.short_um == pytest.approx(1.0 / high, rel=1e-12)
        assert law.long_um == pytest.approx(1.0 / low, rel=1e-12)
        if law.rv_range:
            assert law.rv_range == tuple(getattr(kind, "Rv_range", None) or kind.RvA_range)
        else:
            assert law.own_rv == kind.Rv
        assert "19" in law.reference or "20" in law.reference


@pytest.mark.parametrize("name", law_names())
def test_one_at_the_reference(name: str) -> None:
    low, high = Dust(law=name).range_m
    if low <= 0.55e-6 <= high:
        assert Dust(law=name).curve(0.55e-6) == pytest.approx(1.0, abs=1e-15)
        # 0.55 um is V within the 3 per cent that laws differ in where V is.
        assert 0.97 < load_law(name, 3.1).scale < 1.01
    else:
        assert load_law(name, 3.1).scale == 1.0


@pytest.mark.parametrize("name", law_names())
def test_continuation(name: str) -> None:
    dust = Dust(law=name)
    end = dust.range_m[1]
    if not LAWS[name].continued:
        with pytest.raises(DustError, match=f"the law {name} ends at .* no power law"):
            dust.curve([end, 1.01 * end])
        return
    wave = end * np.array([0.98, 1.0 - 1e-9, 1.0 + 1e-9, 1.0 / 0.98, 2.0])
    value = dust.curve(wave)
    assert value[2] == pytest.approx(value[1], rel=1e-6)
    assert value[3] / value[2] == pytest.approx(value[1] / value[0], rel=1e-6)
    slope = np.log(value[4] / value[2]) / np.log(2.0)
    assert -2.5 < slope < -0.9
    assert dust.extrapolated(wave).tolist() == [False, False, True, True, True]


def test_ccm89_table() -> None:
    for inverse_um, ratio in CCM89.items():
        assert published("CCM89", 1.0 / inverse_um) == pytest.approx(ratio, abs=0.002)


def test_f99_table() -> None:
    for angstrom, ratio in F99.items():
        assert 3.1 * published("F99", angstrom * 1e-4) == pytest.approx(ratio, abs=0.0015)


def test_o94_polynomial() -> None:
    # O'Donnell 1994, ApJ 422, 158, eqs. 5 and 6 (from memory), 1.1 to 3.3 per um.
    a = [-0.505, 1.647, -0.827, -1.718, 1.137, 0.701, -0.609, 0.104, 1.0]
    b = [3.347, -10.805, 5.491, 11.102, -7.985, -3.989, 2.908, 1.952, 0.0]
    for rv in (2.5, 3.1, 5.0):
        for inverse_um in (1.2, 1.8, 2.27, 2.8, 3.2):
            y = inverse_um - 1.82
            expected = np.polyval(a, y) + np.polyval(b, y) / rv
            assert published("O94", 1.0 / inverse_um, rv) == pytest.approx(expected, rel=1e-12)


def test_averages_of_other_places() -> None:
    for micron, ratio in RL85.items():
        assert published("RL85_MWGC", micron) == pytest.approx(ratio, abs=1e-12)
    for inverse_um, ratio in G03.items():
        assert published("G03_SMCBar", 1.0 / inverse_um) == pytest.approx(ratio, abs=5e-4)


def test_infrared_continuation_of_ccm89() -> None:
    # CCM89 eq. 2: a(x) = 0.574 x^1.61 and b(x) = -0.527 x^1.61, a power law by definition.
    for micron in (4.6, 12.0, 22.0):
        expected = (0.574 - 0.527 / 3.1) * micron**-1.61
        assert published("CCM89", micron) == pytest.approx(expected, rel=1e-6)
    assert not Dust().extrapolated(28e-6)


def test_the_ultraviolet_end_is_refused() -> None:
    with pytest.raises(DustError, match=r"CCM89 starts at 0\.1 um and is asked for 0\.09 um"):
        Dust(law="CCM89").curve([0.09e-6, 1e-6])


def test_shapes_and_units() -> None:
    from astropy import units as u

    dust = Dust(law="F99", rv=5.0)
    values = dust.curve(np.array([[0.4e-6, 0.55e-6], [1e-6, 5e-6]]))
    assert values.shape == (2, 2)
    assert np.all(np.diff(values.ravel()) < 0.0)
    assert dust.curve(0.4 * u.um) == values[0, 0]


def test_colour_excess() -> None:
    # Fitzpatrick 1999: A(V) = R_V E(B-V); his A(0.55 um)/A(V) is 0.978.
    assert Dust(law="F99").av_from_ebv(1.0) == pytest.approx(3.1 * 0.978, rel=1e-3)
    assert Dust(law="G03_SMCBar").av_from_ebv(0.5) == pytest.approx(2.74 * 0.5, rel=1e-3)
    # Gordon et al. 2016, eq. 11, half and half: 1 / (0.5 / 3.1 + 0.5 / 2.74).
    assert Dust(law="G16", f_a=0.5).effective_rv == pytest.approx(2.90890, rel=1e-5)


def test_mixture() -> None:
    # Gordon et al. 2016: f_A = 1 is F99, f_A = 0 the SMC bar.
    wave = np.array([0.2e-6, 0.4e-6, 1e-6])
    for f_a, name in ((1.0, "F99"), (0.0, "G03_SMCBar")):
        mixed, pure = Dust(law="G16", f_a=f_a), Dust(law=name)
        np.testing.assert_allclose(mixed.curve(wave), pure.curve(wave), rtol=1e-3)


@pytest.mark.parametrize(
    ("settings", "message"),
    [
        ({"law": "CCM98"}, "unknown dust law 'CCM98': did you mean CCM89"),
        ({"law": "qq"}, "unknown dust law 'qq': use G23, F19"),
        ({"rv": 9.0}, r"R_V = 9 is outside the law G23: give a number between 2\.3 and 5\.6"),
        ({"prior": "flat"}, "unknown dust prior 'flat'"),
        ({"width": 0.0}, r"dust width = 0\.0 mag"),
        ({"mean": -1.0, "prior": "gaussian"}, r"dust mean = -1\.0 mag"),
        ({"f_a": 1.5, "law": "G16"}, r"f_a = 1\.5 is out of bounds"),
    ],
)
def test_bad_settings(settings: dict, message: str) -> None:
    with pytest.raises(DustError, match=message):
        Dust(**settings)


def test_settings_are_checked_without_loading_a_law() -> None:
    import subprocess
    import sys

    code = "import sys; from starkiln.dust import Dust; Dust('F99', 3.3); print(len(sys.modules))"
    code += "; sys.exit(any(m.startswith(('dust_ext', 'astropy', 'scipy')) for m in sys.modules))"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
