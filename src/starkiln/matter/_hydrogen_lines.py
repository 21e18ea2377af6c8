"""Lines of hydrogen, broadened by the plasma's fields and merging into the continuum."""

from __future__ import annotations

import numpy as np

from starkiln.constants import C2, K_B, M_P, C
from starkiln.matter._continuum_opacity import inglis_teller_level, undissolved
from starkiln.matter._hydrogenic import LINE_M2_HZ, RYDBERG_H, oscillator_strength
from starkiln.matter._ionisation import IonisationState

__all__ = ["HydrogenLines", "line_wavelength"]

_SERIES = 5
_LINES = 30
#: A line reaches this many spacings to its next neighbour, and no farther than this fraction.
_REACH_SPACINGS = 8.0
_REACH_FRACTION = 0.08
#: Normal field strength 1.25e-9 n_e^(2/3) (cgs) with n_e in m-3.
_FIELD = 1.25e-9 * 1e-4
#: Quasi-static shift 5.5e-5 (n m)^4/(m^2 - n^2) Angstrom per unit field (Edmonds, Schlueter &
#: Wells 1967, Mem. RAS 71, 271; from memory), here in metres.
_SHIFT_M = 5.5e-15
#: b/s at which 1.5 s^1.5/(|x|^2.5 + b^2.5) has unit area: (3 (pi/2.5)/sin(pi/2.5))^(2/3).
_CORE = float((3.0 * (np.pi / 2.5) / np.sin(np.pi / 2.5)) ** (2.0 / 3.0))


def line_wavelength(n: int, m: int) -> float:
    """Return the vacuum wavelength of the line n - m of hydrogen in metres."""
    return 1.0 / (RYDBERG_H * (1.0 / n**2 - 1.0 / m**2))


def line_profile(offset_m: np.ndarray, stark_m: np.ndarray, doppler_m: np.ndarray) -> np.ndarray:
    """Return a line's profile per metre of wavelength, of unit area.

    Parameters
    ----------
    offset_m : numpy.ndarray
        Distance from the line's centre in metres.
    stark_m : numpy.ndarray
        Shift s in the normal field; the wing is 1.5 s^1.5/|offset|^2.5 on either
        side (Holtsmark 1919 for ions, doubled for electrons).
    doppler_m : numpy.ndarray
        1/e half-width by thermal motion.

    Notes
    -----
    The wing is levelled at the wider of its own core and the Doppler width;
    what area it then lacks goes into a Gaussian.
    """
    core = np.maximum(_CORE * stark_m, doppler_m)
    # x^2.5 through square roots: several times faster than a power.
    distance = np.abs(offset_m)
    wing = 1.5 * stark_m**1.5 / (distance**2 * np.sqrt(distance) + core**2 * np.sqrt(core))
    rest = 1.0 - (_CORE * stark_m / core) ** 1.5
    return wing + rest * np.exp(-((offset_m / doppler_m) ** 2)) / (np.sqrt(np.pi) * doppler_m)


class HydrogenLines:
    """Absorption by the lines of the first five series on a fixed set of wavelengths.

    Parameters
    ----------
    wavelength_m : numpy.ndarray
        Metres, ascending, shape (n_wave,).
    """

    def __init__(self, wavelength_m: np.ndarray) -> None:
        self.wavelength_m = np.asarray(wavelength_m, dtype=float)
        self._lines: list[tuple[int, int, float, float, slice]] = []
        for n in range(1, _SERIES + 1):
            for m in range(n + 1, n + 1 + _LINES):
                centre = line_wavelength(n, m)
                spacing = centre - line_wavelength(n, m + 1)
                reach = min(_REACH_SPACINGS * spacing, _REACH_FRACTION * centre)
                ends = np.searchsorted(self.wavelength_m, [centre - reach, centre + reach])
                if ends[1] > ends[0]:
                    window = slice(int(ends[0]), int(ends[1]))
                    self._lines.append((n, m, centre, oscillator_strength(n, m), window))

    def absorption(self, gas: IonisationState) -> np.ndarray:
        """Return the absorption in m-1, stimulated emission taken off; (n_depth, n_wave)."""
        t = gas.temperature_k[:, None]
        total = np.zeros((gas.temperature_k.size, self.wavelength_m.size))
        merging = inglis_teller_level(gas.electron)[:, None]
        field = _FIELD * gas.electron[:, None] ** (2.0 / 3.0)
        speed = np.sqrt(2.0 * K_B.value * t / M_P.value) / C.value
        excited = np.exp(-C2.value * RYDBERG_H / t)
        for n, m, centre, strength, window in self._lines:
            stark = field * (_SHIFT_M * (n * m) ** 4 / (m**2 - n**2))
            profile = line_profile(self.wavelength_m[window] - centre, stark, speed * centre)
            lower = gas.h_neutral[:, None] * n**2 * excited ** (1.0 - 1.0 / n**2)
            area = LINE_M2_HZ * strength * centre**2 / C.value
            total[:, window] += lower * (area * undissolved(np.asarray(m), merging)) * profile
        return total * -np.expm1(-C2.value / (self.wavelength_m * t))
