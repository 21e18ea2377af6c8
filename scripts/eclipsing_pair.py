"""An eclipsing pair: its distance from its own light, held against its parallax.

Run: python scripts/eclipsing_pair.py [FOLDER]

The light curve of an invented pair gives both radii, the spectra both temperatures: so
both luminosities. The photometry of the two together gives the bolometric flux at
Earth. Luminosity and flux make a distance that no parallax went into:
d = sqrt((L1 + L2) / (4 pi F)). One temperature stands for two in the fit; where they
differ by no more than here, the flux is off by less than its error.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

from starkiln import Star, fit, luminosity
from starkiln.constants import L_SUN, PARSEC
from starkiln.inference import Settings
from starkiln.report import save_figure, sed_figure

ROOT = Path(__file__).resolve().parent.parent
#: Radius and temperature of each star with their errors, in solRad and K.
PAIR = (((3.42, 0.05), (16500.0, 400.0)), ((2.71, 0.05), (14200.0, 350.0)))
MAGNITUDES = {
    "Gaia BP": 7.68, "Gaia G": 7.69, "Gaia RP": 7.65, "2MASS J": 7.75, "2MASS H": 7.69,
    "2MASS Ks": 7.73, "WISE W2": 7.74, "WISE W3": 7.76,
}  # fmt: skip


def main(folder: Path) -> tuple[float, float]:
    """Return the distance and its error in pc."""
    folder.mkdir(parents=True, exist_ok=True)
    star = Star(
        "Ember 12",
        {band: (magnitude, 0.02) for band, magnitude in MAGNITUDES.items()},
        av=(0.35, 0.04),
        parallax=(1.56, 0.03),
        # The light's mean temperature, from the spectra: photometry hardly holds it.
        teff=(15700.0, 400.0),
    )
    result = fit(star, settings=Settings(use_published_temperature=True))
    flux = np.asarray(result.draws["bolometric_flux"])
    rng = np.random.default_rng(12)
    light = sum(
        luminosity(rng.normal(*radius, flux.size), rng.normal(*temperature, flux.size)).value
        for radius, temperature in PAIR
    )
    distance = np.sqrt(light * L_SUN.value / (4.0 * np.pi * flux)) / PARSEC.value
    low, middle, high = np.percentile(distance, [16, 50, 84])
    errors = f"+{high - middle:.0f} -{middle - low:.0f}"
    print(f"distance from the pair's light: {middle:.0f} {errors} pc")
    print(f"distance from its parallax:     {result.interval('distance')}")
    print(save_figure(sed_figure(result), folder / "pair_sed.pdf"))
    return float(middle), float((high - low) / 2)


if __name__ == "__main__":
    main(Path(sys.argv[1]) if sys.argv[1:] else ROOT / ".starkiln" / "eclipsing-pair")
