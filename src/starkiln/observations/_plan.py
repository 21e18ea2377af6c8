"""What was understood of a catalogue's columns, as plain records."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

from starkiln.observations._measure import Reading
from starkiln.observations._quantities import Known

__all__ = [
    "LEFT_OUT",
    "NO_ERROR",
    "UNUSABLE",
    "BandColumn",
    "Cells",
    "Column",
    "KnownColumn",
    "Layout",
]

#: Remarks of columns that are understood and not used: the observer does not want it,
#: nothing tells its error, or something is wrong with it, which stands in `errors`.
LEFT_OUT = "left out by the sheet"
NO_ERROR = "it has no error"
UNUSABLE = "cannot be used, see the error"


@dataclass(frozen=True)
class Column:
    """What was understood of one column, for the observer to read.

    Attributes
    ----------
    heading : str
        As it stands in the file.
    meaning : str
        A band, a quantity, or the error or limit flag of one; empty for none.
    unit, system : str
        As understood; the system is of magnitudes.
    used : bool
        Whether a fit reads it.
    remark : str
        Why it is not used, or what is special about it.
    """

    heading: str
    meaning: str = ""
    unit: str = ""
    system: str = ""
    used: bool = False
    remark: str = ""


@dataclass(frozen=True)
class Cells:
    """Where numbers stand: a heading, and the values that mean missing there."""

    heading: str
    missing: tuple[Any, ...] = ()


@dataclass(frozen=True)
class BandColumn:
    """How the cells of one band are read.

    Attributes
    ----------
    reading : Reading
    value : Cells
    error, signal_to_noise : Cells or None
    constant : float or None
        One error for all rows: mag, or a fraction of a flux.
    limit : Cells or None
        The limit flag.
    bare_is_limit : bool
        A value without error is an upper limit of flux.
    """

    reading: Reading
    value: Cells
    error: Cells | None = None
    signal_to_noise: Cells | None = None
    constant: float | None = None
    limit: Cells | None = None
    bare_is_limit: bool = False


@dataclass(frozen=True)
class KnownColumn:
    """How the cells of one known quantity are read; factors turn them into its unit."""

    known: Known
    value: Cells
    factor: float = 1.0
    error: Cells | None = None
    error_factor: float = 1.0
    constant: float | None = None


@dataclass
class Layout:
    """The columns of a catalogue, what is wrong with them, and what to warn of."""

    columns: dict[str, Column]
    name: str = ""
    bands: list[BandColumn] = field(default_factory=list)
    known: list[KnownColumn] = field(default_factory=list)
    errors: list[str] = field(default_factory=list)
    warnings: list[str] = field(default_factory=list)

    def mark(self, heading: str, meaning: str = "", unit: str = "", **rest: Any) -> None:
        """Say what a column is."""
        self.columns[heading] = Column(heading, meaning, unit, **rest)

    def cells(self) -> Iterator[Cells]:
        """Every column of numbers in use."""
        for band in self.bands:
            yield from filter(None, (band.value, band.error, band.signal_to_noise))
        for known in self.known:
            yield from filter(None, (known.value, known.error))
