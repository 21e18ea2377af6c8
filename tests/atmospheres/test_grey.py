"""The grey atmosphere against published tables."""

import numpy as np
import pytest

from starkiln.atmospheres import chandrasekhar_h, grey_limb_darkening, grey_temperature, hopf
from starkiln.errors import InputError

# Mihalas 1978, Stellar Atmospheres, Table 3-2 (from memory).
HOPF = {
    0.0: 0.577351,
    0.01: 0.588236,
    0.03: 0.601242,
    0.1: 0.627919,
    0.2: 0.649550,
    0.3: 0.663365,
    0.6: 0.685801,
    1.0: 0.698540,
    1.5: 0.705130,
    2.0: 0.707916,
    3.0: 0.709806,
}
# Chandrasekhar 1950, Radiative Transfer, Table XI, albedo 1 (from memory).
H_FUNCTION = {0.0: 1.0, 0.1: 1.24735, 0.2: 1.45035, 0.5: 2.01278, 0.8: 2.55270, 1.0: 2.90781}


@pytest.mark.parametrize(("tau", "q"), HOPF.items())
def test_hopf_function(tau, q):
    assert hopf(np.array(tau)) == pytest.approx(q, abs=3e-6)


@pytest.mark.parametrize(("mu", "h"), H_FUNCTION.items())
def test_chandrasekhar_h(mu, h):
    assert chandrasekhar_h(np.array(mu)) == pytest.approx(h, abs=6e-6)


def test_hopf_at_the_surface_is_exact():
    # Hopf and Bronstein: q(0) = 1/sqrt 3.
    assert hopf(np.array(0.0)) == pytest.approx(3**-0.5, abs=1e-8)


def test_h_obeys_its_integral_equation():
    # Chandrasekhar 1950, chapter V: int_0^1 H dmu = 2 and int_0^1 mu H dmu = 2/sqrt 3, albedo 1.
    x, w = np.polynomial.legendre.leggauss(64)
    h = chandrasekhar_h(0.5 * (x + 1))
    assert 0.5 * w @ h == pytest.approx(2.0, abs=1e-5)
    assert 0.25 * w @ ((x + 1) * h) == pytest.approx(2.0 / np.sqrt(3.0), abs=1e-5)


def test_surface_and_effective_temperature():
    # T(0)/T_eff: 0.8114 exactly (Mihalas 1978, section 3-3), 2^(-1/4) = 0.8409 by Eddington.
    assert grey_temperature(0.0, 1e4).to_value("K") == pytest.approx(8111.8, abs=1.0)
    assert grey_temperature(0.0, 1e4, "eddington").to_value("K") == pytest.approx(8409.0, abs=1.0)
    assert grey_temperature(2 / 3, 5772.0, "eddington").to_value("K") == pytest.approx(5772.0)


def test_limb_darkening():
    # Mihalas 1978, section 3-3: 0.344 at the limb; Eddington 0.4.
    assert grey_limb_darkening(np.array(0.0)) == pytest.approx(0.3439, abs=2e-4)
    np.testing.assert_allclose(
        grey_limb_darkening(np.array([0.0, 0.5, 1.0]), "eddington"), [0.4, 0.7, 1.0]
    )


@pytest.mark.parametrize(
    "call",
    [
        lambda: hopf(np.array(-1.0)),
        lambda: chandrasekhar_h(np.array(1.5)),
        lambda: grey_temperature(1.0, -5.0),
        lambda: grey_limb_darkening(np.array(0.5), "other"),
    ],
)
def test_bad_input_is_refused(call):
    with pytest.raises(InputError, match="give"):
        call()
