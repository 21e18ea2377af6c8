"""Rows of a catalogue turned into stars, one bad row never spoiling another."""

from __future__ import annotations

from starkiln.errors import InputError
from starkiln.observations._cells import (
    LIMIT_SIGNS,
    Number,
    flags_of,
    numbers_of,
    parse_number,
    texts_of,
)
from starkiln.observations._files import Source
from starkiln.observations._from_python import check_error_of, check_value
from starkiln.observations._measure import MAG_TO_LN, Measurement, check_error, measure
from starkiln.observations._plan import BandColumn, KnownColumn, Layout
from starkiln.observations._quantities import av_from_ebv
from starkiln.observations._sheet import Sheet
from starkiln.observations._star import BadRow, Star

__all__ = ["build_rows"]


def build_rows(
    source: Source, layout: Layout, sheet: Sheet, start: int, stop: int, rv: float
) -> list[Star | BadRow]:
    """Return the stars of rows `start` to `stop` (from 0, `stop` left out)."""
    numbers = {cells.heading: numbers_of(source, cells, start, stop) for cells in layout.cells()}
    limits = {
        band.limit.heading: flags_of(source, band.limit, start, stop)
        for band in layout.bands
        if band.limit
    }
    names = texts_of(source, layout.name, start, stop) if layout.name else [""] * (stop - start)
    return [
        _Row(source, layout, sheet, rv, start + i + 1, names[i]).build(
            {h: column[i] for h, column in numbers.items()},
            {h: column[i] for h, column in limits.items()},
        )
        for i in range(len(names))
    ]


class _Row:
    """One row while it is read: gathers what is wrong and what was done."""

    def __init__(
        self, source: Source, layout: Layout, sheet: Sheet, rv: float, row: int, name: str
    ) -> None:
        self.source, self.layout, self.sheet = source, layout, sheet
        self.rv, self.row, self.name = rv, row, name
        self.problems: list[str] = []
        self.left_out: list[tuple[str, str]] = []
        self.remarks: list[str] = []

    def build(self, numbers: dict[str, Number], limits: dict[str, str]) -> Star | BadRow:
        measurements = [
            found for band in self.layout.bands if (found := self._band(band, numbers, limits))
        ]
        values: dict[str, float] = {}
        for column in self.layout.known:
            values |= self._known(column, numbers)
        self._one_distance(values)
        if remark := av_from_ebv(values, self.rv):
            self.remarks.append(remark)
        if not self.problems and all(m.limit for m in measurements):
            why = [f"{band}: {reason}" for band, reason in self.left_out]
            if measurements:
                why.append("only limits are given")
            self.problems.append(f"no band can be used: {'; '.join(why) or 'all are empty'}")
        name = self.name or f"row {self.row}"
        if self.problems:
            where = f"{self.source.path.name}, row {self.row}"
            return BadRow(name, self.row, f"{where}, {'; '.join(self.problems)}")
        return Star.from_values(
            name,
            measurements,
            row=self.row,
            named=bool(self.name),
            left_out=tuple(self.left_out),
            remarks=tuple(self.remarks),
            **values,
        )

    def _band(
        self, band: BandColumn, numbers: dict[str, Number], limits: dict[str, str]
    ) -> Measurement | None:
        heading = band.value.heading
        try:
            flag, value = _flagged(numbers[heading], self.source.decimal_comma)
            if value is None:
                return None
            if band.limit:
                flag = _one_flag(flag, limits[band.limit.heading], band.limit.heading)
            if band.error:
                heading = band.error.heading
            error = None if flag else _error(band, numbers)
            heading = band.value.heading
            if error is None and not flag and band.bare_is_limit:
                flag = ">" if band.reading.unit.kind == "mag" else "<"
            outcome = measure(band.reading, value, error, flag, relative=band.error is None)
        except InputError as problem:
            self.problems.append(f"column '{heading}': {problem}")
            return None
        if isinstance(outcome, str):
            self.left_out.append((band.reading.band, outcome))
            return None
        return outcome

    def _known(self, column: KnownColumn, numbers: dict[str, Number]) -> dict[str, float]:
        known, heading = column.known, column.value.heading
        try:
            value = _plain(numbers[heading])
            if value is None:
                return {}
            value *= column.factor
            check_value(known, value)
            error = column.constant
            if column.error is not None:
                heading = column.error.heading
                error = _plain(numbers[heading])
                error = None if error is None else error * column.error_factor
            check_error_of(known, value, error)
        except InputError as problem:
            self.problems.append(f"column '{heading}': {problem}")
            return {}
        found = {known.field: value}
        return found if error is None else found | {f"e_{known.field}": error}

    def _one_distance(self, values: dict[str, float]) -> None:
        if "parallax_mas" not in values or "distance_pc" not in values:
            return
        chosen = self.sheet.distance_from
        if not chosen:
            self.problems.append(
                f"column 'distance': {values['distance_pc']:g} pc is given beside a parallax of "
                f"{values['parallax_mas']:g} mas; choose in a column sheet: distance_from = "
                '"parallax" (or "distance")'
            )
            return
        other = "distance_pc" if chosen == "parallax" else "parallax_mas"
        values.pop(other)
        values.pop(f"e_{other}")


def _error(band: BandColumn, numbers: dict[str, Number]) -> float | None:
    if band.error is not None:
        error = _plain(numbers[band.error.heading])
        if error is not None:
            check_error(band.reading, error)
        return error
    if band.signal_to_noise is None:
        return band.constant
    ratio = _plain(numbers[band.signal_to_noise.heading])
    if ratio is None:
        return None
    if not ratio > 0.0:
        raise InputError(f"signal to noise {ratio:g} is not above zero")
    return 1.0 / (ratio * (MAG_TO_LN if band.reading.unit.kind == "mag" else 1.0))


def _flagged(number: Number, decimal_comma: bool) -> tuple[str, float | None]:
    """Split `<12.3` into its flag and its number."""
    if isinstance(number, str):
        text = number.lstrip("<>=\u2264\u2265")
        flag = LIMIT_SIGNS.get(number[: len(number) - len(text)].strip())
        if flag:
            value = parse_number(text.strip(), decimal_comma)
            if isinstance(value, float):
                return flag, value
    return "", _plain(number)


def _one_flag(inside: str, text: str, heading: str) -> str:
    if not text:
        return inside
    flag = LIMIT_SIGNS.get(text)
    if flag is None:
        raise InputError(
            f"the limit flag '{text}' of column '{heading}' is neither '<' nor '>'; leave it "
            "empty for a measured value"
        )
    if inside and inside != flag:
        raise InputError(f"'{inside}' stands before the number and '{flag}' in '{heading}'")
    return flag


def _plain(number: Number) -> float | None:
    if isinstance(number, str):
        raise InputError(
            f"'{number}' is not a number; if it means missing, say so in a column sheet: "
            f'missing = ["{number}"]'
        )
    return number
