"""What each column of a catalogue is: headings, units and sheet put together."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Any

from starkiln.errors import InputError
from starkiln.observations._files import Source
from starkiln.observations._from_python import nearest
from starkiln.observations._headings import (
    NAME_HEADINGS,
    Meaning,
    heading_key,
    looks_like_band,
    meaning_of,
    split_unit,
)
from starkiln.observations._measure import Reading
from starkiln.observations._quantities import BY_NAME, Known
from starkiln.observations._sheet import Binding, Sheet
from starkiln.observations._units_of_columns import ColumnUnit, factor_to, parse_unit
from starkiln.passbands import load_band

__all__ = ["BandColumn", "Cells", "Column", "KnownColumn", "Layout", "lay_out"]

_KINDS = ("mag", "per wavelength", "per frequency")


@dataclass(frozen=True)
class Column:
    """What was understood of one column, for the observer to read.

    Attributes
    ----------
    heading, meaning, unit, system : str
    used : bool
    why : str
        Why it is not used, or what is special about it.
    """

    heading: str
    meaning: str = ""
    unit: str = ""
    system: str = ""
    used: bool = False
    why: str = ""


@dataclass(frozen=True)
class Cells:
    """Where numbers stand: a heading and the values that mean missing there."""

    heading: str
    missing: tuple[Any, ...] = ()


@dataclass(frozen=True)
class BandColumn:
    """How the cells of one band are read; see `Binding` for the kinds of error."""

    reading: Reading
    value: Cells
    error: Cells | None = None
    constant: float | None = None
    signal_to_noise: Cells | None = None
    limit: str = ""


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


def lay_out(source: Source, sheet: Sheet) -> Layout:
    """Understand every column; what cannot be understood stands in `errors`."""
    return _Reader(source, sheet).layout


class _Reader:
    def __init__(self, source: Source, sheet: Sheet) -> None:
        self.source, self.sheet = source, sheet
        self.layout = Layout({h: Column(h, why="not used") for h in source.headings})
        self.bound = self._bindings()
        self.claimed = self._claimed()
        self.found = self._meanings()
        self._name()
        for (role, target), heading in self.found.items():
            if role == "value":
                self._value(target, heading)
        self._orphans()
        if not self.layout.bands and not self.layout.errors:
            self._no_band()

    # Which heading is what

    def _bindings(self) -> dict[str, Binding]:
        bound = {}
        for text, binding in self.sheet.columns.items():
            if heading := self._heading(text, "binds"):
                bound[heading] = binding
        return bound

    def _heading(self, text: str, verb: str) -> str:
        """Return the file's heading for one that the sheet names."""
        if text in self.source.headings:
            return text
        same = [h for h in self.source.headings if h.casefold() == text.strip().casefold()]
        if len(same) == 1:
            return same[0]
        near = nearest(text, self.source.headings)
        hint = f"; the nearest is '{near[0]}'" if near else ""
        self.layout.errors.append(
            f"{self.sheet.path} {verb} '{text}', which {self.source.path} has not{hint}"
        )
        return ""

    def _claimed(self) -> dict[str, tuple[str, str]]:
        """Headings that the sheet names as error, signal to noise or limit of another."""
        claimed = {}
        for heading, binding in self.bound.items():
            for role in ("error", "signal_to_noise", "limit"):
                text = getattr(binding, role)
                if isinstance(text, str) and text:
                    other = self._heading(text, f"gives as {role} of '{heading}' the column")
                    if other:
                        claimed[other] = (role, heading)
        return claimed

    def _meanings(self) -> dict[tuple[str, str], str]:
        left_out = self._left_out()
        found: dict[tuple[str, str], str] = {}
        for heading in self.source.headings:
            if heading in self.claimed:
                continue
            meaning = self._meaning(heading)
            if heading in left_out or (meaning and meaning.target in left_out):
                self._mark(heading, why="left out by the sheet")
            elif meaning is None:
                self._unknown(heading)
            elif meaning.role == "name":
                found.setdefault(("name", heading), heading)
            else:
                self._put(found, (meaning.role, meaning.target), heading)
        return found

    def _meaning(self, heading: str) -> Meaning | None:
        binding = self.bound.get(heading)
        if binding and binding.means:
            return binding.means
        return meaning_of(heading) or meaning_of(split_unit(heading)[0])

    def _left_out(self) -> set[str]:
        known = set()
        for text in self.sheet.leave_out:
            meaning = meaning_of(text)
            if text not in self.source.headings and meaning and meaning.role == "value":
                known.add(meaning.target)
            elif heading := self._heading(text, "leaves out"):
                known.add(heading)
        return known

    def _put(self, found: dict[tuple[str, str], str], key: tuple[str, str], heading: str) -> None:
        other = found.get(key)
        if other is None:
            found[key] = heading
            return
        chosen = [h for h in (other, heading) if self.bound.get(h, Binding()).means]
        if len(chosen) == 1:
            loser = heading if chosen[0] == other else other
            found[key] = chosen[0]
            self._mark(loser, why=f"the sheet takes '{chosen[0]}' instead")
            return
        what = Meaning(*key).heading
        self.layout.errors.append(
            f"{self.source.path}: the columns '{other}' and '{heading}' both mean {what}; "
            f'leave one out in a column sheet: leave_out = ["{heading}"]'
        )

    def _unknown(self, heading: str) -> None:
        near = looks_like_band(heading) or looks_like_band(split_unit(heading)[0])
        if not near:
            return
        self.layout.errors.append(
            f"{self.source.path}: the heading '{heading}' looks like a band, but no band is "
            f"called so (nearest: {', '.join(near)}); rename it, or say in a column sheet what "
            f'it is, [columns] "{heading}" = "{near[0]}", or leave_out = ["{heading}"]'
        )

    # The name

    def _name(self) -> None:
        names = [h for role, h in self.found if role == "name"]
        bound = [h for h in names if self.bound.get(h, Binding()).means]
        names.sort(key=lambda h: NAME_HEADINGS.index(heading_key(h)) if h not in bound else -1)
        for other in names[1:]:
            self._mark(other, why=f"the name is taken from '{names[0]}'")
        if names:
            self.layout.name = names[0]
            self._mark(names[0], "name", used=True)
        else:
            self.layout.warnings.append(
                f"{self.source.path}: no column of names; stars are called by their row"
            )

    # Values

    def _value(self, target: str, heading: str) -> None:
        try:
            if target in BY_NAME:
                self._known(BY_NAME[target], heading)
            else:
                self._band(target, heading)
        except InputError as error:
            self.layout.errors.append(f"{self.source.path}, column '{heading}': {error}")

    def _band(self, band: str, heading: str) -> None:
        binding = self.bound.get(heading, Binding())
        unit = self._unit(heading, "mag")
        if unit.kind not in _KINDS:
            raise InputError(
                f"unit '{unit.text}' is neither a magnitude nor a flux density; "
                + self._unit_hint(heading)
            )
        system = binding.system or unit.system
        floor = self.sheet.floor if binding.floor is None else binding.floor
        reading = Reading(
            band,
            unit,
            system=system,
            limit_sigma=binding.limit_sigma or self.sheet.limit_sigma,
            floor=floor,
            saturated=binding.saturated or self.sheet.saturated,
        )
        column = BandColumn(
            reading, self._cells(heading), limit=self._partner("limit", band, heading)
        )
        column = self._band_error(column, binding)
        native = load_band(band).native_system if unit.kind == "mag" else ""
        self._mark(heading, band, unit.text, system or native, used=True)
        if column.limit:
            self._mark(column.limit, f"limit flag of {band}", used=True)
        if not (column.error or column.constant or column.signal_to_noise or floor):
            self._mark(heading, band, unit.text, system or native, why="it has no error")
            self.layout.warnings.append(
                f"{self.source.path}: {band} (column '{heading}') has no column of errors and is "
                f"not used; name it or give one error for all in a column sheet: [columns] "
                f'"{heading}" = {{ means = "{band}", error = 0.02 }}'
            )
            return
        self.layout.bands.append(column)

    def _band_error(self, column: BandColumn, binding: Binding) -> BandColumn:
        heading, band = column.value.heading, column.reading.band
        ratio = self._claimed_by("signal_to_noise", heading)
        if ratio:
            self._mark(ratio, f"signal to noise of {band}", used=True)
            return replace(column, signal_to_noise=self._cells(ratio))
        if isinstance(binding.error, float):
            return replace(column, constant=binding.error)
        error = self._partner("error", band, heading)
        if not error:
            return column
        unit = self._unit(error, "") if self._has_unit(error) else column.reading.unit
        if unit.kind != column.reading.unit.kind:
            raise InputError(
                f"its error, column '{error}', has unit '{unit.text}' where the value has "
                f"'{column.reading.unit.text}'; {self._unit_hint(error)}"
            )
        self._mark(error, f"error of {band}", unit.text, used=True)
        reading = replace(column.reading, error_unit=unit)
        return replace(column, reading=reading, error=self._cells(error))

    def _known(self, known: Known, heading: str) -> None:
        binding = self.bound.get(heading, Binding())
        unit = self._unit(heading, known.unit)
        factor = factor_to(unit, known.unit)
        error = (
            "" if isinstance(binding.error, float) else self._partner("error", known.name, heading)
        )
        constant = binding.error if isinstance(binding.error, float) else None
        error_factor = factor
        if error and self._has_unit(error):
            error_factor = factor_to(self._unit(error, known.unit), known.unit)
        if known.error == "required" and not error and constant is None:
            raise InputError(
                f"a {known.name} needs an error: add a column 'e_{known.name}', or in a column "
                f'sheet name it, [columns] "{heading}" = {{ means = "{known.name}", error = '
                f'"HEADING" }}, or leave_out = ["{heading}"]'
            )
        self._mark(heading, known.meaning, unit.text, used=True)
        if error:
            self._mark(error, f"error of {known.name}", unit.text, used=True)
        self.layout.known.append(
            KnownColumn(
                known,
                self._cells(heading),
                factor,
                self._cells(error) if error else None,
                error_factor,
                None if constant is None else constant * factor,
            )
        )

    # Helpers

    def _partner(self, role: str, target: str, heading: str) -> str:
        """Heading of the error or the limit flag of a column."""
        return self._claimed_by(role, heading) or self.found.get((role, target), "")

    def _claimed_by(self, role: str, heading: str) -> str:
        for other, claim in self.claimed.items():
            if claim == (role, heading):
                return other
        return ""

    def _cells(self, heading: str) -> Cells:
        if getattr(self.source.table[heading], "ndim", 1) != 1:
            raise InputError(f"column '{heading}' holds an array in every row, not one number")
        own = self.bound.get(heading, Binding()).missing
        return Cells(heading, own + self.sheet.missing)

    def _has_unit(self, heading: str) -> bool:
        return bool(self._unit_text(heading))

    def _unit_text(self, heading: str) -> str:
        bound = self.bound.get(heading, Binding()).unit
        if bound:
            return bound
        base, bracket = split_unit(heading)
        return self.source.unit(heading) or (bracket if meaning_of(base) else "")

    def _unit(self, heading: str, default: str) -> ColumnUnit:
        text = self._unit_text(heading) or default
        if not text:
            return ColumnUnit("", "other")
        try:
            return parse_unit(text)
        except InputError as error:
            raise InputError(f"{error}; {self._unit_hint(heading)}") from error

    def _unit_hint(self, heading: str) -> str:
        return f'a column sheet can say it: [columns] "{heading}" = {{ unit = "mag" }}'

    def _mark(
        self, heading: str, meaning: str = "", unit: str = "", system: str = "", **rest: Any
    ) -> None:
        self.layout.columns[heading] = Column(heading, meaning, unit, system, **rest)

    def _orphans(self) -> None:
        for (role, target), heading in self.found.items():
            if role in ("error", "limit") and not self.layout.columns[heading].used:
                what = "error" if role == "error" else "limit flag"
                self._mark(heading, f"{what} of {target}", why=f"there is no usable {target}")

    def _no_band(self) -> None:
        unused = [h for h, column in self.layout.columns.items() if not column.used]
        self.layout.errors.append(
            f"{self.source.path}: no usable band among the headings ({', '.join(unused[:8])}"
            f"{', ...' if len(unused) > 8 else ''}); name a column after its band, such as "
            f"'2MASS J' with 'e_2MASS J', or bind it in a column sheet; `starkiln inspect "
            f"{self.source.path}` proposes one"
        )
