"""Make `fermi_dirac.csv` and `gas_state.csv` with mpmath, independently of the package.

Run: python scripts/make_fermi_reference.py tests/reference (two minutes).
Each integral is done by mpmath's tanh-sinh quadrature at 40 digits, split at the edge of
the occupied levels.
"""

from __future__ import annotations

import sys
from pathlib import Path

import mpmath as mp

ETAS = (-300, -30, -5, -1, 0, 1, 4, 12, 20, 39.9, 40.1, 55, 100, 1000, 30000)
THETAS = (0, 1e-6, 1e-4, 0.002, 0.01, 0.1, 1, 10)
ORDERS = (0.5, 1.5, 2.5)

#: Ions and electrons per atomic mass unit, and states (eta, K) over the plane.
IONS, ELECTRONS = "0.77", "0.85"
STATES = [
    (eta, 10.0**logt)
    for logt in (4.0, 5.5, 7.0, 8.0, 9.0, 9.7, 10.4)
    for eta in (-15, -6, -2, 0.5, 6, 45, 1000)
    if eta * 10.0**logt > -5e9
]
GAS_HEADER = (
    "# Gas pressure (Pa), energy (J/kg) and entropy (J/K/kg; light included in both) of matter "
    f"with {IONS} ions and {ELECTRONS} electrons per atomic mass unit, at 30 digits by mpmath "
    "(scripts/make_fermi_reference.py)."
)


def integral(k: float, eta: float, theta: float) -> mp.mpf:
    """Return F_k(eta, theta)."""
    k, eta, theta = mp.mpf(k), mp.mpf(eta), mp.mpf(theta)

    def integrand(t: mp.mpf) -> mp.mpf:
        x = t * t
        return 2 * t ** (2 * k + 1) * mp.sqrt(1 + theta * x / 2) / (mp.exp(x) * a + b)

    # mpmath stops at an absolute error, so e^eta is taken out where it is small.
    a, b = (1, mp.exp(eta)) if eta < 0 else (mp.exp(-eta), 1)
    edge = [eta + y for y in (-90, -30, -10, -3, 0, 3, 10, 30, 90, 150)]
    points = [mp.sqrt(x) for x in edge if x > 0]
    if not points:
        points = [mp.sqrt(x) for x in (1, 5, 20, 60, 120)]
    start = [mp.mpf(0)]
    if points[0] > 30:
        start += [points[0] * f / 8 for f in range(1, 8)]
    return mp.quad(integrand, start + points) * b


def electrons(eta: mp.mpf, theta: mp.mpf) -> list[mp.mpf]:
    """Return number, pressure, energy and entropy over 8 pi sqrt(2) (m c/h)^3 theta^1.5."""
    half, three, five = (integral(k, eta, theta) for k in ORDERS)
    number, energy = half + theta * three, three + theta * five
    pressure = (three + theta * five / 2) * 2 / 3
    return [number, pressure, energy, energy + pressure - eta * number]


def pair_gas(eta: mp.mpf, theta: mp.mpf) -> list[mp.mpf]:
    """Return the same four of electrons and positrons; number is the excess of electrons."""
    minus = electrons(eta, theta)
    if eta + 2 / theta > 200 + max(0, -eta):
        return minus
    plus = electrons(-eta - 2 / theta, theta)
    signs = (-1, 1, 1, 1)
    total = [a + sign * b for a, sign, b in zip(minus, signs, plus, strict=True)]
    total[2] += 2 / theta * plus[0]
    return total


def gas_row(eta: float, temperature: float) -> list[mp.mpf]:
    """Return density, gas pressure, energy and entropy of one state; see GAS_HEADER."""
    eta, t = mp.mpf(eta), mp.mpf(temperature)
    k, h, c = mp.mpf("1.380649e-23"), mp.mpf("6.62607015e-34"), mp.mpf(299792458)
    m_e, m_u = mp.mpf("9.1093837139e-31"), mp.mpf("1.66053906892e-27")
    theta = k * t / (m_e * c**2)
    states = 8 * mp.pi * mp.sqrt(2) * (m_e * c / h) ** 3 * theta**1.5
    excess, pressure, energy, entropy = pair_gas(eta, theta)
    rho = states * excess * m_u / mp.mpf(ELECTRONS)
    n_ion = rho * mp.mpf(IONS) / m_u
    light = 8 * mp.pi**5 * (k * t) ** 4 / (15 * (h * c) ** 3) / 3
    cell = (2 * mp.pi * m_u / mp.mpf(IONS) * k * t / h**2) ** 1.5 / n_ion
    return [
        rho,
        n_ion * k * t + states * k * t * pressure,
        (1.5 * n_ion * k * t + states * k * t * energy + 3 * light) / rho,
        (n_ion * k * (2.5 + mp.log(cell)) + states * k * entropy + 4 * light / t) / rho,
    ]


def write(path: Path, lines: list[str]) -> None:
    """Write the lines of one table."""
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def main(folder: str) -> None:
    """Write both tables."""
    mp.mp.dps = 30
    lines = [
        "# Generalised Fermi-Dirac integrals at 30 digits by mpmath "
        "(scripts/make_fermi_reference.py).",
        "eta,theta," + ",".join(f"F_{k}" for k in ORDERS),
    ]
    for eta in ETAS:
        for theta in THETAS:
            values = [mp.nstr(integral(k, eta, theta), 18) for k in ORDERS]
            lines.append(f"{eta},{theta}," + ",".join(values))
    write(Path(folder) / "fermi_dirac.csv", lines)
    lines = [GAS_HEADER, "eta,temperature,density,gas_pressure,energy,entropy"]
    for eta, temperature in STATES:
        values = [mp.nstr(value, 18) for value in gas_row(eta, temperature)]
        lines.append(f"{eta},{temperature}," + ",".join(values))
    write(Path(folder) / "gas_state.csv", lines)


if __name__ == "__main__":
    main(sys.argv[1])
