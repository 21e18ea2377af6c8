"""Tables of a run: read back by astropy's own readers, strict where they can be."""

import re
import warnings

import numpy as np
import pytest
from astropy.io import fits
from astropy.io.votable import parse
from astropy.io.votable.ucd import check_ucd
from astropy.table import Table
from tests.report.fake_run import FakeRun

from starkiln.errors import InputError
from starkiln.observations import read_catalogue
from starkiln.report import results_table, write_tables
from starkiln.report._latex import deluxetable, latex_table, latex_text
from starkiln.report._references import bibtex
from starkiln.report._tables import column_ucd, machine_readable

NAMES = ["Kiln 1", "a/b & <i>\u03b1</i> 50%_$x$ {\\foo}", "", "\u0160irra", "星 7", "Kiln 6"]


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    temperatures = np.geomspace(3400, 25000, 6)
    return FakeRun(NAMES, temperatures, folder=tmp_path_factory.mktemp("run"))


@pytest.fixture(scope="module")
def folder(run):
    paths = list(write_tables(run))
    assert len(paths) == 9
    return paths[0].parent


def test_votable_passes_the_strict_check(folder, run):
    """astropy's parser with verify="exception" refuses whatever the standard forbids."""
    read = parse(folder / "results.vot", verify="exception").get_first_table()
    assert [field.name for field in read.fields] == run.results.colnames
    for field in read.fields:
        assert check_ucd(field.ucd, check_controlled_vocabulary=True, has_colon=True), field.name
        assert field.description
    units = {field.name: str(field.unit) for field in read.fields}
    assert units["temperature_hi"] == "K"
    assert units["luminosity"] == "solLum"
    table = read.to_table()
    assert list(table["name"]) == NAMES
    np.testing.assert_allclose(table["temperature"][0], run.results["temperature"][0])


def test_every_column_that_a_run_can_have_has_a_valid_ucd():
    from starkiln.derived import QUANTITIES
    from starkiln.runner._tables import result_columns

    for key in result_columns(QUANTITIES):
        assert column_ucd(key)
        assert check_ucd(column_ucd(key), check_controlled_vocabulary=True, has_colon=True), key


def test_fits_opens_without_a_warning(folder):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        with fits.open(folder / "results.fits", checksum=True) as opened:
            opened.verify("exception")
            assert opened[1].columns["temperature"].unit == "K"
        table = Table.read(folder / "results.fits")
    assert str(table["name"][1]).startswith("a/b & <i>alpha</i>")


def test_ecsv_keeps_units_descriptions_ucds_and_provenance(folder):
    table = Table.read(folder / "results.ecsv")
    assert str(table["radius"].unit) == "solRad"
    assert table["radius"].meta["ucd"] == "phys.size.radius;stat.median"
    assert "seed: 1" in table.meta["run"]
    assert "log-uniform" in table.meta["priors and likelihood"]
    # An empty name comes back masked.
    assert list(table["name"].filled("")) == NAMES


def test_csv_reads_back(folder):
    table = Table.read(folder / "results.csv", format="ascii.csv")
    assert len(table) == 6
    assert table["status"][-1] == "rejected"


def test_machine_readable_table_reads_back(run):
    """astropy's reader of the CDS layout gives the numbers to six digits."""
    text = machine_readable(run)
    assert text.isascii()
    table = Table.read(text.splitlines(), format="ascii.mrt")
    assert table["name"][1].startswith("a/b & <i>alpha</i>")
    assert table["name"][2] == "-"
    assert str(table["distance"].unit) == "pc"
    for key in ("temperature", "bolometric_flux", "luminosity_hi"):
        np.testing.assert_allclose(table[key][0], run.results[key][0], rtol=1e-5)
    assert table["distance"].mask[1]


def cells(lines):
    return [[cell.strip() for cell in re.split(r"(?<!\\)&", line)] for line in lines]


def test_deluxetable_has_a_row_per_fitted_star(run):
    """Layout of AASTeX 6.3: heads, units, data between \\startdata and \\enddata."""
    text = deluxetable(run)
    assert text.startswith(r"\begin{deluxetable*}{lcccccccl}")
    heads, units = cells(text.split(r"\tablehead{")[1].split("\n}\n")[0].split(r" \\"))
    assert heads[1] == r"\colhead{$T$}"
    assert units[1] == r"\colhead{(K)}"
    data = text.split("\\startdata\n")[1].split("\n\\enddata")[0]
    rows = cells(data.split(" \\\\\n"))
    assert {len(row) for row in (heads, units, *rows)} == {9}
    assert len(rows) == 5
    assert re.fullmatch(r"\$\d+\^\{\+\d+\}_\{-\d+\}\$", rows[0][1])
    assert rows[1][5] == r"\nodata"
    assert rows[4][-1] == "u d e"
    assert "d = degenerate, e = at edge, u = unconverged" in text
    assert "1 rejected stars are left out" in text


