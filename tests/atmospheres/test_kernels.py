"""The transfer solver against the exact grey atmosphere."""

import numpy as np
import pytest

from starkiln.atmospheres import chandrasekhar_h, hopf
from starkiln.atmospheres._kernels import intervals, radiation_field, solve_tridiagonal


def test_tridiagonal_solver_against_numpy():
    rng = np.random.default_rng(1)
    n = 12
    below, above, loss, right = rng.uniform(0.1, 2.0, (4, n, 1))
    below[0], above[-1] = 0.0, 0.0
    matrix = np.diag((below + above + loss)[:, 0])
    matrix -= np.diag(below[1:, 0], -1) + np.diag(above[:-1, 0], 1)
    got = solve_tridiagonal(below, above, loss, right)[:, 0]
    np.testing.assert_allclose(got, np.linalg.solve(matrix, right[:, 0]), rtol=1e-12)


@pytest.fixture(scope="module")
def grey():
    tau = np.logspace(-5.5, 2.2, 56)
    planck = (0.75 * (tau + hopf(tau)))[:, None]
    first, steps = intervals(np.ones((56, 1)), tau)
    return tau, planck, first, steps


def test_grey_source_function_gives_constant_flux(grey):
    _, planck, first, steps = grey
    # B = (3/4)(tau + q) carries Eddington flux 1/4 (Hopf 1934).
    field = radiation_field(planck, np.ones_like(planck), first, steps, None, n_angle=8)
    np.testing.assert_allclose(field.h, 0.25, rtol=3e-3)
    assert field.h_surface[0] == pytest.approx(0.25, rel=2e-3)
    # In radiative equilibrium J = B everywhere.
    np.testing.assert_allclose(field.j, planck, rtol=3e-3)


def test_eddington_factors(grey):
    # 1/3 within; at the surface K/J = q(inf)/sqrt 3 = 0.4102, H/J = 1/sqrt 3 (Mihalas 1978, 3-3).
    _, planck, first, steps = grey
    field = radiation_field(planck, np.ones_like(planck), first, steps, None, n_angle=8)
    assert field.factor[-1, 0] == pytest.approx(1.0 / 3.0, abs=1e-3)
    assert field.factor[0, 0] == pytest.approx(0.710446 / 3**0.5, abs=2e-3)
    assert field.surface_factor[0] == pytest.approx(3**-0.5, abs=3e-3)


def test_scattering_thermalises(grey):
    # A half-space of constant B with loss e has S(0) = sqrt(e) B exactly (Mihalas 1978, 7-1).
    _, planck, first, steps = grey
    loss = 0.01
    thermal = np.full_like(planck, loss)
    factors = None
    for _ in range(6):
        field = radiation_field(np.ones_like(planck), thermal, first, steps, factors, n_angle=8)
        factors = (field.factor, field.surface_factor, field.bottom_factor)
    source = loss + (1.0 - loss) * field.j[0, 0]
    assert source == pytest.approx(loss**0.5, rel=0.01)


def test_finer_depths_do_not_matter(grey):
    fluxes = []
    for n in (28, 56, 112):
        tau = np.logspace(-5.5, 2.2, n)
        planck = (0.75 * (tau + hopf(tau)))[:, None]
        first, steps = intervals(np.ones((n, 1)), tau)
        field = radiation_field(planck, np.ones_like(planck), first, steps, None, n_angle=3)
        fluxes.append(field.h_surface[0])
    assert abs(fluxes[0] / 0.25 - 1) < 0.01
    assert abs(fluxes[2] / fluxes[1] - 1) < 2e-3


def test_limb_darkening_of_the_grey_solution():
    from starkiln.atmospheres._kernels import couplings, feautrier

    tau = np.logspace(-5.5, 2.2, 112)
    planck = (0.75 * (tau + hopf(tau)))[:, None]
    first, steps = intervals(np.ones((112, 1)), tau)
    below, above = couplings(steps)
    gradient = (planck[-1] - planck[-2]) / steps[-1]
    for mu in (0.2, 0.5, 1.0):
        mean = feautrier((below * mu**2, above * mu**2), planck, 0 * first, gradient, steps, mu)
        # I(0, mu) = (sqrt 3/4) F H(mu), F = 1 (Chandrasekhar 1950, section 26).
        want = 3**0.5 / 4 * chandrasekhar_h(np.array(mu))
        assert 2.0 * mean[0, 0] == pytest.approx(want, rel=3e-3)
