"""One self-contained page of a run: HTML, style, script and data in a single file."""

from __future__ import annotations

import html
from pathlib import Path
from string import Template

from starkiln._version import __version__
from starkiln.report._payload import payload
from starkiln.report._sections import assumptions, citation, failures, glance, hottest
from starkiln.report._view import numbers, plain_text
from starkiln.runner import Run
from starkiln.store import atomic_write, data_path

_SCRIPTS = ("plots.js", "star.js", "table.js", "diagram.js", "main.js")


def write_page(run: Run, path: str | Path | None = None) -> Path:
    """Write the page of a run.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    path : str or pathlib.Path, optional
        `report.html` in the run folder by default.

    Returns
    -------
    pathlib.Path
        The file: it needs nothing but itself, and asks nothing of the network.

    Raises
    ------
    StorageError
        The file cannot be written.
    """
    target = Path(run.folder) / "report.html" if path is None else Path(path)
    text = page(run)
    return atomic_write(target, lambda stream: stream.write(text), mode="w")


def page(run: Run) -> str:
    """Return the page of a run as HTML; the same run gives the same text."""
    results = run.results
    made = run.meta["identity"]
    statuses = [plain_text(cell) for cell in results["status"]]
    counts = ", ".join(f"{statuses.count(kind)} {kind}" for kind in dict.fromkeys(statuses))
    diagram = "Flux against temperature"
    if "luminosity" in results.colnames and (numbers(results["luminosity"]) > 0.0).any():
        diagram = "Hertzsprung-Russell diagram"
    parts = {
        "title": f"starkiln: {len(results)} {'star' if len(results) == 1 else 'stars'}",
        "summary": html.escape(f"{counts}. Emitter: {made['emitter']}; engine: {made['engine']}."),
        "glance": glance(results, statuses),
        "failed": failures(results, statuses),
        "diagram_title": diagram,
        "assumptions": assumptions(run),
        "cite": citation(run),
        "footer": f"Made by starkiln {__version__}; one file that asks nothing of the network.",
        "data": payload(run, hottest(results) or 0),
        "css": _asset("page.css"),
        "script": "\n".join(_asset(name) for name in _SCRIPTS),
    }
    return Template(_asset("page.html")).substitute(parts)


def _asset(name: str) -> str:
    return data_path("report", name).read_text(encoding="utf-8")
