"""Rosseland-mean opacity of stellar interiors: classical laws and two calibrated bumps."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np


@dataclass(frozen=True)
class OpacityLaw:
    """The constants of `rosseland_opacity` that are no published law.

    They are a calibration: chosen so that zero-age models at Z = 0.02 reproduce the
    luminosities and radii of Tout et al. 1996 (`scripts/calibrate_opacity.py`).

    Attributes
    ----------
    iron_bump, deep_bump : float
        Height, in units of the electron-scattering opacity at Z = 0.02 and at
        rho/T6^3 = 1e-4 g cm-3, of the Gaussians in log10 T at 5.26 (width 0.13) and
        6.25 (width 0.22).
    bump_slope, bump_metals : float
        Their powers of rho/T6^3 and of Z/0.02.
    guillotine, guillotine_slope : float
        Bound-free absorption is divided by [1 + (a rho'^b)^2]^(1/2), where rho' =
        rho (1 + X) in g cm-3.
    """

    iron_bump: float = 3.40
    deep_bump: float = 1.385
    bump_slope: float = 0.0394
    bump_metals: float = 0.566
    guillotine: float = 0.6885
    guillotine_slope: float = 0.814


#: The constants found; see the class.
CALIBRATED = OpacityLaw()

_IRON, _DEEP = (5.26, 0.13), (6.25, 0.22)


def rosseland_opacity(
    density: Any, temperature: Any, hydrogen: Any, metals: Any, law: OpacityLaw = CALIBRATED
) -> np.ndarray:
    """Return the opacity in m2 kg-1.

    Parameters
    ----------
    density, temperature : array_like
        kg m-3 and K; plain numbers.
    hydrogen, metals : array_like
        Mass fractions X and Z; broadcast.
    law : OpacityLaw
        The calibrated constants.

    Notes
    -----
    Electron scattering with its fall at high temperature and density: Paczynski
    1983, ApJ 267, 315, after Buchler & Yueh 1976. Kramers' bound-free and free-free
    absorption, 4.34e25 and 3.68e22 cgs: Schwarzschild 1958, Structure and Evolution
    of the Stars, eqs. 9.16 and 9.18 (MEMORY). H-: 2.5e-31 (Z/0.02) rho^0.5 T^9 cgs,
    Hansen, Kawaler & Trimble 2004, Stellar Interiors, eq. 4.65 (MEMORY), in series
    with the rest. Conduction is left out. No match for tabulated opacities below
    1e4 K or outside main-sequence interiors above 1.6 solar masses.
    """
    rho = np.asarray(density, dtype=float) * 1e-3
    t, x, z = (np.asarray(v, dtype=float) for v in (temperature, hydrogen, metals))
    rho_x = rho * (1.0 + x)
    crowd = (1.0 + 2.7e11 * rho / t**2) * (1.0 + (t / 4.5e8) ** 0.86)
    scattering = 0.2 * (1.0 + x) / crowd
    kramers = rho_x * t**-3.5
    cut = np.sqrt(1.0 + (law.guillotine * rho_x**law.guillotine_slope) ** 2)
    bound = 4.34e25 * z * kramers / cut
    free = 3.68e22 * (1.0 - z) * kramers
    log_t = np.log10(t)
    shape = law.iron_bump * np.exp(-0.5 * ((log_t - _IRON[0]) / _IRON[1]) ** 2)
    shape = shape + law.deep_bump * np.exp(-0.5 * ((log_t - _DEEP[0]) / _DEEP[1]) ** 2)
    lines = 0.2 * (1.0 + x) * shape * (z / 0.02) ** law.bump_metals
    lines = lines * (1e22 * rho / t**3) ** law.bump_slope
    atoms = scattering + bound + free + lines
    h_minus = 2.5e-31 * (z / 0.02) * np.sqrt(rho) * t**9
    return 0.1 / (1.0 / atoms + 1.0 / (h_minus + 1e-30))
