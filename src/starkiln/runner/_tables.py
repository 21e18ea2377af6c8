"""The tables of a run: results, one row per star, and photometry, one row per measurement."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Any

import numpy as np

from starkiln.derived import QUANTITIES
from starkiln.observations import Star
from starkiln.runner._model import PER_UM

#: Columns before the quantities, and after them: name -> (kind, unit, description).
HEAD = {
    "name": ("U", "", "star, as the catalogue names it"),
    "status": ("U", "", "ok, unconverged or rejected"),
    "message": ("U", "", "what must be known of this row"),
    "flags": ("U", "", "warnings, separated by spaces"),
    "engine": ("U", "", "engine that explored the posterior"),
    "emitter": ("U", "", "model of the star's spectrum"),
    "n_bands": ("i4", "", "usable bands, limits included"),
}
TAIL = {
    "n_eff": ("f8", "", "effective draws, smallest over the parameters"),
    "fit_probability": ("f8", "", "posterior predictive probability, quoted errors alone"),
    "log_evidence": ("f8", "", "ln of the evidence"),
    "seed": ("i8", "", "seed of the run"),
}
_EDGES = {"": "median of", "_lo": "16th percentile of", "_hi": "84th percentile of"}
PHOTOMETRY_COLUMNS = {
    "row": ("i8", "", "row of the catalogue, counted from 1"),
    "name": ("U", "", "star, as the catalogue names it"),
    "band": ("U", "", "passband"),
    "flux": ("f8", "W / (m2 um)", "band-mean flux density, or the limit"),
    "e_flux": ("f8", "W / (m2 um)", "its error"),
    "limit": ("U", "", "empty, or upper or lower limit of the flux"),
    "used": ("?", "", "whether it entered the fit"),
    "note": ("U", "", "why it was widened or left out"),
}


def result_columns(quantities: Iterable[str]) -> dict[str, tuple[str, str, str]]:
    """Return the columns of a results table that holds `quantities`, in order."""
    middle = {
        f"{name}{edge}": ("f8", QUANTITIES[name].unit, f"{words} {QUANTITIES[name].text}")
        for name in quantities
        for edge, words in _EDGES.items()
    }
    return {**HEAD, **middle, **TAIL}


def result_row(result: Any) -> dict[str, Any]:
    """Return one row of the results from a `FitResult`."""
    row = {
        "name": result.star.name,
        "status": result.status,
        "message": result.message,
        "flags": " ".join(result.flags),
        "engine": result.engine,
        "emitter": result.emitter,
        "n_bands": result.n_bands,
        "n_eff": result.n_eff,
        "fit_probability": result.fit_probability,
        "log_evidence": result.log_evidence,
        "seed": result.seed,
    }
    for name, (middle, low, high) in result.summary.items():
        row.update({name: middle, f"{name}_lo": low, f"{name}_hi": high})
    return row


def rejected_row(
    name: str, message: str, *, engine: str, emitter: str, seed: int
) -> dict[str, Any]:
    """Return the row of a star that could not be fitted."""
    return {
        "name": name,
        "status": "rejected",
        "message": message,
        "flags": "",
        "engine": engine,
        "emitter": emitter,
        "n_bands": 0,
        "seed": seed,
    }


def build_table(
    rows: Sequence[Mapping[str, Any]], columns: Mapping[str, tuple[str, str, str]]
) -> Any:
    """Return an `astropy.table.Table` of `rows`; a value that is absent or NaN is masked."""
    from astropy.table import MaskedColumn, Table

    table = Table()
    for name, (kind, unit, text) in columns.items():
        values = [row.get(name) for row in rows]
        table[name] = _column(values, kind, MaskedColumn)
        table[name].description = text
        if unit:
            table[name].unit = unit
    return table


def photometry_rows(stars: Iterable[Star]) -> list[dict[str, Any]]:
    """Return the measurements of `stars`, then the bands left out, as photometry rows."""
    rows = []
    for star in stars:
        head = {"row": star.row or 0, "name": star.name}
        rows += [
            {
                **head,
                "band": item.band,
                "flux": item.flux_w_m3 * PER_UM,
                "e_flux": item.error_w_m3 * PER_UM,
                "limit": item.limit,
                "used": True,
                "note": item.note,
            }
            for item in star.measurements
        ]
        rows += [
            {**head, "band": band, "limit": "", "used": False, "note": why}
            for band, why in star.left_out
        ]
    return rows


def photometry_table(stars: Iterable[Star]) -> Any:
    """Return the measurements of `stars` as an `astropy.table.Table`."""
    return build_table(photometry_rows(stars), PHOTOMETRY_COLUMNS)


def _column(values: list[Any], kind: str, masked_column: Any) -> Any:
    if kind == "U":
        return np.array(["" if value is None else str(value) for value in values], dtype=str)
    if kind == "?":
        return np.array(values, dtype=bool)
    if kind == "f8":
        numbers = np.array([np.nan if value is None else value for value in values], dtype=float)
        return masked_column(numbers, mask=np.isnan(numbers))
    absent = np.array([value is None for value in values], dtype=bool)
    return masked_column(
        np.array([0 if value is None else value for value in values], dtype=kind), mask=absent
    )
