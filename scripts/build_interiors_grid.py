"""Build `src/starkiln/interiors/data/main_sequence.npz`, the grid of main-sequence models.

Run: python scripts/build_interiors_grid.py src/starkiln/interiors/data/main_sequence.npz
(about ten minutes of one core). Tracks of constant mass by `starkiln.interiors._evolution`,
at masses even in ln M, metal fractions even in ln Z, hydrogen by `hydrogen_of_metals`; each
is read off at central hydrogen even in ln(s + 0.03), s = X_c/X_0.
"""

from __future__ import annotations

import json
import sys
import time
from dataclasses import asdict
from pathlib import Path

import numpy as np
from scipy.interpolate import PchipInterpolator

from starkiln._version import __version__
from starkiln.interiors._evolution import DEPTHS, OVERSHOOT, QUANTITIES, evolve, summary
from starkiln.interiors._start import Start
from starkiln.interiors._structure import POINTS
from starkiln.matter import CALIBRATED, composition, hydrogen_of_metals
from starkiln.store import atomic_write

MASSES = np.geomspace(1.6, 120.0, 25)
METALS = np.geomspace(1e-3, 0.03, 7)
STAGES = 29
SHIFT, LAST = 0.03, 0.0075
MOST_MISSING = 10
#: Of the zero-age models, the masses and points kept as first guesses for new ones.
KEPT_MASSES, KEPT_POINTS = slice(0, None, 2), np.linspace(0, POINTS - 1, 101)


def stages() -> np.ndarray:
    """Return s = X_c/X_0, from 1 to `LAST`."""
    return np.geomspace(1.0 + SHIFT, LAST + SHIFT, STAGES) - SHIFT


def read_off(epochs: list, hydrogen: float) -> np.ndarray:
    """Return the quantities at the stages; see `extend` for those past the last model."""
    s = np.array([epoch.hydrogen for epoch in epochs]) / hydrogen
    values = np.array([summary(epoch) for epoch in epochs])
    if len(epochs) < 4:
        return np.full((STAGES, values.shape[1]), np.nan)
    return extend(PchipInterpolator(s[::-1], values[::-1], extrapolate=False)(stages()))


def extend(values: np.ndarray) -> np.ndarray:
    """Return values with the stages past the last model continued along s.

    Only the largest and most metal-rich stars need it, whose envelopes swell to the limit
    of light at the very end; a track that lacks more than `MOST_MISSING` stays NaN.
    """
    missing = int(np.isnan(values[:, 0]).sum())
    if missing and missing <= MOST_MISSING:
        s, last = stages(), STAGES - missing - 1
        slope = (values[last] - values[last - 1]) / (s[last] - s[last - 1])
        values[last + 1 :] = values[last] + slope * (s[last + 1 :, None] - s[last])
    return values


def build() -> tuple[np.ndarray, np.ndarray]:
    """Return the table (Z, M, stage, quantity) and the zero-age unknowns (Z, M, 4, point)."""
    table = np.full((METALS.size, MASSES.size, STAGES, len(QUANTITIES)), np.nan)
    first = np.full((METALS.size, MASSES.size, 4, POINTS), np.nan)
    middle = int(np.argmin(np.abs(np.log(MASSES / 10.0))))
    order = [*range(middle, MASSES.size), *range(middle - 1, -1, -1)]
    for i, metals in enumerate(METALS):
        matter = composition(float(hydrogen_of_metals(metals)), float(metals))
        starts: dict[int, Start] = {}
        for j in order:
            begun = time.perf_counter()
            near = starts.get(j - 1 if j > middle else j + 1)
            epochs = evolve(float(MASSES[j]), matter, near)
            unknowns = epochs[0].shells.unknowns
            starts[j] = Start(float(MASSES[j]), matter, unknowns)
            first[i, j] = unknowns
            table[i, j] = read_off(epochs, matter.hydrogen)
            print(
                f"Z {metals:.5f} M {MASSES[j]:7.3f} models {len(epochs):3d} "
                f"age {epochs[-1].age_s / 3.156e13:9.3f} Myr X_c {epochs[-1].hydrogen:.4f} "
                f"{time.perf_counter() - begun:6.1f} s",
                flush=True,
            )
    return table, first


def thinned(unknowns: np.ndarray) -> np.ndarray:
    """Return the unknowns at `KEPT_POINTS`."""
    every = np.arange(POINTS)
    return np.apply_along_axis(lambda row: np.interp(KEPT_POINTS, every, row), -1, unknowns)


def main(path: str) -> None:
    """Build the grid and write it with its provenance."""
    table, first = build()
    header = {
        "description": "Main-sequence models at constant mass: log10 L, log10 R (nominal solar), "
        "age in Myr, log10 of P_rad/P at the centre, of the volume integrals and at given m/M",
        "reference": "computed by scripts/build_interiors_grid.py, starkiln " + __version__,
        "licence": "BSD-3-Clause",
        "retrieved": time.strftime("%Y-%m-%d", time.gmtime()),
        "quantities": QUANTITIES,
        "depths": DEPTHS,
        "overshoot": OVERSHOOT,
        "opacity": asdict(CALIBRATED),
        "axes": "Z even in ln, M even in ln, s = X_c/X_0 even in ln(s + shift)",
        "shift": SHIFT,
    }
    content = {
        "header": np.array(json.dumps(header)),
        "metals": METALS,
        "mass": MASSES,
        "stage": stages(),
        "table": table.astype(np.float32),
        "start_mass": MASSES[KEPT_MASSES],
        "start": thinned(first[:, KEPT_MASSES]).astype(np.float32),
    }
    atomic_write(Path(path), lambda stream: np.savez_compressed(stream, **content))
    print(
        f"tracks cut short: {int(np.isnan(table[:, :, -1, 0]).sum())} of {table[:, :, 0, 0].size}"
    )


if __name__ == "__main__":
    main(sys.argv[1])
