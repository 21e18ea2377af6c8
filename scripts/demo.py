"""Fit the demo catalogue in an environment of its own and draw its figures.

    python3 scripts/demo.py

Makes the environment when it is not there, fits the association in catalogs-demo/,
prints the table of results and says where the figures are. Nothing outside the
folder .starkiln is written.
"""

import shutil
import sys

from _environment import HOME, ROOT, environment, run, say

CATALOGUE = "catalogs-demo/association.ecsv"


def main():
    """Fit and draw; return the exit code."""
    python = environment("")
    folder = HOME / "demo-run"
    shown = str(folder.relative_to(ROOT))
    shutil.rmtree(folder, ignore_errors=True)
    say(f"starkiln fit {CATALOGUE} --run {shown}")
    code = run(python, "-m", "starkiln", "fit", CATALOGUE, "--run", shown)
    if code not in (0, 3):
        return code
    say(f"starkiln figures {shown}")
    drawn = run(python, "-m", "starkiln", "figures", shown)
    if drawn:
        return drawn
    say(f"starkiln report {shown}")
    paged = run(python, "-m", "starkiln", "report", shown)
    if paged:
        return paged
    say(f"results: {folder / 'results.ecsv'}")
    say(f"figures: {folder / 'figures'}")
    say(f"page:    {folder / 'report.html'}")
    return 0


if __name__ == "__main__":
    sys.exit(main())
