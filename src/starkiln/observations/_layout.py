"""How the numbers of each column are to be read: units, systems, errors."""

from __future__ import annotations

from dataclasses import replace

from starkiln.errors import InputError
from starkiln.observations._bind import Headings
from starkiln.observations._files import Source
from starkiln.observations._headings import meaning_of, split_unit
from starkiln.observations._measure import Reading, zero_flux
from starkiln.observations._plan import (
    NO_ERROR,
    UNUSABLE,
    BandColumn,
    Cells,
    Column,
    KnownColumn,
    Layout,
)
from starkiln.observations._quantities import BY_NAME, Known
from starkiln.observations._sheet import Binding, Sheet
from starkiln.observations._trade import guess
from starkiln.observations._units_of_columns import ColumnUnit, factor_to, parse_unit
from starkiln.passbands import load_band

__all__ = ["lay_out"]

_PHOTOMETRY = ("mag", "per wavelength", "per frequency")


def lay_out(source: Source, sheet: Sheet) -> Layout:
    """Understand every column; what cannot be understood stands in `errors`."""
    layout = Layout({heading: Column(heading) for heading in source.headings})
    headings = Headings(source, sheet, layout)
    reader = _Reader(source, sheet, layout, headings)
    for (role, target), heading in headings.found.items():
        if role != "value":
            continue
        try:
            if target in BY_NAME:
                reader.known(BY_NAME[target], heading)
            else:
                reader.band(target, heading)
        except InputError as error:
            layout.mark(heading, target, remark=UNUSABLE)
            layout.errors.append(f"{source.path}, column '{heading}': {error}")
    _mark_rest(source, layout, headings)
    return layout


def _mark_rest(source: Source, layout: Layout, headings: Headings) -> None:
    for (role, target), heading in headings.found.items():
        if role in ("error", "limit") and not layout.columns[heading].used:
            what = "error" if role == "error" else "limit flag"
            layout.mark(heading, f"{what} of {target}", remark=f"no {target} makes use of it")
    bands = {band.reading.band for band in layout.bands}
    alike: dict[str, str] = {}
    for heading, column in layout.columns.items():
        if column.meaning or column.remark:
            continue
        layout.mark(heading, remark="not known, not used")
        found = guess(heading)
        if found and found.meanings[0] not in BY_NAME and not bands & set(found.meanings):
            layout.mark(heading, remark=f"perhaps {found.text()}; a column sheet can say so")
            if found.role == "value":
                alike[heading] = found.meanings[0]
    bare = [h for h, column in layout.columns.items() if column.remark == NO_ERROR]
    where = f"`starkiln inspect {source.path}` proposes"
    if bare:
        layout.warnings.append(
            f"{source.path}: no errors are given for {', '.join(bare)}, which "
            f"{'is' if len(bare) == 1 else 'are'} not used; a column sheet can name the column of "
            f"errors or give one error for all rows: {where} the lines"
        )
    if alike and layout.bands:
        layout.warnings.append(
            f"{source.path}: not used, though perhaps a band: {', '.join(alike)}; a column sheet "
            f"can say what it is: {where} the lines"
        )
    if not (layout.bands or layout.errors):
        unused = [heading for heading, column in layout.columns.items() if not column.used]
        some = [f"'{heading}' may be {band}" for heading, band in alike.items()] or unused
        layout.errors.append(
            f"{source.path}: no usable band among the headings ({', '.join(some[:8])}"
            f"{', ...' if len(some) > 8 else ''}); name a column after its band, such as "
            f"'2MASS J' with its error 'e_2MASS J', or bind it in a column sheet: {where} one"
        )


