"""Tables for a paper: medians with asymmetric errors, rounded by the usual rule."""

from __future__ import annotations

import unicodedata
from typing import Any

import numpy as np

from starkiln.report._latex_layout import Layout, deluxetable_text, tabular_text
from starkiln.report._quantities import Printed, printed
from starkiln.report._rounding import round_asymmetric
from starkiln.report._text import GREEK, plain_line
from starkiln.report._view import numbers, plain_text, plain_value
from starkiln.runner import Run

#: Quantities of a printed table, where a run has them; the rest stays in the files.
_SHOWN = (
    "temperature", "temperature_2", "angular_diameter", "av", "bolometric_flux", "distance",
    "radius", "luminosity",
)  # fmt: skip
_SPECIAL = {
    "\\": r"\textbackslash{}",
    "{": r"\{",
    "}": r"\}",
    "$": r"\$",
    "&": r"\&",
    "#": r"\#",
    "%": r"\%",
    "_": r"\_",
    "^": r"\textasciicircum{}",
    "~": r"\textasciitilde{}",
    "<": r"\textless{}",
    ">": r"\textgreater{}",
    "|": r"\textbar{}",
    '"': "''",
}
#: Letters that stand for flags in a narrow column.
_LETTERS = {
    "unconverged": "u",
    "poor_blackbody": "b",
    "prior_dominated": "p",
    "at_edge": "e",
    "degenerate": "d",
    "few_bands": "f",
    "dust_assumed_zero": "z",
    "saturated": "s",
}
_NOTE = (
    "Medians with the 16th and 84th percentiles of the posterior; errors rounded by the rule of "
    "the Particle Data Group. Radii and luminosities in nominal solar units (IAU 2015 Resolution "
    "B3)."
)


def latex_text(text: object) -> str:
    """Return any text so that LaTeX prints it and obeys nothing in it.

    Greek letters become math, accents stay, what a plain LaTeX font lacks becomes a
    question mark.
    """
    return "".join(map(_letter, unicodedata.normalize("NFC", plain_line(text, 80))))


def _letter(letter: str) -> str:
    if letter in _SPECIAL:
        return _SPECIAL[letter]
    if letter.isascii():
        return letter
    plain = unicodedata.normalize("NFKD", letter)[0]
    if plain in GREEK:
        return _greek(GREEK[plain])
    # The letters with accents of Latin-1 are in every LaTeX font's encoding.
    if letter.isalpha() and ord(letter) < 0x100:
        return letter
    return {"\N{HORIZONTAL ELLIPSIS}": r"\ldots{}", "\N{EN DASH}": "--"}.get(letter, "?")


def _greek(name: str) -> str:
    # LaTeX has no command for a capital that looks Latin, nor for omicron.
    same = {
        "Alpha": "A", "Beta": "B", "Epsilon": "E", "Zeta": "Z", "Eta": "H", "Iota": "I",
        "Kappa": "K", "Mu": "M", "Nu": "N", "Omicron": "O", "Rho": "P", "Tau": "T",
        "Upsilon": r"\Upsilon", "Chi": "X", "omicron": "o",
    }  # fmt: skip
    symbol = same.get(name, rf"\{name}")
    return f"${symbol}$" if symbol.startswith("\\") else symbol


def deluxetable(run: Run) -> str:
    """Return the results as an AASTeX `deluxetable`.

    Rejected stars are left out and counted in the comments, where the letters of the
    last column are explained too.
    """
    return deluxetable_text(_layout(run, r"\nodata"))


def latex_table(run: Run) -> str:
    """Return the results as a table of plain LaTeX over both columns; it needs no package."""
    return tabular_text(_layout(run, "--"))


def _layout(run: Run, absent: str) -> Layout:
    shown, lines, notes = _content(run, absent)
    return Layout(
        caption="Stars fitted by starkiln",
        label="tab:starkiln",
        heads=["Star", *(item.symbol for item in shown), "Flags"],
        units=["", *(_unit(item) for item in shown), ""],
        lines=lines,
        notes=notes,
    )


def _content(run: Run, absent: str) -> tuple[list[Printed], list[list[str]], str]:
    """Return the quantities shown, the cells of each fitted star, and the notes."""
    results = run.results
    shown = [printed(key) for key in _SHOWN if key in results.colnames and _any(results[key])]
    lines, letters = [], {}
    for row in results:
        if str(row["status"]) != "rejected":
            flags = _flags(row)
            letters.update({_LETTERS.get(flag, flag): flag for flag in flags})
            values = [latex_value(row, item.key) or absent for item in shown]
            marks = latex_text(" ".join(_LETTERS.get(flag, flag) for flag in flags))
            lines.append([latex_text(plain_text(row["name"])), *values, marks])
    notes = [_NOTE]
    if letters:
        meanings = (f"{letter} = {flag.replace('_', ' ')}" for letter, flag in letters.items())
        notes.append(latex_text(f"Flags: {', '.join(sorted(meanings))}."))
    if len(lines) < len(results):
        notes.append(f"{len(results) - len(lines)} rejected stars are left out.")
    return shown, lines, " ".join(notes)


def _any(column: Any) -> bool:
    return bool(np.isfinite(numbers(column)).any())


def _flags(row: Any) -> list[str]:
    unconverged = ["unconverged"] if str(row["status"]) == "unconverged" else []
    return unconverged + plain_text(row["flags"]).split()


def latex_value(row: Any, key: str) -> str:
    """Return a quantity of one row as median with asymmetric errors, "" where absent."""
    ends = (plain_value(row[f"{key}{end}"]) for end in ("", "_lo", "_hi"))
    rounded = round_asymmetric(*ends)
    if rounded is None:
        return ""
    if float(rounded.plus) == float(rounded.minus) == 0.0:
        return f"${rounded.value}$"
    value = rf"{rounded.value}^{{+{rounded.plus}}}_{{-{rounded.minus}}}"
    if rounded.exponent:
        value = rf"({value})\times10^{{{rounded.exponent}}}"
    return f"${value}$"


def _unit(item: Printed) -> str:
    return f"({item.unit})" if item.unit else ""
