"""Units as archives and observers write them."""

import pytest
from astropy import units as u

from starkiln.errors import InputError
from starkiln.observations._units_of_columns import factor_to, parse_unit


@pytest.mark.parametrize(
    ("text", "system"),
    [
        ("mag", ""),
        ("[mag]", ""),
        ("Magnitude", ""),
        ("mag(AB)", "AB"),
        ("AB mag", "AB"),
        ("ABmag", "AB"),
        ("mag(Vega)", "Vega"),
        ("Vega mag", "Vega"),
        ("mag(ST)", "ST"),
    ],
)
def test_magnitudes(text, system):
    assert parse_unit(text).kind == "mag"
    assert parse_unit(text).system == system


@pytest.mark.parametrize(
    ("text", "kind", "unit"),
    # Right-hand sides are astropy's own units.
    [
        ("Jy", "per frequency", u.Jy),
        ("JY", "per frequency", u.Jy),
        ("mJy", "per frequency", u.mJy),
        ("MJy", "per frequency", u.MJy),
        ("uJy", "per frequency", u.uJy),
        ("erg s-1 cm-2 Hz-1", "per frequency", u.erg / u.s / u.cm**2 / u.Hz),
        ("erg.s**-1.cm**-2.Hz**-1", "per frequency", u.erg / u.s / u.cm**2 / u.Hz),
        ("W m-2 um-1", "per wavelength", u.W / u.m**2 / u.um),
        ("W/m^2/um", "per wavelength", u.W / u.m**2 / u.um),
        ("10-20W/m2/nm", "per wavelength", 1e-20 * u.W / u.m**2 / u.nm),
        ("erg s-1 cm-2 A-1", "per wavelength", u.erg / u.s / u.cm**2 / u.AA),
        ("erg/s/cm2/AA", "per wavelength", u.erg / u.s / u.cm**2 / u.AA),
    ],
)
def test_flux_densities(text, kind, unit):
    found = parse_unit(text)
    base = u.Jy if kind == "per frequency" else u.W / u.m**3
    assert found.kind == kind
    assert found.factor == pytest.approx(u.Quantity(1.0, unit).to_value(base), rel=1e-12)


@pytest.mark.parametrize("text", ["dex", "[cm/s2]", "log(cm.s**-2)", "dex(cm/s2)", "[-]", "[Sun]"])
def test_decimal_logarithms(text):
    assert parse_unit(text).kind == "dex"
    assert factor_to(parse_unit(text), "dex") == 1.0


@pytest.mark.parametrize("text", ["foo", "electron/", "e-/s", "m//s"])
def test_an_unknown_unit_offers_others(text):
    with pytest.raises(InputError, match="is not known; write for example mag"):
        parse_unit(text)


def test_conversion_to_a_quantitys_unit():
    assert factor_to(parse_unit("arcsec"), "mas") == pytest.approx(1000.0)
    assert factor_to(parse_unit("Lsun"), "solLum") == pytest.approx(1.0)
    with pytest.raises(InputError, match="cannot be converted to K"):
        factor_to(parse_unit("pc"), "K")
    with pytest.raises(InputError, match="cannot be converted to solLum"):
        factor_to(parse_unit("[solLum]"), "solLum")
