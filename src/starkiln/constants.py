"""Physical and nominal constants: value, unit, uncertainty and reference of each.

The nominal solar values of IAU 2015 Resolution B3 are exact conversion
constants, not measurements; so are the zero points of IAU 2015 Resolution B2.
CODATA values are those of the 2022 adjustment (the exact ones are those of 2018).
Inside the package use `NAME.value`, a float in SI units; hand `NAME.quantity` to an
observer.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

_CODATA = "CODATA 2022, Mohr et al. 2025, Rev. Mod. Phys. 97, 025002"
_SI = "SI Brochure, 9th edition (2019), defining constant"
_B2 = "IAU 2015 Resolution B2, arXiv:1510.06262"
_B3 = "IAU 2015 Resolution B3; Prsa et al. 2016, AJ 152, 41"


@dataclass(frozen=True)
class Constant:
    """One constant.

    Attributes
    ----------
    name : str
        What it is.
    value : float
        Value in `unit`.
    unit : str
        SI unit, in astropy's spelling (`mag` for magnitudes).
    uncertainty : float
        Standard uncertainty in `unit`; 0 for an exact constant.
    reference : str
        Where the value comes from.
    """

    name: str
    value: float
    unit: str
    uncertainty: float
    reference: str

    @property
    def exact(self) -> bool:
        """Whether the constant is exact by definition."""
        return self.uncertainty == 0.0

    @property
    def quantity(self) -> Any:
        """The value as an `astropy.units.Quantity`."""
        from astropy import units as u

        return u.Quantity(self.value, self.unit)


C = Constant("speed of light in vacuum", 299792458.0, "m / s", 0.0, _SI)
H = Constant("Planck constant", 6.62607015e-34, "J s", 0.0, _SI)
K_B = Constant("Boltzmann constant", 1.380649e-23, "J / K", 0.0, _SI)
E_CHARGE = Constant("elementary charge", 1.602176634e-19, "C", 0.0, _SI)
HBAR = Constant("reduced Planck constant", 1.0545718176461565e-34, "J s", 0.0, _SI)
#: 2 pi^5 k^4 / (15 h^3 c^2).
SIGMA_SB = Constant(
    "Stefan-Boltzmann constant", 5.6703744191844314e-08, "W / (m2 K4)", 0.0, _CODATA
)
#: 4 sigma / c.
A_RAD = Constant("radiation constant", 7.565733250280007e-16, "J / (m3 K4)", 0.0, _CODATA)
#: h c / k.
C2 = Constant("second radiation constant", 0.014387768775039337, "m K", 0.0, _CODATA)
G = Constant("Newtonian constant of gravitation", 6.67430e-11, "m3 / (kg s2)", 1.5e-15, _CODATA)
M_E = Constant("electron mass", 9.1093837139e-31, "kg", 2.8e-40, _CODATA)
M_U = Constant("atomic mass constant", 1.66053906892e-27, "kg", 5.2e-37, _CODATA)
M_P = Constant("proton mass", 1.67262192595e-27, "kg", 5.2e-37, _CODATA)
SIGMA_T = Constant("Thomson cross-section", 6.6524587051e-29, "m2", 6.2e-38, _CODATA)

AU = Constant("astronomical unit", 149597870700.0, "m", 0.0, "IAU 2012 Resolution B2")
#: 648000/pi au.
PARSEC = Constant("parsec", 3.0856775814913674e16, "m", 0.0, _B2)
YEAR = Constant("Julian year", 31557600.0, "s", 0.0, "IAU style manual (1989): 365.25 d")

R_SUN = Constant("nominal solar radius", 6.957e8, "m", 0.0, _B3)
S_SUN = Constant("nominal total solar irradiance at 1 au", 1361.0, "W / m2", 0.0, _B3)
L_SUN = Constant("nominal solar luminosity", 3.828e26, "W", 0.0, _B3)
T_SUN = Constant("nominal solar effective temperature", 5772.0, "K", 0.0, _B3)
GM_SUN = Constant("nominal solar mass parameter", 1.3271244e20, "m3 / s2", 0.0, _B3)
L_BOL0 = Constant("luminosity of M_bol = 0", 3.0128e28, "W", 0.0, _B2)
#: L_BOL0 / (4 pi (10 pc)^2), printed as 2.518021002e-8 in the resolution.
F_BOL0 = Constant("irradiance of m_bol = 0", 2.5180210026334008e-08, "W / m2", 0.0, _B2)
#: (GM)_sun / G, with the uncertainty of G.
M_SUN = Constant(
    "solar mass (nominal GM over CODATA G)",
    1.3271244e20 / 6.67430e-11,
    "kg",
    1.3271244e20 / 6.67430e-11 * 1.5e-15 / 6.67430e-11,
    f"{_B3}; {_CODATA}",
)

#: One milliarcsecond in radians.
MAS_RAD = Constant("milliarcsecond", 4.848136811095360e-09, "rad", 0.0, "pi / (180 * 3600 * 1000)")


def all_constants() -> dict[str, Constant]:
    """Return every constant of this module by its Python name."""
    return {key: item for key, item in globals().items() if isinstance(item, Constant)}
