"""Zero-age luminosity and radius, a published fit to detailed models."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.store import read_data_table

#: Masses (solar) and metal fractions over which Tout et al. 1996 fitted.
MASS_RANGE = (0.1, 100.0)
METALS_RANGE = (1e-4, 0.03)


def zero_age_luminosity(mass: Any, metals: Any = 0.02) -> np.ndarray:
    """Return L/Lsun at zero age.

    Parameters
    ----------
    mass, metals : array_like
        Solar masses and metal fraction; broadcast. Hydrogen goes with the metals
        by `matter.hydrogen_of_metals`.

    Returns
    -------
    numpy.ndarray
        Tout et al. 1996, MNRAS 281, 257, eq. 1, within 7.5 per cent of the
        detailed models; NaN outside `MASS_RANGE` or `METALS_RANGE`.
    """
    m, k = _arguments(mass, metals)
    top = k["alpha"] * m**5.5 + k["beta"] * m**11
    bottom = k["gamma"] + m**3 + k["delta"] * m**5 + k["epsilon"] * m**7
    return top / (bottom + k["zeta"] * m**8 + k["eta"] * m**9.5)


def zero_age_radius(mass: Any, metals: Any = 0.02) -> np.ndarray:
    """Return R/Rsun at zero age: eq. 2, within 5 per cent; see `zero_age_luminosity`."""
    m, k = _arguments(mass, metals)
    top = k["theta"] * m**2.5 + k["iota"] * m**6.5 + k["kappa"] * m**11
    top = top + k["lambda"] * m**19 + k["mu"] * m**19.5
    bottom = k["nu"] + k["xi"] * m**2 + k["omicron"] * m**8.5 + m**18.5 + k["pi"] * m**19.5
    return top / bottom


def _arguments(mass: Any, metals: Any) -> tuple[np.ndarray, dict[str, np.ndarray]]:
    m, z = np.broadcast_arrays(np.asarray(mass, dtype=float), np.asarray(metals, dtype=float))
    inside = (m >= MASS_RANGE[0]) & (m <= MASS_RANGE[1])
    inside &= (z >= METALS_RANGE[0]) & (z <= METALS_RANGE[1])
    x = np.log10(np.where(inside, z, 0.02) / 0.02)
    values = {name: np.polynomial.polynomial.polyval(x, row) for name, row in _table().items()}
    return np.where(inside, m, np.nan), values


@lru_cache(maxsize=1)
def _table() -> dict[str, np.ndarray]:
    table = read_data_table("interiors", "zero_age_tout1996.ecsv")
    return {str(row["name"]): np.array([float(row[c]) for c in "abcde"]) for row in table}
