"""Cells as they stand in a file, read as numbers, texts and limit flags."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln.observations._files import Source
from starkiln.observations._plan import Cells

__all__ = ["LIMIT_SIGNS", "Number", "flags_of", "numbers_of", "parse_number", "texts_of"]

#: Cells of text that hold nothing, in lower case.
_NOTHING = frozenset({"", "nan", "null", "none", "na", "n/a", "-", "--", "---", "...", "masked"})
#: Limit flags as they are written, and the sign that each means.
LIMIT_SIGNS = {"<": "<", ">": ">", "<=": "<", ">=": ">", "\u2264": "<", "\u2265": ">"}

#: None where nothing stands, a text where something stands that is no number.
Number = float | None | str


def numbers_of(source: Source, cells: Cells, start: int, stop: int) -> list[Number]:
    """Return the numbers of rows `start` to `stop` of a column."""
    data = _plain(source.cells(cells.heading, start, stop))
    codes = [code for item in cells.missing if isinstance(code := _as_number(item), float)]
    if data.dtype.kind in "fiub":
        values = _doubles(data).tolist()
        return [None if _is_code(value, codes) else value for value in values]
    words = _words(cells)
    return [
        _number(text, words, codes, source.decimal_comma)
        for text in texts_of(source, cells.heading, start, stop)
    ]


def texts_of(source: Source, heading: str, start: int, stop: int) -> list[str]:
    """Return the cells of a column as texts, empty where nothing stands."""
    return [_text(cell) for cell in _plain(source.cells(heading, start, stop)).tolist()]


def flags_of(source: Source, cells: Cells, start: int, stop: int) -> list[str]:
    """Return the cells of a column of flags, empty where they mean nothing."""
    nothing = _words(cells)
    texts = texts_of(source, cells.heading, start, stop)
    return ["" if text.casefold() in nothing else text for text in texts]


def parse_number(text: str, decimal_comma: bool) -> float | str:
    """Return the number that a text holds, or the text where it holds none."""
    plain = text.replace("\u2212", "-")
    if decimal_comma and "." not in plain:
        plain = plain.replace(",", ".")
    try:
        return float(plain) if "_" not in plain else text
    except ValueError:
        return text


def _doubles(data: Any) -> np.ndarray:
    """Return numbers in double precision, NaN where masked.

    A number in single precision is taken by the decimals that it prints, so that
    10.23 is the same star in FITS and in text.
    """
    if data.dtype.kind == "f" and data.dtype.itemsize == 4:
        return np.asarray(np.ma.filled(data, np.nan).astype(str), dtype=float)
    return np.asarray(np.ma.filled(data.astype(float), math.nan))


def _plain(column: Any) -> Any:
    """Return a column, with or without unit, as a bare masked array."""
    return np.ma.asarray(column.value if hasattr(column, "to_value") else column)


def _text(cell: Any) -> str:
    if cell is None:
        return ""
    if isinstance(cell, bytes):
        return cell.decode("utf-8", errors="replace").strip()
    return str(cell).strip()


def _words(cells: Cells) -> set[str]:
    return {str(item).strip().casefold() for item in cells.missing} | _NOTHING


def _as_number(item: Any) -> float | str:
    return float(item) if isinstance(item, int | float) else parse_number(str(item), False)


def _number(text: str, words: set[str], codes: list[float], decimal_comma: bool) -> Number:
    if text.casefold() in words:
        return None
    value = parse_number(text, decimal_comma)
    return None if isinstance(value, float) and _is_code(value, codes) else value


def _is_code(value: float, codes: list[float]) -> bool:
    return math.isnan(value) or any(math.isclose(value, code) for code in codes)
