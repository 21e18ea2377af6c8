"""Label places: held against a general constrained minimiser."""

import numpy as np
import pytest
from scipy.optimize import minimize

from starkiln.report._spread import spread


@pytest.mark.parametrize("seed", range(6))
def test_least_squared_displacement(seed):
    """scipy's SLSQP minimises the same sum under the same constraints."""
    rng = np.random.default_rng(seed)
    wanted = np.sort(rng.uniform(0, 1, 6))
    places = spread(wanted, 0.12, 0.0, 1.0)
    gaps = [
        {"type": "ineq", "fun": lambda x, i=i: x[i + 1] - x[i] - 0.12}
        for i in range(len(wanted) - 1)
    ]
    best = minimize(
        lambda x: np.sum((x - wanted) ** 2),
        np.linspace(0, 1, 6),
        bounds=[(0, 1)] * 6,
        constraints=gaps,
        options={"ftol": 1e-14, "maxiter": 500},
    )
    np.testing.assert_allclose(places, best.x, atol=2e-4)


def test_order_of_the_input_is_kept():
    places = spread([0.9, 0.1, 0.1], 0.2, 0.0, 1.0)
    assert places[0] == pytest.approx(0.9)
    assert places[2] - places[1] == pytest.approx(0.2)


def test_too_many_for_the_line_still_stand_apart():
    places = spread([0.5] * 30, 0.12, 0.0, 1.0)
    assert places.min() >= 0.0
    assert places.max() <= 1.0 + 1e-12
    np.testing.assert_allclose(np.diff(places), 1 / 29)
