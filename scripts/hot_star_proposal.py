"""Make a hot-star proposal's table, figure and methods paragraph from the demo catalogue.

Run: python scripts/hot_star_proposal.py [FOLDER]

Fits the invented stars of catalogs-demo/hot_stars.ecsv (their spectroscopic temperatures
serve as priors, for photometry hardly holds the temperature of a hot star), draws mass, age
and pressure ratios jointly with the dynamical masses of the same table, and leaves everything
in FOLDER (default .starkiln/hot-star-proposal), ready for LaTeX: pdflatex proposal, bibtex
proposal, pdflatex proposal twice.
"""

from __future__ import annotations

import sys
from pathlib import Path

from starkiln.derived import PRESSURE_INPUTS, pressure_table_of_draws
from starkiln.inference import Settings
from starkiln.observations import read_catalogue, read_columns
from starkiln.report import write_proposal
from starkiln.runner import Recipe, fit_catalogue

ROOT = Path(__file__).resolve().parent.parent
CATALOGUE = ROOT / "catalogs-demo" / "hot_stars.ecsv"


def main(folder: Path) -> None:
    """Fit, derive and write."""
    folder.mkdir(parents=True, exist_ok=True)
    recipe = Recipe(settings=Settings(use_published_temperature=True))
    run = fit_catalogue(read_catalogue(CATALOGUE), folder / "run", recipe=recipe)
    names = [str(name) for name in run.results["name"]]
    draws = [run.draws(row) for row in range(1, len(names) + 1)]
    known = read_columns(
        CATALOGUE, {"name": "", "mass": PRESSURE_INPUTS["mass"], "e_mass": "solMass"}
    )
    table = pressure_table_of_draws(names, draws, known)
    for row in table:
        print(f"{row['name']}: {row['status']} {row['message']}")
    for path in write_proposal(table, folder, fitted=True):
        print(path)


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else ROOT / ".starkiln" / "hot-star-proposal")
