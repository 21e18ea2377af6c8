"""A perfect blackbody comes back as it was made.

Outside check: band fluxes by trapezoid over speclite's own curves of astropy's
BlackBody; radius, distance and luminosity of the nominal Sun (IAU 2015 B3).
"""

from __future__ import annotations

import numpy as np
import pytest
import speclite.filters
from astropy import units as u
from astropy.modeling.physical_models import BlackBody

from starkiln import Star, fit
from starkiln.inference import Settings

#: All of these respond to photons (their files' documentation).
CURVES = {
    "Gaia BP": "gaiadr3-BP",
    "Gaia G": "gaiadr3-G",
    "Gaia RP": "gaiadr3-RP",
    "2MASS J": "twomass-J",
    "2MASS H": "twomass-H",
    "2MASS Ks": "twomass-Ks",
    "WISE W1": "wise2010-W1",
    "SDSS g": "sdss2010-g",
}
DIAMETER = 2.0 * (1.0 * u.solRad / (10.0 * u.pc)).decompose().value


def band_flux(curve, temperature):
    """Photon-weighted mean of F_lambda, W m-2 um-1, on a grid ten times the file's."""
    response = speclite.filters.load_filter(curve)
    coarse = response.wavelength
    grid = np.interp(
        np.linspace(0, coarse.size - 1, 10 * coarse.size), np.arange(coarse.size), coarse
    )
    weight = np.interp(grid, coarse, response.response) * grid
    radiance = BlackBody(temperature * u.K, scale=1.0 * u.W / u.m**2 / u.um / u.sr)(grid * u.AA)
    mean = np.trapezoid(radiance.value * weight, grid) / np.trapezoid(weight, grid)
    return 0.25 * np.pi * DIAMETER**2 * mean * u.W / u.m**2 / u.um


def test_the_nominal_sun_as_a_blackbody_at_ten_parsecs():
    photometry = {}
    for name, curve in CURVES.items():
        flux = band_flux(curve, 5772.0)
        photometry[name] = (flux, 0.001 * flux)
    star = Star("perfect", photometry, distance=(10.0 * u.pc, 1e-4 * u.pc), saturated="keep")
    settings = Settings(dust="zero", misfit=False, system_offsets=False, effective_draws=4000)
    result = fit(star, settings=settings)
    assert result.summary["temperature"][0] == pytest.approx(5772.0, abs=1.0)
    assert result.summary["angular_diameter"][0] == pytest.approx(
        DIAMETER * 180.0 / np.pi * 3.6e6, rel=2e-4
    )
    assert result.summary["luminosity"][0] == pytest.approx(0.999998, rel=1e-3)
    assert result.fit_probability > 0.05
    assert "poor_blackbody" not in result.flags
