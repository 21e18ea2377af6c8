from pathlib import Path

import numpy as np
import pytest

from starkiln.errors import InputError
from starkiln.gases import fermi_dirac, fermi_moments

REFERENCE = np.loadtxt(
    Path(__file__).parent.parent / "reference" / "fermi_dirac.csv", delimiter=",", skiprows=2
)


@pytest.mark.parametrize(("column", "k"), [(2, 0.5), (3, 1.5), (4, 2.5)])
def test_against_multiprecision(column, k):
    # mpmath at 30 digits: scripts/make_fermi_reference.py.
    eta, theta = REFERENCE[:, 0], REFERENCE[:, 1]
    error = np.abs(fermi_dirac(k, eta, theta) / REFERENCE[:, column] - 1.0)
    assert error[theta <= 1.0].max() < 1e-12
    assert error.max() < 3e-11


def test_published_values():
    # Independent multiprecision values, printed digits.
    assert fermi_dirac(0.5, [0.0, 1.0, 4.0, 20.0]) == pytest.approx(
        [0.678093895153101, 1.39637528067, 5.77072652760, 59.8127953704], rel=5e-12
    )
    values = [fermi_dirac(k, 0.0, 1.0) for k in (0.5, 1.5, 2.5)]
    assert values == pytest.approx([0.910058252873234, 1.7388257662295, 5.10487220174744], 1e-13)
    assert fermi_dirac(2.5, 100.0, 0.01) == pytest.approx(3370773.07083414, rel=1e-13)


def test_thin_gas_is_a_gamma_function():
    # F_k(eta, 0) -> Gamma(k + 1) e^eta as eta -> -infinity (scipy).
    from scipy.special import gamma

    for k in (-0.5, 0.5, 1.5, 2.5, 3.5, 4.5):
        assert fermi_dirac(k, -60.0) == pytest.approx(gamma(k + 1) * np.exp(-60.0), rel=1e-11)


def test_cold_gas_is_the_filled_sea():
    # F_k(eta, 0) -> eta^(k+1)/(k+1) (1 + pi^2 k (k+1)/(6 eta^2) + ...): Sommerfeld 1928.
    eta = 1e5
    for k in (0.5, 1.5, 2.5):
        sea = eta ** (k + 1) / (k + 1) * (1 + np.pi**2 * k * (k + 1) / (6 * eta**2))
        assert fermi_dirac(k, eta) == pytest.approx(sea, rel=1e-13)


@pytest.mark.parametrize("theta", [0.0, 1e-3, 0.3, 5.0])
def test_moments_obey_thermodynamics(theta):
    # dP/dmu = n, ds/dmu = dn/dT and the entropy of Euler's relation, by differences.
    eta = np.array([-12.0, -3.0, 0.7, 8.0, 35.0, 60.0])
    m = fermi_moments(eta, theta)
    h = 1e-3
    step = [fermi_moments(eta + i * h, theta) for i in (-2, -1, 1, 2)]

    def slope(name):
        a, b, c, d = (getattr(item, name) for item in step)
        return (8 * (c - b) - (d - a)) / (12 * h)

    assert slope("pressure") * 2 / 3 == pytest.approx(m.number, rel=1e-9)
    assert slope("number") == pytest.approx(m.edge_0, rel=1e-9)
    assert slope("entropy") == pytest.approx(m.edge_1, rel=1e-8)
    euler = m.energy + 2 / 3 * m.pressure - eta * m.number
    assert euler == pytest.approx(m.entropy, rel=1e-10)


def test_shapes_broadcast():
    assert fermi_dirac(0.5, np.zeros((3, 1)), np.zeros(2)).shape == (3, 2)
    assert fermi_dirac(0.5, 0.0).shape == ()


@pytest.mark.parametrize(
    ("k", "eta", "theta"), [(1.0, 0.0, 0.0), (0.5, np.nan, 0.0), (0.5, 0.0, -1.0)]
)
def test_bad_arguments_are_refused(k, eta, theta):
    with pytest.raises(InputError):
        fermi_dirac(k, eta, theta)
