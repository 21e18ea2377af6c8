"""Sums as an observer asks for them: each answer with formula, unit and reference."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Any, NamedTuple

import numpy as np

from starkiln._units import as_float

#: The formula's name of a row that only repeats what was given.
INPUT = "input"


class Answer(NamedTuple):
    """One line of a sum.

    Attributes
    ----------
    quantity : str
        What it is.
    value : float or numpy.ndarray
        In `unit`; an array where the inputs were draws.
    unit : str
        astropy's spelling; empty for a pure number.
    formula : str
        Name of the formula, or `INPUT`.
    reference : str
        Author and year; empty for an input.
    """

    quantity: str
    value: Any
    unit: str
    formula: str
    reference: str


def echo(quantity: str, value: Any, unit: str) -> Answer:
    """Return the row that repeats an input."""
    return Answer(quantity, value, unit, INPUT, "")


def spread(
    sums: Callable[..., list[Answer]], inputs: Mapping[str, Any], errors: Mapping[str, Any]
) -> tuple[list[Answer], list[float], list[float]]:
    """Work out sums and how far the errors of their inputs move each answer.

    Parameters
    ----------
    sums : callable
        Takes `inputs` as keywords and returns answers.
    inputs : mapping
        Every input by name.
    errors : mapping
        Standard errors of some of them, at least 0, in the same units.

    Returns
    -------
    answers : list of Answer
    low, high : list of float
        Ends of the 68 per cent interval: each input in turn is moved by one standard
        error down and up, and the shifts of an answer are added in quadrature on
        either side. Exact for one uncertain input of a monotonic formula; to first
        order for several, taken as independent. An answer that no error touches
        has NaN.
    """
    answers = sums(**inputs)
    central = np.array([float(a.value) for a in answers])
    below, above = np.zeros_like(central), np.zeros_like(central)
    for name, given in errors.items():
        error = as_float(given, "", f"error of {name}", lower=0.0)
        ends = [
            np.array(
                [float(a.value) for a in sums(**{**inputs, name: inputs[name] + sign * error})]
            )
            for sign in (-1.0, 1.0)
        ]
        with np.errstate(invalid="ignore"):
            shifts = np.stack(ends) - central
        shifts = np.nan_to_num(shifts, nan=0.0, posinf=math.inf, neginf=-math.inf)
        below = np.hypot(below, np.maximum(-np.min(shifts, axis=0), 0.0))
        above = np.hypot(above, np.maximum(np.max(shifts, axis=0), 0.0))
    touched = (below > 0.0) | (above > 0.0)
    low = np.where(touched, central - below, math.nan)
    high = np.where(touched, central + above, math.nan)
    return answers, low.tolist(), high.tolist()
