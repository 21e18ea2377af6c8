"""The two layouts of a LaTeX table: AASTeX's `deluxetable` and plain LaTeX."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class Layout:
    """What both layouts print, as LaTeX text.

    Attributes
    ----------
    caption, label : str
    heads, units : sequence of str
        Of every column, the first of text, the last of letters.
    lines : sequence of sequence of str
        Cells.
    notes : str
        Below the table.
    """

    caption: str
    label: str
    heads: Sequence[str]
    units: Sequence[str]
    lines: Sequence[Sequence[str]]
    notes: str

    @property
    def alignment(self) -> str:
        """Left, centred between, left."""
        return f"l{'c' * (len(self.heads) - 2)}l"


def deluxetable_text(layout: Layout) -> str:
    """Return the table as an AASTeX `deluxetable*`."""
    parts = [
        rf"\begin{{deluxetable*}}{{{layout.alignment}}}",
        rf"\tablecaption{{{layout.caption}\label{{{layout.label}}}}}",
        r"\tablehead{",
        " & ".join(rf"\colhead{{{head}}}" for head in layout.heads) + r" \\",
        " & ".join(rf"\colhead{{{unit}}}" for unit in layout.units),
        "}",
        r"\startdata",
        # AASTeX takes no line end after the last row.
        " \\\\\n".join(" & ".join(cells) for cells in layout.lines),
        r"\enddata",
        rf"\tablecomments{{{layout.notes}}}",
        r"\end{deluxetable*}",
    ]
    return "\n".join(parts) + "\n"


def tabular_text(layout: Layout) -> str:
    """Return the table as plain LaTeX over both columns; it needs no package."""
    parts = [
        r"\begin{table*}",
        rf"\caption{{{layout.caption}}}\label{{{layout.label}}}",
        r"\footnotesize\setlength{\tabcolsep}{4pt}\renewcommand{\arraystretch}{1.35}",
        rf"\begin{{tabular}}{{{layout.alignment}}}",
        r"\hline",
        " & ".join(layout.heads) + r" \\",
        " & ".join(layout.units) + r" \\",
        r"\hline",
        *(" & ".join(cells) + r" \\" for cells in layout.lines),
        r"\hline",
        r"\end{tabular}",
        "",
        r"\smallskip",
        layout.notes,
        r"\end{table*}",
    ]
    return "\n".join(parts) + "\n"
