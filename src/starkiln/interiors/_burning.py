"""Energy from hydrogen burning."""

from __future__ import annotations

from typing import Any

import numpy as np

#: Share of the metals that is carbon, nitrogen and oxygen, by mass.
CNO_SHARE = 0.70
#: Energy set free per kilogram of hydrogen burnt, neutrinos taken off (CNO, J kg-1):
#: 25.0 MeV per helium nucleus made of 4 x 1.00783 u.
HYDROGEN_ENERGY = 25.0 * 1.602176634e-13 / (4.0 * 1.00783 * 1.66053906892e-27)

#: The factor by which the second and third pp chains raise the first one's yield, by T/1e7 K.
_PSI_T7 = np.array([0.0, 1.0, 1.35, 1.7, 2.0, 2.4, 3.0, 100.0])
_PSI = np.array([1.0, 1.02, 1.2, 1.55, 1.7, 1.6, 1.5, 1.45])


def burning_rate(density: Any, temperature: Any, hydrogen: Any, metals: Any) -> np.ndarray:
    """Return the energy rate of the pp chains and the CNO cycle in W kg-1.

    Parameters
    ----------
    density, temperature : array_like
        kg m-3 and K; plain numbers.
    hydrogen, metals : array_like
        Mass fractions X and Z; broadcast.

    Notes
    -----
    Kippenhahn, Weigert & Weiss 2012, Stellar Structure and Evolution, 2nd edition,
    eqs. 18.63 and 18.65, with weak screening, eq. 18.56, and psi read off fig. 18.7
    (all MEMORY). Both chains in equilibrium.
    """
    rho = np.asarray(density, dtype=float) * 1e-3
    t = np.asarray(temperature, dtype=float)
    x, z = np.asarray(hydrogen, dtype=float), np.asarray(metals, dtype=float)
    t9 = t * 1e-9
    third = np.cbrt(t9)
    screen = 5.92e-3 * np.sqrt((3.0 + x) / 2.0 * rho / (t * 1e-7) ** 3)
    g11 = 1.0 + t9 * (3.82 + t9 * (1.51 + t9 * (0.144 - 0.0114 * t9)))
    psi = np.interp(t * 1e-7, _PSI_T7, _PSI)
    pp = 2.57e4 * psi * np.exp(screen) * g11 * rho * x**2 * np.exp(-3.381 / third) / third**2
    g14 = 1.0 + t9 * (-2.00 + t9 * (3.41 - 2.43 * t9))
    cno = 8.24e25 * g14 * CNO_SHARE * z * x * rho / third**2
    cno = cno * np.exp(7.0 * screen - 15.231 / third - (t9 / 0.8) ** 2)
    return (pp + cno) * 1e-4
