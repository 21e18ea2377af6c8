"""Find the constants of `starkiln.matter.OpacityLaw` from published zero-age models.

Run: python scripts/calibrate_opacity.py (about five minutes). Least squares on ln L and ln R
of Tout et al. 1996 over 1.6 to 100 solar masses at Z = 0.02, and with weight 0.6 at 0.01 and
0.03. Z = 0.004 is printed as a check that the fit has not seen.

The minimum is a flat valley: `bump_slope` may go to 0 while `iron_bump` falls to 2.9, and no
luminosity or radius changes by more than 0.7 per cent (2 at Z = 0.03 above 60 solar masses).
The constants in the package are one point of it; whoever changes them builds the grid anew.
"""

from __future__ import annotations

from dataclasses import astuple

import numpy as np
from scipy.optimize import least_squares

from starkiln.constants import L_SUN, R_SUN
from starkiln.errors import ConvergenceError
from starkiln.interiors import zero_age_luminosity, zero_age_radius
from starkiln.interiors._start import Start
from starkiln.interiors._structure import solve_homogeneous
from starkiln.matter import CALIBRATED, OpacityLaw, composition, hydrogen_of_metals

MASSES = (20.0, 40.0, 60.0, 80.0, 100.0, 10.0, 7.0, 5.0, 3.5, 2.5, 2.0, 1.6)
FEWER = (20.0, 40.0, 60.0, 80.0, 10.0, 5.0, 3.5, 2.0)
POINTS = 200

_known: dict[tuple[float, float], Start] = {}


def residuals(law: OpacityLaw, metals: float, masses: tuple[float, ...] = MASSES) -> np.ndarray:
    """Return ln(L/L_Tout) and ln(R/R_Tout), one row per mass; 0.3 where no model is found."""
    matter = composition(float(hydrogen_of_metals(metals)), metals)
    rows = []
    for mass in masses:
        start = _known.get((mass, metals))
        try:
            problem, shells = solve_homogeneous(mass, matter, start=start, law=law, points=POINTS)
        except ConvergenceError:
            rows.append([0.3, 0.3])
            continue
        y = shells.unknowns
        _known[mass, metals] = Start(mass, matter, y)
        light = y[3, -1] * problem.luminosity_w / L_SUN.value
        radius = np.exp(y[0, -1]) / R_SUN.value
        rows.append(
            [
                np.log(light / zero_age_luminosity(mass, metals)),
                np.log(radius / zero_age_radius(mass, metals)),
            ]
        )
    return np.array(rows)


def main() -> None:
    """Fit, and print the constants and what is left."""
    first = np.array(astuple(CALIBRATED))

    def misfit(logs: np.ndarray) -> np.ndarray:
        law = OpacityLaw(*(first * np.exp(logs)))
        parts = [residuals(law, 0.02)]
        parts += [0.6 * residuals(law, metals, FEWER) for metals in (0.01, 0.03)]
        return np.concatenate(parts).ravel()

    fit = least_squares(misfit, np.zeros(first.size), diff_step=0.02, x_scale=0.3, max_nfev=10)
    law = OpacityLaw(*(float(value) for value in first * np.exp(fit.x)))
    print(law)
    for metals in (0.02, 0.01, 0.03, 0.004):
        left = residuals(law, metals)
        print(f"Z = {metals}: ln(model/published) by mass {MASSES}")
        print("  L", np.round(left[:, 0], 3))
        print("  R", np.round(left[:, 1], 3))


if __name__ == "__main__":
    main()
