"""Fit the constants of matter.LINE_HAZE to the Sun, stars of known diameter and mean dwarfs.

Run from the root of the source tree; about 40 models a step, 9 steps a pass:

    python scripts/calibrate_line_haze.py --passes 3

Only the calibration half of tests/reference/fundamental_stars.ecsv and mean dwarfs of type B3
to F5 are used. Prints the constants; write them into matter/_line_haze.py by hand, with the date.
"""

from __future__ import annotations

import argparse
import time
from pathlib import Path

import numpy as np
from astropy.table import Table
from scipy.optimize import least_squares

from starkiln.atmospheres import Numerics, model_atmosphere
from starkiln.constants import AU, R_SUN
from starkiln.errors import ConvergenceError
from starkiln.matter import LINE_HAZE, LineHaze
from starkiln.passbands import load_band

REFERENCE = Path("tests/reference")
# Apparent AB magnitudes of the Sun: Willmer 2018, ApJS 236, 47, Table 3.
SUN = {
    "Johnson U": -25.246,
    "Johnson B": -26.263,
    "Cousins R": -26.970,
    "Cousins I": -27.053,
    "2MASS J": -27.034,
    "2MASS H": -26.905,
    "2MASS Ks": -26.484,
    "SDSS g": -26.469,
    "SDSS r": -26.921,
}
STAR_BANDS = ("Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W3")
COLOURS = {
    "BP-RP": ("Gaia BP", "Gaia RP"),
    "V-Ks": ("Johnson V", "2MASS Ks"),
    "B-V": ("Johnson B", "Johnson V"),
    "U-B": ("Johnson U", "Johnson B"),
    "J-Ks": ("2MASS J", "2MASS Ks"),
    "Ks-W3": ("2MASS Ks", "WISE W3"),
}
DWARFS = ("B3V", "B8V", "A0V", "A5V", "F0V", "F5V")
PRIOR = np.array([0.3, 0.5, 0.3, 0.3, 0.5, 0.3, 0.15, 0.3])
# The 2MASS and W3 magnitudes of stars that bright are worth less than they say.
EXTRA = {"WISE W3": 0.10, "2MASS J": 0.03, "2MASS H": 0.03, "2MASS Ks": 0.03}
MODEL_ERROR = 0.03


def haze(p: np.ndarray) -> LineHaze:
    """Return the haze of a parameter vector."""
    return LineHaze((p[0], p[3]), (p[1], p[4]), (p[2], p[5]), p[6], p[7])


def magnitude(model: object, band_name: str, theta_rad: float, system: str | None = None) -> float:
    """Return a model's magnitude at an angular diameter."""
    band = load_band(band_name)
    x, y = np.log(model.wavelength_m), np.log(np.maximum(model.surface_flux, 1e-300))
    flux = np.exp(np.interp(np.log(band.wavelength_m), x, y)) @ band.weight
    return -2.5 * np.log10(flux * (0.5 * theta_rad) ** 2 / band.zero_flux_w_m3(system))


def compute(temperature: float, logg: float, feh: float, lines: LineHaze) -> object:
    """Return a model, the last one reached if it does not converge."""
    try:
        return model_atmosphere(temperature, logg, feh=feh, haze=lines, numerics=Numerics())
    except ConvergenceError as error:
        return error.partial


def star_residuals(row: object, lines: LineHaze) -> list[float]:
    """Return a star's residuals, its diameter free within its error."""
    model = compute(row["teff"], row["logg"], max(row["feh"], -2.5), lines)
    theta = row["theta"] * 4.84813681109536e-9
    r, s = [], []
    for name in STAR_BANDS:
        column = name.replace(" ", "_")
        observed = float(row[column])
        if not np.isfinite(observed):
            continue
        error = float(row[f"e_{column}"]) if f"e_{column}" in row.colnames else 0.0
        error = error if np.isfinite(error) else 0.2
        r.append(observed - magnitude(model, name, theta))
        s.append(np.sqrt(MODEL_ERROR**2 + error**2 + EXTRA.get(name, 0.0) ** 2))
    r, w = np.array(r), 1.0 / np.array(s) ** 2
    spread = 2.17 * row["e_theta"] / row["theta"] + 0.02
    offset = (w @ r) / (w.sum() + spread**-2)
    return [*((r - offset) * np.sqrt(w)), offset / spread]


def residuals(p: np.ndarray, stars: Table, dwarfs: Table) -> np.ndarray:
    """Return all residuals over their errors."""
    started = time.time()
    lines = haze(p)
    sun = compute(5772.0, 4.438, 0.0, lines)
    theta = 2.0 * R_SUN.value / AU.value
    out = [
        (magnitude(sun, b, theta, "AB") - m) / (0.05 if b[-1] == "U" else 0.02)
        for b, m in SUN.items()
    ]
    for row in stars:
        out += star_residuals(row, lines)
    for row in dwarfs:
        model = compute(row["teff"], row["logg"], 0.0, lines)
        for colour, (a, b) in COLOURS.items():
            if np.isfinite(row[colour]):
                error = 0.08 if colour == "U-B" else 0.03
                out.append(
                    (magnitude(model, a, 1.0) - magnitude(model, b, 1.0) - row[colour]) / error
                )
    out += list((p - START) / PRIOR)
    print(
        np.round(p, 3),
        f"chi2 {np.sum(np.square(out)):.1f} of {len(out)}, {time.time() - started:.0f} s",
        flush=True,
    )
    return np.array(out)


START = np.array(
    [
        *(LINE_HAZE.amplitude[0], LINE_HAZE.slope[0], LINE_HAZE.density[0]),
        *(LINE_HAZE.amplitude[1], LINE_HAZE.slope[1], LINE_HAZE.density[1]),
        *(LINE_HAZE.sigma, LINE_HAZE.bump),
    ]
)


def main() -> None:
    """Fit and print."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--passes", type=int, default=3)
    args = parser.parse_args()
    stars = Table.read(REFERENCE / "fundamental_stars.ecsv")
    stars = stars[(stars["half"] == "calibration") & (stars["teff"] > 4200.0)]
    dwarfs = Table.read(REFERENCE / "dwarf_colours.ecsv")
    dwarfs = dwarfs[[t in DWARFS for t in dwarfs["spectral_type"]]]
    fit = least_squares(
        residuals, START, args=(stars, dwarfs), diff_step=0.03, max_nfev=args.passes
    )
    print(haze(np.round(fit.x, 3)))


if __name__ == "__main__":
    main()
