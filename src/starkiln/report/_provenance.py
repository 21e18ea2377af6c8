"""Where the numbers of a run come from: versions, seed, settings, priors, sources."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from starkiln._version import __version__
from starkiln.passbands import load_band
from starkiln.report._references import references
from starkiln.runner import Run


def provenance(run: Run) -> dict[str, dict[str, str]]:
    """Return what a run was made with, by section: heading -> name -> value."""
    made = run.meta["identity"]
    rows = run.results
    status = [str(value) for value in rows["status"]]
    counts = ", ".join(f"{status.count(kind)} {kind}" for kind in dict.fromkeys(status))
    # Times and the host stand in run.json alone: the same run gives the same bytes.
    begun = {"command": str(run.meta["command"])} if "command" in run.meta else {}
    return {
        "run": {
            "program": f"starkiln {made['versions']['starkiln']}",
            "report": f"starkiln {__version__}",
            **begun,
            "stars": f"{len(rows)} ({counts})",
            "catalogue (SHA-256)": str(made["catalogue"]),
            "emitter": str(made["emitter"]),
            "engine": str(made["engine"]),
            "seed": str(made["seed"]),
        },
        "priors and likelihood": {key: str(text) for key, text in run.meta["priors"].items()},
        "settings": {key: _text(value) for key, value in made["settings"].items()},
        "passbands": {band: load_band(band).source for band in bands_of(run)},
        "libraries": {
            key: str(value) for key, value in made["versions"].items() if key != "starkiln"
        },
        "cite": {item.key: item.text for item in references(run)},
    }


def provenance_text(run: Run) -> str:
    """Return the provenance as plain text, one line per item."""
    lines: list[str] = []
    for heading, items in provenance(run).items():
        lines += ["", f"[{heading}]"] if lines else [f"[{heading}]"]
        lines += [f"{key}: {value}" for key, value in items.items()]
    return "\n".join(lines) + "\n"


def bands_of(run: Run) -> list[str]:
    """Return the bands that entered a fit of the run, blue to red."""
    photometry = run.photometry
    used = {str(band) for band in np.asarray(photometry["band"])[np.asarray(photometry["used"])]}
    return sorted(used, key=lambda band: load_band(band).pivot_m)


def _text(value: Any) -> str:
    if isinstance(value, Mapping):
        return ", ".join(f"{key} {item}" for key, item in value.items()) or "none"
    if isinstance(value, (list, tuple)):
        return " to ".join(f"{item:g}" for item in value)
    return f"{value:g}" if isinstance(value, float) else str(value)
