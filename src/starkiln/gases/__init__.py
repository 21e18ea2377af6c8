"""Ideal quantum gases and their integrals."""

from starkiln.gases._fermi_dirac import FermiMoments, fermi_dirac, fermi_moments, fermi_number

__all__ = ["FermiMoments", "fermi_dirac", "fermi_moments", "fermi_number"]
