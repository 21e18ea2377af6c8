"""A catalogue: opened, its columns understood, its rows handed out in pieces."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError
from starkiln.observations._cells import numbers_of, texts_of
from starkiln.observations._files import Source, open_source
from starkiln.observations._layout import lay_out
from starkiln.observations._plan import Column, Layout
from starkiln.observations._propose import propose_sheet
from starkiln.observations._quantities import RV_MEAN
from starkiln.observations._rows import build_rows
from starkiln.observations._sheet import Sheet, read_sheet
from starkiln.observations._star import BadRow, Star

__all__ = ["Catalogue", "read_catalogue", "survey_catalogue"]


class Catalogue:
    """A catalogue of stars; see `read_catalogue`.

    Attributes
    ----------
    path : pathlib.Path
    checksum : str
        SHA-256 of the file.
    errors, warnings : list of str
        What is wrong with the columns, and what to know of them.
    """

    def __init__(self, source: Source, sheet: Sheet, layout: Layout, rv: float) -> None:
        self._source, self._sheet, self._layout, self._rv = source, sheet, layout, rv
        self.path: Path = source.path
        self.checksum: str = source.checksum
        self.errors: list[str] = layout.errors
        remarks = [f"{source.path}: {remark}" for remark in source.remarks]
        self.warnings: list[str] = remarks + layout.warnings + self._same_names()

    def __len__(self) -> int:
        return len(self._source)

    def __repr__(self) -> str:
        return f"<Catalogue {self.path.name}: {len(self)} rows, {len(self.bands)} bands>"

    @property
    def format(self) -> str:
        """The file's format, as found from its content."""
        return self._source.kind

    @property
    def sheet_checksum(self) -> str:
        """SHA-256 of what the column sheet says."""
        return self._sheet.checksum()

    def has(self, meaning: str) -> bool:
        """Whether a column of that meaning, such as `parallax`, is in use."""
        return any(column.used and column.meaning == meaning for column in self.columns)

    @property
    def bands(self) -> tuple[str, ...]:
        """Names of the bands in use."""
        return tuple(band.reading.band for band in self._layout.bands)

    @property
    def columns(self) -> list[Column]:
        """What was understood of each column, in the order of the file."""
        return list(self._layout.columns.values())

    @property
    def input_table(self) -> Any:
        """The file as an `astropy.table.Table`, with its units and descriptions."""
        return self._source.table

    def rows(self, start: int = 0, stop: int | None = None) -> list[Star | BadRow]:
        """Return some rows as stars.

        Parameters
        ----------
        start, stop : int
            Places from 0; `stop` itself is left out, None for the end.

        Returns
        -------
        list of Star or BadRow
            In the order of the file.
        """
        begin, end, _ = slice(start, stop).indices(len(self))
        return build_rows(self._source, self._layout, self._sheet, begin, end, self._rv)

    def filled(self) -> dict[str, int]:
        """Return, for each column of numbers in use, how many cells hold something."""
        return {
            cells.heading: sum(
                number is not None for number in numbers_of(self._source, cells, 0, len(self))
            )
            for cells in self._layout.cells()
        }

    def proposal(self) -> str:
        """Return a column sheet for headings that look useful and are not understood."""
        return propose_sheet(self._source, self._layout, self._sheet)

    def _same_names(self) -> list[str]:
        if not self._layout.name:
            return []
        places: dict[str, list[int]] = {}
        for row, name in enumerate(texts_of(self._source, self._layout.name, 0, len(self)), 1):
            places.setdefault(name, []).append(row)
        twice = {name: rows for name, rows in places.items() if name and len(rows) > 1}
        if not twice:
            return []
        name, rows = next(iter(twice.items()))
        more = f" (and {len(twice) - 1} more names)" if len(twice) > 1 else ""
        where = " and ".join(str(row) for row in rows[:3]) + (" ..." if len(rows) > 3 else "")
        return [
            f"{self.path}: the name '{name}' stands in rows {where}{more}; "
            "each row is a star of its own"
        ]


def survey_catalogue(
    path: str | Path, *, columns: str | Path | None = None, rv: float = RV_MEAN
) -> Catalogue:
    """Open a catalogue like `read_catalogue`, but keep what is wrong in `errors`."""
    sheet = read_sheet(columns)
    source = open_source(path)
    return Catalogue(source, sheet, lay_out(source, sheet), rv)


def read_catalogue(
    path: str | Path, *, columns: str | Path | None = None, rv: float = RV_MEAN
) -> Catalogue:
    """Open a catalogue and understand its columns.

    Parameters
    ----------
    path : str or pathlib.Path
        ECSV, CSV or other delimited text, FITS, VOTable, CDS or IPAC; the format
        is found from the content.
    columns : str or pathlib.Path, optional
        Column sheet (TOML) for headings that are not starkiln's own.
    rv : float
        R_V with which E(B-V) turns into A_V where a row gives no `rv`.

    Returns
    -------
    Catalogue

    Raises
    ------
    CatalogueError
        The file or the sheet cannot be used. A single bad row raises nothing: it
        comes out of `rows` as a `BadRow`.
    """
    catalogue = survey_catalogue(path, columns=columns, rv=rv)
    if catalogue.errors:
        more = len(catalogue.errors) - 1
        tail = f" (and {more} more; `starkiln inspect` lists them)" if more else ""
        raise CatalogueError(catalogue.errors[0] + tail)
    return catalogue
