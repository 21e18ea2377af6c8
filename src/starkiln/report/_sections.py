"""The parts of the page that are plain HTML and need no script."""

from __future__ import annotations

import html
from collections import Counter
from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import Any

import numpy as np

from starkiln.report._flags import FLAG_MEANINGS, STATUS_MEANINGS
from starkiln.report._provenance import provenance
from starkiln.report._quantities import HTML_UNITS
from starkiln.report._references import bibtex, references
from starkiln.report._rounding import round_asymmetric
from starkiln.report._text import star_label
from starkiln.report._view import numbers, plain_text
from starkiln.runner import Run

#: Failures that are listed one by one; of more, only the reasons are counted.
_MOST_LISTED = 500
_SUPERLATIVES: tuple[tuple[str, str, Callable[..., Any]], ...] = (
    ("Hottest", "temperature", np.nanargmax),
    ("Coolest", "temperature", np.nanargmin),
    ("Most luminous", "luminosity", np.nanargmax),
    ("Largest", "radius", np.nanargmax),
    ("Nearest", "distance", np.nanargmin),
)
_ABSENT = "\N{EN DASH}"


def hottest(results: Any) -> int | None:
    """Return the place of the hottest star, counted from 0."""
    return _place(results, "temperature", np.nanargmax)


def glance(results: Any, statuses: Sequence[str]) -> str:
    """Return the stars that stand out, and the counts of statuses and warnings."""
    rows = []
    for title, key, choose in _SUPERLATIVES:
        place = _place(results, key, choose)
        if place is not None:
            shown = ("temperature", "radius", "luminosity", "distance")
            values = [_value(results, other, place) for other in shown]
            rows.append([_escape(title), _link(results, place), *values])
    heads = ("", "Star", "Temperature", "Radius", "Luminosity", "Distance")
    table = _table("Stars that stand out", heads, rows) if rows else "<p>No star was fitted.</p>"
    kinds = Counter(statuses)
    flags = Counter(flag for cell in results["flags"] for flag in plain_text(cell).split())
    parts = [table, "<h3>Status</h3>", _counted(kinds, STATUS_MEANINGS)]
    if flags:
        parts += ["<h3>Warnings</h3>", _counted(flags, FLAG_MEANINGS)]
    return "".join(parts)


def failures(results: Any, statuses: Sequence[str]) -> str:
    """Return every star that was rejected or did not converge, with its reason."""
    failed = [place for place, status in enumerate(statuses) if status != "ok"]
    if not failed:
        return "<p>Nothing failed: every star was fitted and converged.</p>"
    messages = [plain_text(cell) for cell in results["message"]]
    if len(failed) > _MOST_LISTED:
        reasons = Counter((statuses[place], messages[place]) for place in failed)
        most = reasons.most_common(_MOST_LISTED)
        rows = [[str(n), _status(kind), _escape(why)] for (kind, why), n in most]
        note = f"<p>{len(failed)} stars, by reason; the table of all stars names each.</p>"
        return note + _table("Reasons of failure", ("Stars", "Status", "Reason"), rows)
    rows = [
        [str(place + 1), _link(results, place), _status(statuses[place]), _escape(messages[place])]
        for place in sorted(failed, key=lambda place: statuses[place] != "rejected")
    ]
    return _table("Stars that failed", ("Row", "Star", "Status", "Reason"), rows)


def assumptions(run: Run) -> str:
    """Return priors, settings, passbands and versions, the priors open."""
    made = provenance(run)
    parts = ["<h3>Priors and likelihood</h3>", _list(made["priors and likelihood"].items())]
    for key, title in (
        ("run", "Run"),
        ("settings", "Settings"),
        ("passbands", "Passbands and zero points"),
        ("libraries", "Libraries"),
    ):
        parts.append(f"<details><summary>{title}</summary>{_list(made[key].items())}</details>")
    return "".join(parts)


def citation(run: Run) -> str:
    """Return what to cite, as a list and as BibTeX."""
    items = "".join(f'<li class="wrap">{_escape(item.text)}</li>' for item in references(run))
    entries = _escape(bibtex(run))
    return (
        f"<p>The run rests on these:</p><ul>{items}</ul><details><summary>BibTeX</summary>"
        f'<pre tabindex="0" role="region" aria-label="BibTeX">{entries}</pre></details>'
    )


def _place(results: Any, key: str, choose: Callable[..., Any]) -> int | None:
    if key not in results.colnames:
        return None
    values = numbers(results[key])
    return int(choose(values)) if np.isfinite(values).any() else None


def _escape(text: str) -> str:
    return html.escape(text, quote=True)


def _link(results: Any, place: int) -> str:
    name = _escape(star_label(plain_text(results["name"][place]), place + 1, 120))
    return f'<a class="wrap" href="#star" data-pick="{place}">{name}</a>'


def _status(kind: str) -> str:
    return f'<span class="status-{_escape(kind)}">{_escape(kind)}</span>'


def _value(results: Any, key: str, place: int) -> str:
    """Return a quantity of one row with its errors and unit."""
    if key not in results.colnames:
        return _ABSENT
    ends = (float(numbers(results[f"{key}{end}"])[place]) for end in ("", "_lo", "_hi"))
    rounded = round_asymmetric(*ends)
    if rounded is None:
        return _ABSENT
    errors = f"<span>+{rounded.plus}</span><span>\N{MINUS SIGN}{rounded.minus}</span>"
    power = f" \N{MULTIPLICATION SIGN}10<sup>{rounded.exponent}</sup>" if rounded.exponent else ""
    number = f'{rounded.value}<span class="error">{errors}</span>{power} {HTML_UNITS[key]}'
    return f'<span class="number">{number}</span>'


def _counted(counts: Counter[str], meanings: Mapping[str, str]) -> str:
    pairs = ((f"{count} {key}", meanings.get(key, "")) for key, count in counts.most_common())
    return _list(pairs)


def _list(pairs: Iterable[tuple[str, str]]) -> str:
    items = "".join(f"<dt>{_escape(key)}</dt><dd>{_escape(text)}</dd>" for key, text in pairs)
    return f"<dl>{items}</dl>"


def _table(title: str, heads: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    """Return a table whose cells are HTML already; the first cell heads its row."""
    top = "".join(f'<th scope="col">{head}</th>' if head else "<td></td>" for head in heads)
    body = "".join(
        f'<tr><th scope="row">{cells[0]}</th>'
        + "".join(f"<td>{c}</td>" for c in cells[1:])
        + "</tr>"
        for cells in rows
    )
    return (
        f'<div class="scroll" tabindex="0" role="region" aria-label="{title}"><table>'
        f"<thead><tr>{top}</tr></thead><tbody>{body}</tbody></table></div>"
    )
