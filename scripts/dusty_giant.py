"""A dusty giant: what the fit can tell when its dust is known, and when it is not.

Run: python scripts/dusty_giant.py [FOLDER]

Fits one invented star twice, with A_V from a dust map and with A_V left free, prints
both, and leaves a corner plot and a spectral energy distribution of each in FOLDER
(default .starkiln/dusty-giant). Free dust trades off with temperature: the ridge in the
corner plot and the flag `degenerate` are how that shows.
"""

from __future__ import annotations

import sys
from pathlib import Path

from starkiln import Dust, Star, fit
from starkiln.report import corner_figure, save_figure, sed_figure

ROOT = Path(__file__).resolve().parent.parent
MAGNITUDES = {
    "Gaia BP": 13.54, "Gaia G": 12.43, "Gaia RP": 11.41, "2MASS J": 9.95, "2MASS H": 9.34,
    "2MASS Ks": 9.02, "WISE W1": 8.69, "WISE W2": 8.51, "WISE W3": 8.37,
}  # fmt: skip


def main(folder: Path) -> None:
    """Fit with known and with free dust, and draw both."""
    folder.mkdir(parents=True, exist_ok=True)
    star = Star(
        "Umber 3",
        {band: (magnitude, 0.02) for band, magnitude in MAGNITUDES.items()},
        parallax=(0.307, 0.02),
        av=(1.9, 0.15),
    )
    for name, dust in (("known", Dust()), ("free", Dust(prior="free"))):
        result = fit(star, dust=dust)
        print(f"dust {name}\n{result}\n")
        for kind, draw in (("corner", corner_figure), ("sed", sed_figure)):
            print(save_figure(draw(result), folder / f"dust_{name}_{kind}.pdf"))


if __name__ == "__main__":
    main(Path(sys.argv[1]) if sys.argv[1:] else ROOT / ".starkiln" / "dusty-giant")