def test_latex_table_reads_back(run):
    """astropy's reader of LaTeX finds the columns and a row per fitted star."""
    lines = latex_table(run).splitlines()
    assert r"\begin{table*}" in lines
    inner = lines[lines.index(r"\hline") - 1 : lines.index(r"\end{tabular}") + 1]
    inner = [line for line in inner if line != r"\hline"]
    table = Table.read(inner, format="ascii.latex", data_start=3)
    assert table.colnames[:3] == ["Star", "$T$", r"$\theta$"]
    assert len(table) == 5


@pytest.mark.parametrize(
    ("text", "latex"),
    [
        ("a & b", r"a \& b"),
        ("50% #1_x^2 ~", r"50\% \#1\_x\textasciicircum{}2 \textasciitilde{}"),
        (r"\input{x}", r"\textbackslash{}input\{x\}"),
        ("$x$", r"\$x\$"),
        ("\u03b1 Kil", r"$\alpha$ Kil"),
        ("\u0391 \u03a9 \u03bf", r"A $\Omega$ o"),
        ("é", "é"),
        ("星", "?"),
        ('"', "''"),
        ("a\nb", "a b"),
    ],
)
def test_latex_obeys_no_name(text, latex):
    assert latex_text(text) == latex


def test_provenance_tells_what_the_run_was(folder):
    text = (folder / "provenance.txt").read_text(encoding="utf-8")
    for part in ("seed: 1", "emitter: blackbody", "numpy: 2.4.0", "4 ok, 1 unconverged, 1 rejected",
                 "[passbands]", "2MASS J: ", "Prsa2016"):  # fmt: skip
        assert part in text


def test_bibtex_holds_what_was_used_and_no_more(run):
    entries = re.findall(r"^@\w+\{(\w+),$", bibtex(run), flags=re.MULTILINE)
    assert len(entries) == len(set(entries))
    assert {"starkiln", "Harris2020", "ForemanMackey2013", "Riello2021"} <= set(entries)
    # No band of it was fitted, no such law.
    assert not {"Tonry2012", "Cardelli1989"} & set(entries)
    text = bibtex(run)
    assert text.count("{") == text.count("}")
    assert r"dust\_extinction" in text


def test_every_reference_is_whole():
    """Crossref's form of a DOI: 10., a registrant, a slash, a suffix."""
    from starkiln.store import read_data_table

    for row in read_data_table("report", "references.ecsv"):
        assert row["authors"]
        assert row["title"]
        if not np.ma.is_masked(row["doi"]):
            assert re.fullmatch(r"10\.\d{4,5}/\S+", row["doi"])


@pytest.fixture
def catalogue(tmp_path):
    path = tmp_path / "stars.ecsv"
    table = Table({"name": NAMES, "Gaia G": np.arange(6.0), "e_Gaia G": np.full(6, 0.01)})
    table["Gaia G"].unit = "mag"
    table["Gaia G"].description = "an observer's own words"
    table["Gaia G"].meta["ucd"] = "phot.mag;em.opt"
    table["status"] = ["seen"] * 6
    table.write(path)
    return read_catalogue(path)


def test_catalogue_columns_keep_what_they_had(run, catalogue):
    run.meta = {**run.meta, "identity": {**run.meta["identity"], "catalogue": catalogue.checksum}}
    table = results_table(run, catalogue)
    assert table.colnames[:4] == ["name", "Gaia G", "e_Gaia G", "status"]
    assert table["Gaia G"].description == "an observer's own words"
    assert table["Gaia G"].meta["ucd"] == "phot.mag;em.opt"
    assert str(table["Gaia G"].unit) == "mag"
    assert table["status"][0] == "seen"
    assert table["fit_status"][0] == "ok"
    assert "temperature" in table.colnames


def test_numbers_of_a_csv_become_numbers(run, tmp_path):
    path = tmp_path / "stars.csv"
    lines = ["name,Gaia G,e_Gaia G,id", *(f"{n},1{n}.5,0.01,00{n}" for n in range(6))]
    path.write_text("\n".join(lines))
    catalogue = read_catalogue(path)
    run.meta = {**run.meta, "identity": {**run.meta["identity"], "catalogue": catalogue.checksum}}
    table = results_table(run, catalogue)
    assert table["Gaia G"][2] == 12.5
    assert str(table["Gaia G"].unit) == "mag"
    assert str(table["id"][1]) == "001"


def test_another_catalogue_is_refused(catalogue):
    with pytest.raises(InputError, match="not the catalogue of this run"):
        results_table(FakeRun(["a", "b", "c"], [5e3, 6e3, 7e3]), catalogue)


def test_the_same_run_gives_the_same_bytes(run, folder):
    before = {path.name: path.read_bytes() for path in folder.iterdir()}
    plain = FakeRun(NAMES, run.temperatures, folder=run.folder)
    for path in write_tables(plain):
        assert path.read_bytes() == before[path.name]
