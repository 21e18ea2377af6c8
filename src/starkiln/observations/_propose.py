"""A column sheet proposed for headings that are not understood by themselves."""

from __future__ import annotations

import json
import math
from dataclasses import dataclass, field

from starkiln.errors import InputError
from starkiln.observations._cells import numbers_of, texts_of
from starkiln.observations._files import Source
from starkiln.observations._headings import heading_key, split_unit
from starkiln.observations._measure import BRIGHTEST, FAINTEST
from starkiln.observations._plan import LEFT_OUT, UNUSABLE, Cells, Column, Layout
from starkiln.observations._quantities import BY_NAME, QUANTITIES
from starkiln.observations._sheet import Sheet
from starkiln.observations._trade import Guess, guess
from starkiln.observations._units_of_columns import parse_unit

__all__ = ["propose_sheet"]

#: Numbers that catalogues write for "missing" and that no quantity of a star has.
_CODES = (-999.0, -9999.0, -99.0, -99.9, -99.99, -99.999, 999.0, 9999.0, 99.99, 99.999, 9.999)
_ROWS = 20000
#: How the heading of an error is made from that of its value, beside the ways that
#: `guess` knows.
_GLUED = ("e{}", "err{}", "sig{}", "sigma{}", "unc{}", "d{}", "s{}", "{}e", "{}err", "{}sig")

_HEAD = (
    "# A proposal, made from the headings alone: check every line, save it as a file such as\n"
    "# sheet.toml, and give it with --columns sheet.toml.\n"
)


@dataclass
class _Draft:
    lines: list[str] = field(default_factory=list)
    taken: set[str] = field(default_factory=set)
    headings: list[str] = field(default_factory=list)
    magnitudes: list[str] = field(default_factory=list)


def propose_sheet(source: Source, layout: Layout, sheet: Sheet) -> str:
    """Return a column sheet (TOML) for what is not yet understood; empty for nothing."""
    draft = _Draft(taken={band.reading.band for band in layout.bands})
    draft.taken |= {column.known.name for column in layout.known}
    guesses = {
        heading: found
        for heading, column in layout.columns.items()
        if not column.used and column.remark not in (LEFT_OUT, UNUSABLE)
        if (found := guess(heading) or _own(column))
    }
    if not layout.name:
        free = [h for h, c in layout.columns.items() if not c.used and h not in guesses]
        _propose_name(draft, source, free)
    for heading, found in guesses.items():
        if found.role == "value" and _fits(source, heading, found):
            _propose_one(draft, source, heading, found, guesses)
    _propose_errors(draft, source, layout)
    codes = _missing(source, layout, sheet, draft)
    if not draft.lines and not codes:
        return ""
    parts = [_HEAD]
    if codes:
        parts.append(f"missing = [{', '.join(codes)}]\n")
    if draft.lines:
        parts.append("\n[columns]\n" + "\n".join(draft.lines) + "\n")
    return "".join(parts)


def _own(column: Column) -> Guess | None:
    """Return the guess for a column that is understood: its value or its error is alone."""
    role, _, target = column.meaning.rpartition(" of ")
    target = next((k.name for k in QUANTITIES if k.meaning == column.meaning), target)
    if not target or role == "limit flag":
        return None
    return Guess("error" if role == "error" else "value", (target,))


def _propose_name(draft: _Draft, source: Source, headings: list[str]) -> None:
    """Propose the first column of whole numbers or texts in which every row differs."""
    for heading in headings:
        if source.table[heading].dtype.kind not in "USOiu":
            continue
        cells = texts_of(source, heading, 0, _ROWS)
        decimal = any("." in cell and cell.replace(".", "").isdigit() for cell in cells)
        if len(set(cells)) == len(cells) and not decimal:
            draft.lines.append(f'{_quoted(heading)} = "name"  # every row of it differs')
            return


def _propose_errors(draft: _Draft, source: Source, layout: Layout) -> None:
    """Propose errors for quantities that are in use without one."""
    for column in layout.known:
        heading = column.value.heading
        if column.error is None and column.constant is None and column.known.error != "none":
            error = _glued(heading, "", source.headings)
            if error:
                draft.lines.append(f"{_quoted(heading)} = {{ error = {_quoted(error)} }}")