class _Reader:
    def __init__(self, source: Source, sheet: Sheet, layout: Layout, headings: Headings) -> None:
        self.source, self.sheet, self.layout, self.headings = source, sheet, layout, headings

    def band(self, band: str, heading: str) -> None:
        binding = self.headings.binding(heading)
        unit = self._unit(heading, "mag")
        if unit.kind != "mag" and binding.system:
            raise InputError(f"a flux density in {unit.text} has no magnitude system; take it away")
        if binding.error and binding.signal_to_noise:
            raise InputError("the column sheet gives both an error and a signal to noise")
        if unit.kind not in _PHOTOMETRY:
            raise InputError(
                f"unit '{unit.text}' is neither a magnitude nor a flux density; "
                + _unit_hint(heading, "mag")
            )
        system = binding.system or unit.system
        reading = Reading(
            band,
            unit,
            system=system,
            limit_sigma=binding.limit_sigma or self.sheet.limit_sigma,
            floor=self.sheet.floor if binding.floor is None else binding.floor,
            saturated=binding.saturated or self.sheet.saturated,
        )
        zero_flux(reading)
        limit = self.headings.partner("limit", band, heading)
        bare = binding.without_error or self.sheet.without_error
        column = BandColumn(
            reading,
            self._cells(heading),
            limit=self._cells(limit) if limit else None,
            bare_is_limit=bare == "limit",
        )
        column = self._with_error(column, binding)
        shown = system or load_band(band).native_system if unit.kind == "mag" else ""
        if column.limit:
            self.layout.mark(limit, f"limit flag of {band}", used=True)
        if column.error or column.constant or column.signal_to_noise:
            self.layout.mark(heading, band, unit.text, system=shown, used=True)
            self.layout.bands.append(column)
            return
        self.layout.mark(heading, band, unit.text, system=shown, remark=NO_ERROR)

    def _with_error(self, column: BandColumn, binding: Binding) -> BandColumn:
        heading, band = column.value.heading, column.reading.band
        ratio = self.headings.partner("signal_to_noise", band, heading)
        if ratio:
            self.layout.mark(ratio, f"signal to noise of {band}", used=True)
            return replace(column, signal_to_noise=self._cells(ratio))
        if isinstance(binding.error, float):
            return replace(column, constant=binding.error)
        error = self.headings.partner("error", band, heading)
        if not error:
            return replace(column, constant=column.reading.floor or None)
        unit = (
            self._unit(error, column.reading.unit.text)
            if self._unit_text(error)
            else column.reading.unit
        )
        if unit.kind != column.reading.unit.kind:
            raise InputError(
                f"its error, column '{error}', has unit '{unit.text}' where the value has "
                f"'{column.reading.unit.text}'; {_unit_hint(error, column.reading.unit.text)}"
            )
        self.headings.binding(error).refuse(
            beyond=("means", "unit", "missing"), what=f"an error, column '{error}'"
        )
        self.layout.mark(error, f"error of {band}", unit.text, used=True)
        return replace(
            column, reading=replace(column.reading, error_unit=unit), error=self._cells(error)
        )

    def known(self, known: Known, heading: str) -> None:
        binding = self.headings.binding(heading)
        keys = ("means", "unit", "missing") + (("error",) if known.error != "none" else ())
        binding.refuse(beyond=keys, what=f"a {known.name}")
        constant = binding.error
        unit = self._unit(heading, known.unit)
        factor = factor_to(unit, known.unit)
        column = KnownColumn(known, self._cells(heading), factor)
        self.layout.mark(heading, known.meaning, unit.text, used=True)
        if known.error == "none":
            self.layout.known.append(column)
            return
        if isinstance(constant, float):
            column = replace(column, constant=constant * factor)
        elif error := self.headings.partner("error", known.name, heading):
            column = self._known_error(column, error, unit)
        elif known.error == "required":
            raise InputError(
                f"a {known.name} needs an error: add a column 'e_{known.name}', or name its "
                f'column in a column sheet, [columns] "{heading}" = {{ means = "{known.name}", '
                f'error = "HEADING" }}, or leave_out = ["{heading}"]'
            )
        self.layout.known.append(column)

    def _known_error(self, column: KnownColumn, error: str, unit: ColumnUnit) -> KnownColumn:
        factor = column.factor
        if self._unit_text(error):
            unit = self._unit(error, column.known.unit)
            factor = factor_to(unit, column.known.unit)
        self.layout.mark(error, f"error of {column.known.name}", unit.text, used=True)
        return replace(column, error=self._cells(error), error_factor=factor)

    def _cells(self, heading: str) -> Cells:
        if getattr(self.source.table[heading], "ndim", 1) != 1:
            raise InputError(f"column '{heading}' holds an array in every row, not one number")
        return Cells(heading, self.headings.binding(heading).missing + self.sheet.missing)

    def _unit_text(self, heading: str) -> str:
        binding = self.headings.binding(heading)
        base, bracket = split_unit(heading)
        if not (meaning_of(base) or (binding.means and _is_unit(bracket))):
            bracket = ""  # as in E(B-V)
        return binding.unit or self.source.unit(heading) or bracket

    def _unit(self, heading: str, default: str) -> ColumnUnit:
        text = self._unit_text(heading) or default
        if not text:
            return ColumnUnit("", "other")
        try:
            return parse_unit(text)
        except InputError as error:
            raise InputError(f"{error}; {_unit_hint(heading, default)}") from error


def _is_unit(text: str) -> bool:
    try:
        return bool(text and parse_unit(text).text)
    except InputError:
        return False


def _unit_hint(heading: str, unit: str) -> str:
    return f'a column sheet can say it: [columns] "{heading}" = {{ unit = "{unit or "mag"}" }}'
