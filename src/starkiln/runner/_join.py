"""From the parts of a run to its tables."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from starkiln.derived import QUANTITIES
from starkiln.errors import RunFolderError
from starkiln.observations import Catalogue
from starkiln.runner._folder import DRAWS, read_parts
from starkiln.runner._tables import (
    PHOTOMETRY_COLUMNS,
    build_table,
    result_columns,
)
from starkiln.store import table_name, write_table

_ALWAYS = ("temperature", "angular_diameter", "av", "misfit", "bolometric_flux")
_WITH_DISTANCE = ("distance", "radius", "luminosity")


def join_parts(folder: Path, catalogue: Catalogue, keep_draws: bool, file_format: str) -> None:
    """Write `results`, `photometry` and the draws of a run whose parts are all there.

    Raises
    ------
    RunFolderError
        A stretch of rows is missing.
    """
    results: list[dict[str, Any]] = []
    photometry: list[dict[str, Any]] = []
    draws: list[dict[str, np.ndarray] | None] = []
    for part in read_parts(folder):
        done = len(results)
        if part.start > done:
            raise RunFolderError(
                f"{folder}: rows {done + 1} to {part.start} are missing; run again"
            )
        # A row that stands in two parts is the same in both.
        results += part.results[done - part.start :]
        photometry += [row for row in part.photometry if row["row"] > done]
        draws += part.draws[done - part.start :]
    quantities = _quantities(results, catalogue)
    write_table(
        build_table(results, result_columns(quantities)),
        folder / table_name("results", file_format),
        file_format,
    )
    write_table(
        build_table(photometry, PHOTOMETRY_COLUMNS),
        folder / table_name("photometry", file_format),
        file_format,
    )
    if keep_draws and any(item is not None for item in draws):
        names = [row["name"] for row in results]
        write_table(_draws_table(names, draws, quantities), folder / DRAWS, "fits")


def _quantities(results: list[dict[str, Any]], catalogue: Catalogue) -> list[str]:
    """Return the quantities of the table's columns, from the catalogue and the fits."""
    wanted = set(_ALWAYS)
    if catalogue.has("parallax") or catalogue.has("distance"):
        wanted.update(_WITH_DISTANCE)
    for row in results:
        wanted.update(QUANTITIES.keys() & row.keys())
    return [name for name in QUANTITIES if name in wanted]


def _draws_table(
    names: list[str], draws: list[dict[str, np.ndarray] | None], quantities: list[str]
) -> Any:
    """Return one row per star, each quantity a vector of draws; NaN where there are none."""
    from astropy.table import Table

    count = max(len(next(iter(item.values()))) for item in draws if item is not None)
    table = Table({"name": np.array(names, dtype=str)})
    for quantity in quantities:
        values = np.full((len(draws), count), np.nan, dtype=np.float32)
        for i, item in enumerate(draws):
            if item is not None and quantity in item:
                values[i] = item[quantity]
        table[quantity] = values
        table[quantity].description = f"draws of {QUANTITIES[quantity].text}"
        if QUANTITIES[quantity].unit:
            table[quantity].unit = QUANTITIES[quantity].unit
    return table
