"""Catalogue files of every format, opened as one kind of table."""

from __future__ import annotations

import gzip
import hashlib
import io
import warnings
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError
from starkiln.observations._text import read_text_table

__all__ = ["Source", "open_source"]

_FORMATS = "ECSV, CSV, FITS, VOTable, CDS, IPAC or plain text columns"


@dataclass
class Source:
    """An opened catalogue file.

    Attributes
    ----------
    path : pathlib.Path
    kind : str
        The format that was found, from the content, whatever the file's name.
    table : astropy.table.Table
        Text columns hold strings where the format has no types.
    checksum : str
        SHA-256 of the file.
    decimal_comma : bool
        Whether `10,2` is a number.
    remarks : list of str
        What the reader had to decide.
    """

    path: Path
    kind: str
    table: Any
    checksum: str
    decimal_comma: bool = False
    remarks: list[str] = field(default_factory=list)

    def __len__(self) -> int:
        return len(self.table)

    @property
    def headings(self) -> list[str]:
        """Headings in the order of the file."""
        return list(self.table.colnames)

    def unit(self, heading: str) -> str:
        """Text of a column's unit; empty for none."""
        unit = getattr(self.table[heading], "unit", None)
        return "" if unit is None else str(unit)

    def cells(self, heading: str, start: int, stop: int) -> Any:
        """Return some cells of one column, as stored."""
        return self.table[heading][start:stop]


def open_source(path: str | Path) -> Source:
    """Open a catalogue.

    Parameters
    ----------
    path : str or pathlib.Path

    Returns
    -------
    Source

    Raises
    ------
    CatalogueError
        Absent, a folder, empty, unreadable, ragged, or no table.
    """
    path = Path(path)
    raw = _read_bytes(path)
    checksum = hashlib.sha256(raw).hexdigest()
    if raw[:2] == b"\x1f\x8b":
        try:
            raw = gzip.decompress(raw)
        except (OSError, EOFError) as error:
            raise CatalogueError(f"{path}: the gzip file is damaged: {error}") from error
    if not raw.strip():
        raise CatalogueError(f"{path}: the file is empty; give a catalogue with one row per star")
    remarks: list[str] = []
    if raw.startswith(b"SIMPLE  ="):
        source = Source(path, "FITS", _fits(path, raw, remarks), checksum, remarks=remarks)
    elif b"<VOTABLE" in raw[:4096]:
        source = Source(path, "VOTable", _votable(path, raw, remarks), checksum, remarks=remarks)
    else:
        _refuse_binary(path, raw)
        found = read_text_table(path, raw)
        source = Source(path, found.kind, found.table, checksum, found.decimal_comma, found.remarks)
    if len(source) == 0:
        raise CatalogueError(f"{path}: the table has headings but no rows")
    return source


def _read_bytes(path: Path) -> bytes:
    if path.is_dir():
        raise CatalogueError(f"{path} is a folder; give the catalogue file itself")
    try:
        return path.read_bytes()
    except FileNotFoundError as error:
        raise CatalogueError(f"{path}: there is no such file") from error
    except OSError as error:
        raise CatalogueError(f"{path} cannot be read: {error.strerror or error}") from error


def _refuse_binary(path: Path, raw: bytes) -> None:
    if raw[:4] == b"PAR1":
        raise CatalogueError(f"{path} is a Parquet file, not read yet; write it as FITS or ECSV")
    utf16 = raw[:2] in (b"\xff\xfe", b"\xfe\xff")
    if b"\x00" in raw[:65536] and not utf16:
        raise CatalogueError(f"{path} is not a table that can be read; give {_FORMATS}")


def _fits(path: Path, raw: bytes, remarks: list[str]) -> Any:
    from astropy.io import fits
    from astropy.table import Table

    try:
        with warnings.catch_warnings(), fits.open(io.BytesIO(raw)) as hdus:
            warnings.simplefilter("ignore")
            kinds = (fits.BinTableHDU, fits.TableHDU)
            tables = [place for place, hdu in enumerate(hdus) if isinstance(hdu, kinds)]
            if not tables:
                raise CatalogueError(f"{path}: the FITS file holds no table, only images")
            if len(tables) > 1:
                remarks.append(f"the file holds {len(tables)} tables; the first is read")
            return Table.read(hdus, hdu=tables[0], format="fits")
    except CatalogueError:
        raise
    except Exception as error:  # a damaged file raises many kinds
        raise CatalogueError(
            f"{path}: the FITS table cannot be read: {_first_line(error)}"
        ) from error


def _votable(path: Path, raw: bytes, remarks: list[str]) -> Any:
    from astropy.io.votable import parse

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")
            document = parse(io.BytesIO(raw))
            count = sum(1 for table in document.iter_tables() if len(table.fields))
            if count > 1:
                remarks.append(f"the file holds {count} tables; the first is read")
            return document.get_first_table().to_table(use_names_over_ids=True)
    except Exception as error:  # the parser raises what its XML library raises
        raise CatalogueError(f"{path}: the VOTable cannot be read: {_first_line(error)}") from error


def _first_line(error: BaseException) -> str:
    return (str(error).strip() or type(error).__name__).splitlines()[0]
