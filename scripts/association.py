"""An association: its Hertzsprung-Russell diagram, its page and the tables for a paper.

Run: python scripts/association.py [FOLDER]

Fits the invented stars of catalogs-demo/association.ecsv and leaves the run, its page
(report.html), the tables and two figures in FOLDER (default .starkiln/association).
"""

from __future__ import annotations

import sys
from pathlib import Path

from starkiln.observations import read_catalogue
from starkiln.report import write_figures, write_page, write_tables
from starkiln.runner import fit_catalogue

ROOT = Path(__file__).resolve().parent.parent
CATALOGUE = ROOT / "catalogs-demo" / "association.ecsv"


def main(folder: Path, catalogue: Path = CATALOGUE) -> None:
    """Fit, then write everything that a reader would ask for."""
    stars = read_catalogue(catalogue)
    run = fit_catalogue(stars, folder)
    for drawn in write_figures(run, ["hr", "misfit"]):
        print(drawn.path or drawn.message)
    print(write_page(run))
    # The catalogue's own columns come first, with their units and descriptions.
    for path in write_tables(run, stars):
        print(path)


if __name__ == "__main__":
    main(Path(sys.argv[1]) if sys.argv[1:] else ROOT / ".starkiln" / "association")
