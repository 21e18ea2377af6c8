"""The invented catalogues: readable, reproducible, and true to an independent integral."""

import importlib.util
from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.dust import Dust
from starkiln.emitters import BlackbodyEmitter
from starkiln.forward import band_flux_direct
from starkiln.observations import BadRow, Star, read_catalogue, survey_catalogue

ROOT = Path(__file__).parents[2]
DEMO = ROOT / "catalogs-demo"


@pytest.fixture(scope="module")
def maker():
    path = ROOT / "scripts" / "make_demo_catalogue.py"
    spec = importlib.util.spec_from_file_location("make_demo_catalogue", path)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


@pytest.mark.parametrize(
    ("name", "rows"), [("association", 24), ("hot_stars", 6), ("single_star", 1)]
)
def test_the_clean_catalogues(name, rows):
    catalogue = read_catalogue(DEMO / f"{name}.ecsv")
    truth = Table.read(DEMO / f"{name}_truth.ecsv")
    assert catalogue.warnings == []
    assert len(catalogue) == len(truth) == rows
    stars = catalogue.rows()
    assert all(isinstance(star, Star) for star in stars)
    assert [star.name for star in stars] == list(truth["name"])


def test_the_association_is_as_varied_as_real_ones():
    stars = read_catalogue(DEMO / "association.ecsv").rows()
    truth = Table.read(DEMO / "association_truth.ecsv")
    assert truth["temperature"].min() == 3000.0
    assert truth["temperature"].max() == 30000.0
    assert truth["av"].max() == 2.0
    assert any(star.limits for star in stars)
    assert any(star.saturated_bands for star in stars)
    assert sum(star.av is None for star in stars) == 1
    assert sum(star.parallax_mas is None for star in stars) == 1
    assert any(len(star.bands) == 2 for star in stars)
    assert any(star.teff_k for star in stars)


def test_the_observations_scatter_about_the_truth_as_stated(maker):
    # The residual of ln flux has variance (error^2 + misfit^2): chi-square over all bands.
    stars = read_catalogue(DEMO / "association.ecsv").rows()
    truth = Table.read(DEMO / "association_truth.ecsv")
    squares = []
    for star, row in zip(stars, truth, strict=True):
        for m in star.measurements:
            if m.limit:
                assert maker.band_flux(m.band, row) < m.flux_w_m3
                continue
            residual = np.log(m.flux_w_m3 / maker.band_flux(m.band, row))
            squares.append(residual**2 / (m.fractional_error**2 + maker.MISFIT**2))
    count = len(squares)
    assert count > 150
    assert abs(np.sum(squares) - count) < 4.0 * np.sqrt(2.0 * count)


def test_the_scripts_integral_agrees_with_the_packages(maker):
    # Two integrations over the same published curves: astropy's Planck function and
    # dust_extinction's law in the script, the package's own in `forward`.
    star = {"temperature": 4321.0, "av": 1.3, "angular_diameter": 0.7}
    solid_angle = np.pi / 4 * (0.7 * np.pi / 180 / 3600e3) ** 2
    ln_t = [[np.log(star["temperature"])]]
    for band in ("Gaia BP", "Johnson B", "2MASS Ks", "WISE W3"):
        (ln_flux,) = band_flux_direct(BlackbodyEmitter(), band, Dust(), ln_t, [star["av"]])
        expected = maker.band_flux(band, star)
        assert solid_angle * np.exp(ln_flux) == pytest.approx(expected, rel=1e-6)


def test_the_script_makes_these_files(maker, tmp_path, capsys):
    maker.main([str(tmp_path)])
    made = sorted(path.name for path in tmp_path.iterdir())
    assert made == sorted(path.name for path in DEMO.iterdir() if path.suffix != ".md")
    for name in made:
        # Numbers and text, not bytes: the header's wording is astropy's own.
        if name.endswith(".ecsv"):
            fresh, kept = Table.read(tmp_path / name), Table.read(DEMO / name)
            assert fresh.colnames == kept.colnames
            assert [list(map(str, row)) for row in fresh] == [list(map(str, row)) for row in kept]
        else:
            assert (tmp_path / name).read_bytes() == (DEMO / name).read_bytes()


def test_the_messy_catalogue_and_its_sheet():
    alone = survey_catalogue(DEMO / "messy.csv")
    assert "no usable band" in alone.errors[0]
    catalogue = read_catalogue(DEMO / "messy.csv", columns=DEMO / "messy.toml")
    truth = Table.read(DEMO / "messy_truth.ecsv")
    rows = catalogue.rows()
    assert [row.row for row in rows if isinstance(row, BadRow)] == [5, 8, 9, 10, 12]
    assert "'Field 10' stands in rows 10 and 11" in catalogue.warnings[0]
    good = [(star, row) for star, row in zip(rows, truth, strict=True) if isinstance(star, Star)]
    assert all(abs(star.av - row["av"]) < 0.25 for star, row in good if star.av is not None)
    assert [star.name for star, _ in good if star.av is None] == ["Field 7"]
    assert good[2][0].limits == ("WISE W3",)
    faint = next(star for star, _ in good if star.name == "Field 6")
    assert faint.measurements[faint.bands.index("WISE W3")].flux_w_m3 < 0.0
