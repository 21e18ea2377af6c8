"""Text with separators, as spreadsheets, archives and people write it."""

from __future__ import annotations

import csv
import io
import re
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError, InputError
from starkiln.observations._headings import duplicates, meaning_of
from starkiln.observations._units_of_columns import parse_unit

__all__ = ["delimited"]

_DELIMITERS = {",": "commas", ";": "semicolons", "\t": "tabs", "|": "bars"}
_NUMBER = re.compile(r"[+-]?(\d+[.,]?\d*|[.,]\d+)([eE][+-]?\d+)?")
#: A line that rules off a heading: dashes, and the separators between them. Three
#: dashes or fewer stand for "missing" in some catalogues.
_RULE = re.compile(r"(?=.*-{4})[\s|+:=;-]+")

Row = tuple[int, list[str]]  # the line's number in the file, and its cells


class _Lines:
    """The lines of a text that hold cells, and the comments.

    Attributes
    ----------
    path : pathlib.Path
        Of the file, for messages.
    rows : list of (int, str)
        Line number in the file and line.
    comments : list of str
        Lines with `#` before the first row, without the sign.
    later : int
        How many lines with `#` follow after it.
    """

    def __init__(self, path: Path, text: str) -> None:
        self.path = path
        self.rows: list[tuple[int, str]] = []
        self.comments: list[str] = []
        self.later = 0
        for number, line in enumerate(re.split(r"\r\n|\r|\n", text), 1):
            if line.lstrip().startswith("#"):
                if self.rows:
                    self.later += 1
                else:
                    self.comments.append(line.lstrip().lstrip("#"))
            elif line.strip():
                self.rows.append((number, line))

    def delimiter(self) -> str:
        """Return the separator, a space for white space, found from the first line."""
        first = self.rows[0][1]
        if match := re.fullmatch(r"\s*sep=(.)\s*", first):
            del self.rows[0]  # a line that spreadsheets write for each other
            return match[1]
        counts = {mark: first.count(mark) for mark in _DELIMITERS}
        best = max(counts, key=lambda mark: counts[mark])
        return best if counts[best] else " "

    def split(self, delimiter: str) -> list[Row]:
        """Cut the rows into cells."""
        return _split(self.path, self.rows, delimiter)


def delimited(path: Path, text: str, remarks: list[str]) -> tuple[Any, str]:
    """Read a delimited text into a table of strings.

    Parameters
    ----------
    path : pathlib.Path
    text : str
    remarks : list of str
        What had to be decided is added.

    Returns
    -------
    astropy.table.Table, str
        And the kind of text.

    Raises
    ------
    CatalogueError
        No headings, ragged, or two headings alike.
    """
    lines = _Lines(path, text)
    if not lines.rows:
        raise CatalogueError(f"{path}: there are only comments, no table")
    delimiter = lines.delimiter()
    header, units, rows = _header(lines, delimiter)
    while header and not header[-1].strip():
        header.pop()
    _check_ragged(path, header, [(0, units), *rows] if units else rows, delimiter)
    full = [row for row in rows if any(cell.strip() for cell in row[1])]
    if len(full) < len(rows):
        remarks.append(f"{len(rows) - len(full)} lines hold nothing but separators; passed over")
    if lines.later:
        remarks.append(f"{lines.later} lines after the heading begin with # and are comments")
    kind = "CSV" if delimiter == "," else f"text with {_DELIMITERS.get(delimiter, 'spaces')}"
    return _table(_names(path, header), units, full), kind


def _check_ragged(path: Path, header: list[str], rows: list[Row], delimiter: str) -> None:
    """Refuse a row whose count of cells differs from the heading's; empty ones may follow.

    Raises
    ------
    CatalogueError
        Naming the line, and both counts.
    """
    for number, cells in rows:
        extra = cells[len(header) :]
        if len(cells) < len(header) or any(cell.strip() for cell in extra):
            line = f"line {number}" if number else "the line of units"
            known = delimiter != " " or any(meaning_of(heading) for heading in header)
            file = f"{path}" if known else f"{path} does not look like a table"
            raise CatalogueError(
                f"{file}, {line}: found {len(cells)} cells where the heading has {len(header)} "
                f"(separated by {_DELIMITERS.get(delimiter, 'spaces')}); leave an empty cell for "
                "a missing value, and quote a text that holds the separator"
            )


def _split(path: Path, lines: list[tuple[int, str]], delimiter: str) -> list[Row]:
    texts = [line for _, line in lines]
    if delimiter == " ":
        texts = [line.strip().replace("\t", " ") for line in texts]
    stream = io.StringIO("\n".join(texts), newline="")
    reader = csv.reader(stream, delimiter=delimiter, skipinitialspace=True)
    rows = []
    try:
        for cells in reader:
            number = lines[min(reader.line_num, len(lines)) - 1][0]
            rows.append((number, cells))
    except csv.Error as error:
        number = lines[min(reader.line_num, len(lines)) - 1][0]
        raise CatalogueError(f"{path}, line {number} cannot be read: {error}") from error
    return rows


def _header(lines: _Lines, delimiter: str) -> tuple[list[str], list[str], list[Row]]:
    """Return the headings, the units (empty for none) and the rows below them."""
    path = lines.path
    rules = [i for i, (_, line) in enumerate(lines.rows[:4]) if _RULE.fullmatch(line)]
    for place in reversed(rules):
        del lines.rows[place]
    if not lines.rows:
        raise CatalogueError(f"{path} is not a table: it holds only lines of dashes")
    rows = lines.split(delimiter)
    first = rows[0][1]
    numbers = [cell for cell in first if _NUMBER.fullmatch(cell.strip())]
    if numbers:
        # Some programs write the heading as the last comment.
        for comment in reversed(lines.comments[-1:]):
            commented = _split(path, [(0, comment.strip())], delimiter)[0][1]
            if len(commented) == len(first):
                return commented, [], rows
        if 2 * len(numbers) >= len(first):
            raise CatalogueError(
                f"{path}, line {rows[0][0]}: the first line holds numbers, not headings; put a "
                "line of headings above it, such as name, 2MASS J, e_2MASS J"
            )
    if len(rows) > 1 and (2 in rules or _are_units(rows[1][1])):
        return first, rows[1][1], rows[2:]
    return first, [], rows[1:]


def _are_units(cells: list[str]) -> bool:
    """Whether a line below the heading holds units: two at least, and no number."""
    known = 0
    for cell in filter(None, (cell.strip() for cell in cells)):
        if _NUMBER.fullmatch(cell):
            return False
        try:
            known += parse_unit(cell).text != ""
        except InputError:
            continue
    return known >= 2


def _names(path: Path, header: list[str]) -> list[str]:
    names = [cell.strip() or f"column {place}" for place, cell in enumerate(header, 1)]
    twice = duplicates(names)
    if twice:
        places = [str(i) for i, name in enumerate(names, 1) if name == twice[0]]
        raise CatalogueError(
            f"{path}: the heading '{twice[0]}' stands over columns {' and '.join(places)}; "
            "rename one of them"
        )
    return names


def _table(names: list[str], units: list[str], rows: list[Row]) -> Any:
    from astropy import units as u
    from astropy.table import MaskedColumn, Table

    table = Table()
    for place, name in enumerate(names):
        unit = units[place].strip() if place < len(units) else ""
        known = u.Unit(unit, parse_strict="silent") if unit else None
        cells = [cells[place].strip() for _, cells in rows]
        table[name] = MaskedColumn(cells, name=name, dtype=str, unit=known)
    return table
