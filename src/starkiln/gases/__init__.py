"""Ideal quantum gases: any statistics, energy proportional to a power of momentum, any dimension.

`IdealGas` gives states; `fermi`, `bose` and their inverses are the functions beneath.
The relativistic Fermi-Dirac integrals of an equation of state are `fermi_dirac`,
`fermi_moments` and `fermi_number`.
"""

from starkiln.gases._fermi_dirac import FermiMoments, fermi_dirac, fermi_moments, fermi_number
from starkiln.gases._ideal import IdealGas
from starkiln.gases._inverse import bose_inverse, fermi_inverse
from starkiln.gases._state import GasState
from starkiln.gases._statistics import bose, fermi

__all__ = [
    "FermiMoments",
    "GasState",
    "IdealGas",
    "bose",
    "bose_inverse",
    "fermi",
    "fermi_dirac",
    "fermi_inverse",
    "fermi_moments",
    "fermi_number",
]
