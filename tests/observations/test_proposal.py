"""The sheet that `inspect` proposes is one: saved and given back, it works."""

import tomllib

import pytest

from starkiln.observations import Star, read_catalogue, survey_catalogue

# Headings of the archives (Gaia DR3, 2MASS, AllWISE; from memory), values invented.
CROSS_MATCH = """\
source_id,ra,parallax,parallax_error,phot_g_mean_mag,phot_g_mean_flux_over_error,bp_rp,\
phot_bp_mean_mag,phot_bp_mean_flux_over_error,j_m,j_msigcom,k_m,k_msigcom,w3mpro,w3sigmpro,ph_qual
4611,83.1,2.1,0.02,10.2,2000,0.9,10.6,900,9.1,0.02,8.7,0.03,8.6,0.04,AAA
4612,83.2,1.9,0.03,12.2,1500,1.1,12.7,700,-999,-999,10.1,0.03,10.9,,AUA
"""
OBSERVER = """\
star,V,eV,J_AB,sigJ,Kmag,Kerr,plx_mas,uncplx
Adra 1,11.0,0.02,9.9,0.03,8.9,0.02,2.0,0.1
Adra 2,99.999,0.02,9.8,0.03,--,0.02,2.1,0.1
"""


@pytest.mark.parametrize(
    ("content", "bands"),
    [
        (CROSS_MATCH, {"Gaia G", "Gaia BP", "2MASS J", "2MASS Ks", "WISE W3"}),
        (OBSERVER, {"Johnson V", "2MASS J", "2MASS Ks"}),
    ],
)
def test_a_proposal_makes_the_catalogue_readable(tmp_path, content, bands):
    path = tmp_path / "foreign.csv"
    path.write_text(content)
    catalogue = survey_catalogue(path)
    assert "no usable band" in catalogue.errors[0]
    sheet = tmp_path / "sheet.toml"
    sheet.write_text(catalogue.proposal())
    tomllib.loads(sheet.read_text())
    again = read_catalogue(path, columns=sheet)
    assert set(again.bands) == bands
    assert all(isinstance(star, Star) for star in again.rows())
    assert all(star.parallax_mas for star in again.rows())
    assert again.proposal() == ""


def test_the_magnitude_system_that_a_heading_names(tmp_path):
    path = tmp_path / "a.csv"
    path.write_text(OBSERVER)
    sheet = tmp_path / "sheet.toml"
    sheet.write_text(survey_catalogue(path).proposal())
    columns = {c.heading: c for c in read_catalogue(path, columns=sheet).columns}
    assert columns["J_AB"].system == "AB"
    assert columns["V"].system == "Vega"


def test_a_doubtful_line_stands_as_a_comment(tmp_path):
    path = tmp_path / "a.csv"
    path.write_text("name,Gaia G,e_Gaia G,ebv,W3flux\na,10,0.01,0.1,3\n")
    lines = read_catalogue(path).proposal().splitlines()
    assert '# "ebv" = { means = "ebv" }' in " ".join(lines)
    assert any(line.startswith('# "W3flux"') and "say the unit" in line for line in lines)


def test_a_catalogue_that_is_understood_needs_no_sheet(tmp_path):
    path = tmp_path / "a.csv"
    path.write_text("name,Gaia G,e_Gaia G\na,10,0.01\n")
    assert read_catalogue(path).proposal() == ""


def test_a_name_is_proposed_where_every_row_differs(tmp_path):
    path = tmp_path / "a.csv"
    path.write_text("field,hip,Gaia G,e_Gaia G\n1,77,10,0.01\n1,78,10,0.01\n")
    assert '"hip" = "name"' in read_catalogue(path).proposal()
