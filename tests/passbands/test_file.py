"""A user's own band: what is read, and what is refused."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.errors import BandError
from starkiln.passbands import is_band, load_band, match_band, read_band

HEAD = "# response_kind: photon\n# magnitude_system: AB\n# wavelength_unit: nm\n"
CURVE = "wavelength,response\n500,0\n510,0.5\n520,1\n530,0\n"


def write(folder: Path, text: str, name: str = "mine.csv") -> Path:
    path = folder / name
    path.write_text(text)
    return path


def library_curve() -> Table:
    band = load_band("SDSS g")
    table = Table({"wavelength": band.wavelength_m * 1e9, "response": band.response})
    table["wavelength"].unit = "nm"
    return table


def test_a_library_curve_comes_back(tmp_path: Path) -> None:
    table = library_curve()
    table.meta.update(
        response_kind="photon",
        magnitude_system="Vega",
        zero_point=3909.0,
        zero_point_unit="Jy",
        system="My camera",
        zero_point_error=0.03,
        saturation=12.5,
        source="made for this test",
    )
    table.write(tmp_path / "g.ecsv")
    band, published = read_band(tmp_path / "g.ecsv"), load_band("SDSS g")
    assert band.pivot_m == pytest.approx(published.pivot_m, rel=1e-9)
    assert (band.name, band.system) == (str(tmp_path / "g.ecsv"), "My camera")
    fnu = band.zero_flux_w_m3() * band.pivot_m**2 / 299792458.0 * 1e26
    assert fnu == pytest.approx(3909.0, rel=1e-12)
    assert (band.zero_point_error_mag, band.saturation_mag) == (0.03, 12.5)
    assert "made for this test" in band.source


def test_csv_votable_and_descending_order(tmp_path: Path) -> None:
    rising = read_band(write(tmp_path, HEAD + CURVE))
    assert rising.system == "mine"
    assert rising.zero_point_error_mag == 0.02
    falling = read_band(
        write(tmp_path, HEAD + "wavelength,response\n530,0\n520,1\n510,.5\n500,0\n")
    )
    assert falling.pivot_m == rising.pivot_m
    # The centroid of the triangle 500, 520, 530.
    assert rising.mean_m * 1e9 == pytest.approx(1550.0 / 3.0, rel=1e-12)

    from astropy.io import votable

    file = votable.from_table(
        Table({"wavelength": [0.5, 0.51, 0.52, 0.53], "response": [0, 0.5, 1, 0]})
    )
    first = file.get_first_table()
    first.get_field_by_id("wavelength").unit = "um"
    for key, value in (("response_kind", "energy"), ("magnitude_system", "Vega")):
        first.params.append(
            votable.tree.Param(file, name=key, datatype="char", arraysize="*", value=value)
        )
    file.to_xml(str(tmp_path / "mine.vot"))
    band = read_band(tmp_path / "mine.vot")
    assert band.response_kind == "energy"
    # Vega itself is magnitude 0: 3.59e-9 erg s-1 cm-2 A-1 near 0.55 um, brighter bluewards.
    assert 3.6e-2 < band.zero_flux_w_m3() < 4.6e-2


def test_a_file_stands_where_a_name_does(tmp_path: Path) -> None:
    path = write(tmp_path, HEAD + CURVE)
    assert match_band(str(path)) == str(path)
    assert is_band(str(path))
    assert not is_band(str(tmp_path / "other.csv"))
    first = load_band(str(path))
    assert load_band(first.name) is load_band(path) is first
    write(tmp_path, HEAD + CURVE.replace("520,1", "520,0.75"))
    assert load_band(path).response.max() == 0.75


BAD = [
    ("", "wavelength,response\n1,1\n", r"response_kind is missing: give photon or energy"),
    (HEAD.replace("photon", "light"), CURVE, "response_kind 'light' is not photon or energy"),
    (HEAD.replace("AB", "Jy"), CURVE, "magnitude_system 'Jy' is not Vega or AB"),
    (HEAD.replace("# wavelength_unit: nm\n", ""), CURVE, "the wavelengths have no unit"),
    (HEAD.replace("nm", "Jy"), CURVE, "'Jy' is no unit of wavelength"),
    (HEAD.replace("nm", "A"), CURVE, r"pivot wavelength is 0\.05166 um, outside .* unit"),
    (HEAD, CURVE.replace("510,0.5", "510,-0.5"), r"row 2, column response: -0.5 is negative"),
    (HEAD, CURVE.replace("510,", "500,"), r"row 2, column wavelength: 500 stands twice"),
    (HEAD, CURVE.replace("510,", "525,"), r"row 3, column wavelength: 520 is out of order"),
    (HEAD, CURVE.replace("500,", "-500,"), r"row 1, column wavelength: -500 is not positive"),
    (HEAD, CURVE.replace("0.5", "nan"), r"row 2, column response: nan is not a finite number"),
    (HEAD, CURVE.replace("0.5", ""), r"row 2, column response: .* is not a finite number"),
    (HEAD, CURVE.replace("0.5", "high"), "'response' holds something that is no number"),
    (HEAD, "wavelength,response\n500,0\n510,0\n520,0\n", "zero at every wavelength"),
    (HEAD, "wavelength,response\n500,0\n510,1\n", "2 samples"),
    (HEAD, "lambda,response\n500,0\n510,1\n520,0\n", "no column 'wavelength'"),
    (HEAD + "# zero_point: bright\n", CURVE, "zero_point = bright is not a number"),
    (HEAD + "# zero_point: 3\n# zero_point_unit: K\n", CURVE, "zero point's unit 'K' is unknown"),
]


@pytest.mark.parametrize(("head", "curve", "message"), BAD)
def test_bad_files(tmp_path: Path, head: str, curve: str, message: str) -> None:
    with pytest.raises(BandError, match=message) as caught:
        read_band(write(tmp_path, head + curve))
    assert "\n" not in str(caught.value)


def test_absent_and_unreadable(tmp_path: Path) -> None:
    with pytest.raises(BandError, match="no such file"):
        load_band(str(tmp_path / "none.ecsv"))
    with pytest.raises(BandError, match="cannot be read"):
        read_band(write(tmp_path, "no table at all", "mine.ecsv"))


def test_beyond_vega(tmp_path: Path) -> None:
    text = (
        HEAD.replace("AB", "Vega").replace("nm", "um") + "wavelength,response\n28,0\n29,1\n31,0\n"
    )
    band = read_band(write(tmp_path, text))
    with pytest.raises(BandError, match=r"reaches beyond Vega's spectrum, 0\.09059 to"):
        band.zero_flux_w_m3()
    assert np.isfinite(band.zero_flux_w_m3("AB"))