def _propose_one(
    draft: _Draft, source: Source, heading: str, found: Guess, guesses: dict[str, Guess]
) -> None:
    means = found.meanings[0]
    entries = [f"means = {_quoted(means)}"]
    doubts = []
    if len(found.meanings) > 1:
        doubts.append(f"or {' or '.join(found.meanings[1:])}")
    keep = means not in draft.taken
    if not keep:
        doubts.append(f"there is another {means}")
    if means == "ebv":
        keep = False
        doubts.append("if it is the star's own and not the whole line of sight's")
    if found.unit:
        entries.append(f"unit = {_quoted(found.unit)}")
    elif found.flux and not _unit_text(source, heading):
        keep = False
        entries.append('unit = "Jy"')
        doubts.append("say the unit")
    if found.system:
        entries.append(f"system = {_quoted(found.system)}")
    entry, doubt, sure = _error_entry(heading, found, guesses, source.headings)
    entries += [entry] if entry else []
    doubts += [doubt] if doubt else []
    keep = keep and (sure or means not in BY_NAME)
    line = f"{_quoted(heading)} = {{ {', '.join(entries)} }}"
    comment = f"  # {'; '.join(doubts)}" if doubts else ""
    draft.lines.append(f"{'' if keep else '# '}{line}{comment}")
    draft.taken.add(means)
    draft.headings.append(heading)
    if means not in BY_NAME and not found.flux and not _unit_text(source, heading):
        draft.magnitudes.append(heading)


def _error_entry(
    heading: str, found: Guess, guesses: dict[str, Guess], headings: list[str]
) -> tuple[str, str, bool]:
    """Return the sheet's entry for the error, a doubt, and whether it needs no choice."""
    if error := _glued(heading, found.stem, headings):
        return f"error = {_quoted(error)}", "", True
    for role in ("error", "signal_to_noise"):
        for other, also in guesses.items():
            same = set(also.meanings) & set(found.meanings)
            if also.role == role and same and (found.flux or not also.flux):
                return f"{role} = {_quoted(other)}", "", True
    if found.meanings[0] in BY_NAME:
        needed = BY_NAME[found.meanings[0]].error == "required"
        return "", "name its error" if needed else "", not needed
    return "error = 0.02", "no column of errors was found: say an honest one", True


def _glued(heading: str, stem: str, headings: list[str]) -> str:
    bases = {heading_key(heading), heading_key(split_unit(heading)[0]), heading_key(stem)} - {""}
    patterns = {pattern.format(base) for pattern in _GLUED for base in bases}
    return next((other for other in headings if heading_key(other) in patterns), "")


def _unit_text(source: Source, heading: str) -> str:
    return source.unit(heading) or split_unit(heading)[1]


def _fits(source: Source, heading: str, found: Guess) -> bool:
    """Whether a column holds numbers of a kind that the guess allows."""
    if getattr(source.table[heading], "ndim", 1) != 1:
        return False
    text = _unit_text(source, heading)
    try:
        unit = parse_unit(text) if text else None
    except InputError:
        unit = None
    if found.meanings[0] not in BY_NAME and unit is not None:
        kinds = ("mag", "per wavelength", "per frequency")
        if unit.kind not in (kinds[1:] if found.flux else kinds):
            return False
    numbers = numbers_of(source, Cells(heading), 0, _ROWS)
    return any(isinstance(number, float) for number in numbers)


def _missing(source: Source, layout: Layout, sheet: Sheet, draft: _Draft) -> list[str]:
    """Return the codes for "missing" that stand in columns of numbers, as TOML."""
    used = {cells.heading: cells for cells in layout.cells()}
    used |= {heading: Cells(heading, sheet.missing) for heading in draft.headings}
    magnitudes = {b.value.heading for b in layout.bands if b.reading.unit.kind == "mag"}
    magnitudes |= set(draft.magnitudes)
    codes: dict[str, None] = {}
    for heading, cells in used.items():
        for number in numbers_of(source, cells, 0, _ROWS):
            if isinstance(number, str) and not number.startswith(("<", ">")):
                codes[_quoted(number)] = None
            elif isinstance(number, float) and _is_code(number, heading in magnitudes):
                codes[repr(number)] = None
    return list(codes)[:12]


def _is_code(number: float, magnitude: bool) -> bool:
    if magnitude and math.isfinite(number):
        return not BRIGHTEST <= number <= FAINTEST
    return any(math.isclose(number, code) for code in _CODES)


def _quoted(text: str) -> str:
    # A JSON string is a TOML string, but for the delete character.
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")
