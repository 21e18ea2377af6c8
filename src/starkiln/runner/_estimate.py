"""How long a run will take, measured on a few of its own stars before it begins."""

from __future__ import annotations

import os
import time
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from starkiln.observations import Catalogue, Star
from starkiln.runner._catalogue import Recipe, fit_rows
from starkiln.runner._folder import RUN_FILE, done_rows, read_meta

#: Fewer rows than this are done before an estimate would be read.
LEAST_ROWS = 60
#: Stars that are timed, from places spread over the catalogue.
_TIMED = 3


@dataclass(frozen=True)
class Estimate:
    """How long what is left of a run will take.

    Attributes
    ----------
    rows : int
        Rows left.
    seconds : float
        With the engine that was asked for.
    quadrature_seconds : float or None
        With the quadrature engine; None where it is the one that was asked for.
    """

    rows: int
    seconds: float
    quadrature_seconds: float | None


def estimate(
    catalogue: Catalogue, folder: str | Path, recipe: Recipe, workers: int | None = None
) -> Estimate | None:
    """Time a few stars of a catalogue, and say how long the rest will take.

    Parameters
    ----------
    catalogue : Catalogue
    folder : str or pathlib.Path
        The run folder; rows that it holds already are not counted.
    recipe : Recipe
    workers : int, optional
        Processes; by default as many as there are cores.

    Returns
    -------
    Estimate or None
        None where fewer than `LEAST_ROWS` rows are left, or none of those looked at
        can be fitted.
    """
    target = Path(folder)
    if (target / RUN_FILE).exists() and read_meta(target)["complete"]:
        return None
    left = len(catalogue) - sum(stop - start for start, stop in done_rows(target))
    if left < LEAST_ROWS:
        return None
    places = [len(catalogue) * (2 * i + 1) // (2 * _TIMED) for i in range(_TIMED)]
    rows = [row for at in places for row in catalogue.rows(at, at + 1)]
    stars = [row for row in rows if isinstance(row, Star)]
    if not stars:
        return None
    share = left / min(workers or os.cpu_count() or 1, left)
    if recipe.engine != "quadrature" and recipe.settings.dust_rv_error:
        # A free R_V is beyond the quadrature engine.
        fit_rows([stars[0]], recipe)
        return Estimate(left, share * _seconds(stars, recipe), None)
    # The quadrature engine goes first and builds the tables, which then cost nobody.
    quick = replace(recipe, engine="quadrature")
    fit_rows(list(stars), quick)
    quick_seconds = share * _seconds(stars, quick)
    if recipe.engine == "quadrature":
        return Estimate(left, quick_seconds, None)
    return Estimate(left, share * _seconds(stars, recipe), quick_seconds)


def _seconds(stars: Sequence[Star], recipe: Recipe) -> float:
    """Return the mean time of a star."""
    begun = time.perf_counter()
    fit_rows(list(stars), recipe)
    return (time.perf_counter() - begun) / len(stars)
