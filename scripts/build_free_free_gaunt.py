"""Write matter/data/free_free_gaunt.ecsv: the exact free-free Gaunt factor, thermally averaged.

Run from the root of the source tree (needs mpmath, a few seconds):

    python scripts/build_free_free_gaunt.py
"""

from __future__ import annotations

from pathlib import Path

import mpmath as mp
import numpy as np

LOG_U = np.arange(-3.5, 2.51, 0.25)
LOG_GAMMA2 = np.arange(-1.0, 2.51, 0.25)
NODES = 20
TARGET = Path("src/starkiln/matter/data/free_free_gaunt.ecsv")


def gaunt(eta_low: mp.mpf, eta_high: mp.mpf) -> mp.mpf:
    """Return the Gaunt factor between two energies E = Ry Z^2/eta^2.

    Karzas & Latter 1961, ApJS 6, 167, equations 16 to 20.
    """
    low, high = 1 / eta_low, 1 / eta_high
    z = -4 * low * high / (low - high) ** 2
    i0, i1 = (_integral(ell, eta_low, eta_high, z) for ell in (0, 1))
    a = eta_low**2 + eta_high**2 + 2 * eta_low**2 * eta_high**2
    b = 2 * eta_low * eta_high * mp.sqrt((1 + eta_low**2) * (1 + eta_high**2))
    return 2 * mp.sqrt(3) / (mp.pi * eta_low * eta_high) * (a * i0 - b * i1) * i0


def _integral(ell: int, eta_low: mp.mpf, eta_high: mp.mpf, z: mp.mpf) -> mp.mpf:
    phase = (abs(eta_low - eta_high) / (eta_low + eta_high)) ** (1j * (eta_low + eta_high))
    first, second = ell + 1 - 1j * eta_high, ell + 1 - 1j * eta_low
    series = mp.re(phase * mp.hyp2f1(first, second, 2 * ell + 2, z))
    gammas = abs(mp.gamma(ell + 1 + 1j * eta_low) * mp.gamma(ell + 1 + 1j * eta_high))
    damp = mp.exp(mp.pi * abs(eta_low - eta_high) / 2)
    return (-z) ** (ell + 1) * damp * gammas / mp.gamma(2 * ell + 2) * series / 4


def averaged(u: float, gamma2: float) -> float:
    """Return the average over Maxwell's distribution; u = h nu/kT, gamma2 = Z^2 Ry/kT."""
    nodes, weights = np.polynomial.laguerre.laggauss(NODES)
    total = 0.0
    for x, weight in zip(nodes, weights, strict=True):
        if weight > 1e-12:
            low, high = mp.sqrt(gamma2 / x), mp.sqrt(gamma2 / (x + u))
            total += weight * float(gaunt(low, high))
    return total


def main() -> None:
    """Write the table."""
    from astropy.table import Table

    from starkiln.store import atomic_write

    rows = []
    with mp.workdps(30):
        for log_gamma2 in LOG_GAMMA2:
            for log_u in LOG_U:
                value = averaged(10.0**log_u, 10.0**log_gamma2)
                rows.append((log_gamma2, log_u, round(value, 5)))
            print(f"log gamma^2 = {log_gamma2:g} done")
    table = Table(rows=rows, names=("log_gamma2", "log_u", "gaunt"))
    table["log_gamma2"].description = "log10 of Z^2 Ry/(k T)"
    table["log_u"].description = "log10 of h nu/(k T)"
    table["gaunt"].description = "Free-free Gaunt factor averaged over Maxwell's distribution"
    table.meta = {
        "description": "Exact non-relativistic free-free Gaunt factor, thermally averaged",
        "reference": "computed from Karzas & Latter 1961, ApJS 6, 167, equations 16 to 20, by "
        "scripts/build_free_free_gaunt.py",
        "licence": "BSD-3-Clause",
        "retrieved": "2026-12-01",
    }
    atomic_write(TARGET, lambda f: table.write(f, format="ascii.ecsv"), mode="w")


if __name__ == "__main__":
    main()
