"""The results of a run as tables for archives and papers."""

from __future__ import annotations

import io
import re
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.derived import QUANTITIES
from starkiln.errors import InputError, StorageError
from starkiln.observations import Catalogue
from starkiln.report._latex import deluxetable, latex_table
from starkiln.report._provenance import provenance, provenance_text
from starkiln.report._references import bibtex
from starkiln.report._text import ascii_text
from starkiln.report._view import numbers
from starkiln.runner import Run
from starkiln.store import FORMATS, atomic_write, table_bytes

#: UCD1+ words (IVOA recommendation 1.5) of the columns that are no quantities.
_UCDS = {
    "name": "meta.id;meta.main",
    "status": "meta.code.status",
    "message": "meta.note",
    "flags": "meta.code",
    "engine": "meta.code;meta.software",
    "emitter": "meta.code;meta.modelled",
    "n_bands": "meta.number",
    "n_eff": "meta.number",
    "fit_probability": "stat.probability",
    "log_evidence": "stat.likelihood",
    "seed": "meta.id",
}
#: `arith.ratio` may not stand first.
_QUANTITY_UCDS = {"area_ratio": "phys.area;arith.ratio"}
_ENDS = {"": "stat.median", "_lo": "stat.min", "_hi": "stat.max"}
_MACHINE_DIGITS = 6


def results_table(run: Run, catalogue: Catalogue | None = None) -> Any:
    """Return the results of a run with units, descriptions, UCDs and provenance.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    catalogue : starkiln.observations.Catalogue, optional
        The one that was fitted: its columns come first, with the units, descriptions
        and UCDs that they have in its file. A result whose name the catalogue has
        too is called `fit_...`.

    Returns
    -------
    astropy.table.Table
        One row per input star.

    Raises
    ------
    InputError
        It is another catalogue.
    """
    table = run.results.copy()
    for key in table.colnames:
        table[key].meta["ucd"] = column_ucd(key)
    if catalogue is not None:
        table = _beside(run, catalogue, table)
    table.meta.clear()
    table.meta["description"] = "Stars fitted by starkiln: one row per star of the catalogue"
    # One line each: a FITS header holds no line end.
    for heading, items in provenance(run).items():
        table.meta[heading] = "; ".join(f"{key}: {value}" for key, value in items.items())
    return table


def column_ucd(key: str) -> str:
    """Return the Unified Content Descriptor of a column of the results."""
    if key in _UCDS:
        return _UCDS[key]
    for end in ("_lo", "_hi", ""):
        stem = key.removesuffix(end)
        if key.endswith(end) and stem in QUANTITIES:
            return f"{_QUANTITY_UCDS.get(stem, QUANTITIES[stem].ucd)};{_ENDS[end]}"
    return ""


def _beside(run: Run, catalogue: Catalogue, results: Any) -> Any:
    if catalogue.checksum != run.meta["identity"]["catalogue"]:
        raise InputError(f"{catalogue.path} is not the catalogue of this run, or was changed")
    table = catalogue.input_table.copy()
    for column in catalogue.columns:
        if column.used and column.meaning != "name":
            _as_numbers(table, column.heading, column.unit)
    taken = {key.casefold() for key in table.colnames}
    for key in results.colnames:
        name = key
        while name.casefold() in taken:
            name = f"fit_{name}"
        taken.add(name.casefold())
        table[name] = results[key]
    return table


def _as_numbers(table: Any, key: str, unit: str) -> None:
    """Turn a column of numbers that was read as text into numbers, with its unit."""
    from astropy.table import MaskedColumn

    column = table[key]
    if column.dtype.kind in "US":
        texts = ["" if np.ma.is_masked(cell) else str(cell).strip() for cell in column]
        try:
            values = np.array([float(text or "nan") for text in texts])
        except ValueError:
            return
        column = MaskedColumn(values, mask=np.isnan(values), description=column.description)
        table.replace_column(key, column)
    if unit and table[key].unit is None:
        table[key].unit = unit


def machine_readable(run: Run) -> str:
    """Return the results in the CDS layout that journals call machine-readable.

    Byte-by-byte description and fixed columns (Standards for Astronomical Catalogues
    2.0, CDS 2000), ASCII alone: Greek letters are spelled. Numbers have six
    significant digits.
    """
    table = run.results.copy()
    table.meta.clear()
    for key in table.colnames:
        column = table[key]
        if column.dtype.kind == "f":
            rounded = [_significant(value) for value in numbers(column)]
            table[key][:] = np.ma.masked_invalid(rounded)
            if np.isnan(rounded).all():
                table.remove_column(key)
        elif column.dtype.kind in "US":
            _spell(table, key)
    stream = io.StringIO()
    table.write(stream, format="ascii.mrt")
    text = stream.getvalue().replace("Title:\n", "Title: Stars fitted by starkiln\n", 1)
    # The limits of a column are optional, and astropy prints those of a small flux as 0.
    text = re.sub(r"\[-?[\d.]+/-?[\d.]+\]\? *", "? ", text)
    return "\n".join(line.rstrip() for line in text.splitlines()) + "\n"


def _significant(value: float) -> float:
    return float(f"{value:.{_MACHINE_DIGITS - 1}e}")


def _spell(table: Any, key: str) -> None:
    from astropy.table import Column

    old = table[key]
    # An empty cell would leave a column of no width.
    texts = [ascii_text("" if np.ma.is_masked(cell) else str(cell)) or "-" for cell in old]
    table.replace_column(key, Column(texts, name=key, description=old.description))


#: File -> what is in it; made from the run alone.
_FILES: dict[str, Callable[[Run], str]] = {
    "results.mrt": machine_readable,
    "table_aas.tex": deluxetable,
    "table.tex": latex_table,
    "provenance.txt": provenance_text,
    "references.bib": bibtex,
}


def write_tables(run: Run, catalogue: Catalogue | None = None) -> Iterator[Path]:
    """Write every table of a run into its `tables/` folder, one after the other.

    ECSV, FITS, VOTable and CSV of `results_table`, the machine-readable table, two
    LaTeX tables, the provenance and the BibTeX file.

    Yields
    ------
    pathlib.Path
        Each file, once it is written.

    Raises
    ------
    StorageError
        The folder cannot be written.
    """
    folder = Path(run.folder) / "tables"
    try:
        folder.mkdir(exist_ok=True)
    except OSError as error:
        raise StorageError(f"cannot make the folder {folder}: {error.strerror}") from error
    table = results_table(run, catalogue)
    for file_format in FORMATS:
        ending = {"votable": "vot"}.get(file_format, file_format)
        yield _write(folder / f"results.{ending}", table_bytes(table, file_format))
    for name, make in _FILES.items():
        yield _write(folder / name, make(run).encode())


def _write(path: Path, content: bytes) -> Path:
    return atomic_write(path, lambda stream: stream.write(content))
