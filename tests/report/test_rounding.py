"""Rounding of a value with two errors.

The first two rows are the examples that the Particle Data Group prints under
"Rounding" in the Introduction of the Review of Particle Physics (from memory);
the others follow from the rule by hand.
"""

import math

import pytest

from starkiln.report._rounding import round_asymmetric


@pytest.mark.parametrize(
    ("value", "plus", "minus", "texts"),
    [
        (0.827, 0.119, 0.119, ("0.83", "0.12", "0.12", 0)),
        (0.827, 0.367, 0.367, ("0.8", "0.4", "0.4", 0)),
        (0.827, 0.0987, 0.0987, ("0.83", "0.10", "0.10", 0)),
        (0.827, 0.0947, 0.0947, ("0.83", "0.09", "0.09", 0)),
        (5772.3, 81.2, 96.0, ("5770", "80", "100", 0)),
        (5772.3, 123.0, 400.0, ("5770", "120", "400", 0)),
        (0.2, 0.0028, 0.0031, ("0.2000", "0.0028", "0.0031", 0)),
        (3.14159e-9, 2.7e-11, 3.0e-11, ("3.142", "0.027", "0.030", -9)),
        (123456.0, 1100.0, 1100.0, ("1.235", "0.011", "0.011", 5)),
        (-0.02, 0.2, 0.2, ("-0.02", "0.20", "0.20", 0)),
        (-0.001, 0.2, 0.2, ("0.00", "0.20", "0.20", 0)),
        (12.0, 0.0, 0.0, ("12.0000", "0.0000", "0.0000", 0)),
        (12.0, 0.34, 0.0, ("12.00", "0.34", "0.00", 0)),
    ],
)
def test_rule(value, plus, minus, texts):
    rounded = round_asymmetric(value, value - minus, value + plus)
    assert (rounded.value, rounded.plus, rounded.minus, rounded.exponent) == texts


def test_a_missing_number_is_not_rounded():
    assert round_asymmetric(math.nan, 1.0, 2.0) is None
    assert round_asymmetric(1.0, 0.5, math.inf) is None
