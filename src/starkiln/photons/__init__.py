"""Planck's law in every form, and the photon gas."""

from starkiln.photons._kernels import planck_wavelength

__all__ = ["planck_wavelength"]
