"""The commands `figures` and `report` on a run folder that was really fitted."""

import csv
import json

import pytest

from starkiln.cli import main
from starkiln.observations import read_catalogue
from starkiln.report import corner_figure, sed_figure, view_of
from starkiln.runner import fit, fit_catalogue

BANDS = ("Gaia G", "Gaia BP", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W1")
#: Name, magnitudes, parallax and its error, A_V and its error, published temperature.
STARS = (
    ("Kiln 1", (10.20, 10.55, 9.70, 9.12, 8.78, 8.70, 8.66), 5.0, 0.05, 0.1, 0.05, 5800),
    ('a/b <b>"q"', (9.0, 9.02, 8.9, 8.8, 8.75, 8.7, 8.1), 3.0, 0.05, 0.1, 0.05, 9800),
    ("Kiln 3", (13.2, 14.9, 11.9, 10.1, 9.4, 9.1, 8.9), "", "", "", "", 3300),
    ("Kiln 4", ("",) * 7, 5.0, 0.05, 0.1, 0.05, ""),
)


def write_catalogue(path, first=10.20):
    """The second star's W1 is a limit; the fourth has no magnitude at all."""
    heads = [name for band in BANDS for name in (band, f"e_{band}")]
    with path.open("w", encoding="utf-8", newline="") as stream:
        writer = csv.writer(stream)
        writer.writerow(
            ["name", *heads, "l_WISE W1", "parallax", "e_parallax", "av", "e_av", "teff"]
        )
        for row, (name, magnitudes, *known) in enumerate(STARS, start=1):
            magnitudes = (first, *magnitudes[1:]) if row == 1 else magnitudes
            limit = ">" if row == 2 else ""
            cells = [cell for m in magnitudes for cell in (m, 0.02 if m else "")]
            cells[-1] = "" if limit else cells[-1]
            writer.writerow([name, *cells, limit, *known])
    return path


@pytest.fixture(scope="module")
def catalogue(tmp_path_factory):
    return write_catalogue(tmp_path_factory.mktemp("catalogue") / "stars.csv")


@pytest.fixture(scope="module")
def folder(catalogue, tmp_path_factory):
    target = tmp_path_factory.mktemp("run")
    fit_catalogue(read_catalogue(catalogue), target, workers=1)
    return target


def test_figures_of_one_star(folder, capsys):
    assert main(["figures", str(folder), "--star", "Kiln 1", "--image", "png"]) == 0
    printed = capsys.readouterr().out.split()
    stems = [f"{folder}/figures/00001_Kiln_1_{kind}.png" for kind in ("corner", "sed")]
    assert printed == stems


def test_figures_of_the_run_and_what_could_not_be_drawn(folder, capsys):
    assert main(["figures", str(folder), "--only", "hr", "--only", "prior", "--image", "png"]) == 0
    shown = capsys.readouterr()
    names = [line.rsplit("/", 1)[1] for line in shown.out.splitlines()]
    assert names == ["hr.png", *(f"0000{row}_{name}_prior.png" for row, name in
                                 ((1, "Kiln_1"), (2, "a_b_b_q"), (3, "Kiln_3")))]  # fmt: skip
    assert shown.err.count("starkiln figures:") == 1
    assert "'Kiln 4' (row 4): it was rejected" in shown.err


def test_figures_that_need_the_catalogue(folder, catalogue, capsys):
    words = ["figures", str(folder), "--only", "temperature", "--only", "chain", "--image", "png"]
    assert main(words) == 2
    assert "needs the run's catalogue" in capsys.readouterr().err
    assert main([*words, "--star", "Kiln 3", "--catalogue", str(catalogue)]) == 0
    printed = capsys.readouterr().out
    assert "temperature.png" in printed
    assert "00003_Kiln_3_chain.png" in printed


def test_another_catalogue_is_refused(folder, catalogue, tmp_path, capsys):
    other = write_catalogue(tmp_path / "other.csv", first=10.30)
    words = ["figures", str(folder), "--only", "temperature", "--catalogue", str(other)]
    assert main(words) == 2
    assert "is not the catalogue of this run" in capsys.readouterr().err


@pytest.mark.parametrize("command", ["figures", "report"])
def test_bad_folders_and_stars(command, folder, tmp_path, capsys):
    assert main([command, str(tmp_path / "absent")]) == 2
    assert main([command, str(tmp_path)]) == 2
    half = tmp_path / "half"
    half.mkdir()
    meta = json.loads((folder / "run.json").read_text()) | {"complete": False}
    (half / "run.json").write_text(json.dumps(meta))
    assert main([command, str(half)]) == 2
    lines = capsys.readouterr().err.splitlines()
    assert len(lines) == 3
    assert "is not complete; finish it" in lines[2]


@pytest.mark.parametrize("change", [{"identity": {}}, {"priors": None}, {"settings": {"new": 1}}])
def test_a_run_of_another_version_says_so(change, folder, tmp_path, capsys):
    meta = json.loads((folder / "run.json").read_text())
    meta["identity"]["versions"]["starkiln"] = "0.0.1"
    if "settings" in change:
        meta["identity"]["settings"] |= change["settings"]
    elif "priors" in change:
        del meta["priors"]
    else:
        meta |= change
    (tmp_path / "run.json").write_text(json.dumps(meta))
    assert main(["report", str(tmp_path)]) == 2
    line = capsys.readouterr().err
    assert line.count("\n") == 1
    assert "fit again into a new folder" in line


def test_a_star_that_is_not_there(folder, capsys):
    assert main(["figures", str(folder), "--star", "kiln 3"]) == 2
    assert "no star 'kiln 3'" in capsys.readouterr().err


def test_report_and_tables(folder, catalogue, capsys):
    assert main(["report", str(folder)]) == 0
    assert capsys.readouterr().out == f"{folder}/report.html\n"
    text = (folder / "report.html").read_text(encoding="utf-8")
    assert "no band can be used" in text
    assert main(["report", str(folder), "--tables", "--catalogue", str(catalogue)]) == 0
    assert len(capsys.readouterr().out.split()) == 10
    assert (folder / "tables" / "results.vot").is_file()


def test_no_hub_is_told_plainly(folder, tmp_path, monkeypatch, capsys):
    monkeypatch.setenv("SAMP_HUB", f"std-lockurl:{(tmp_path / 'none').as_uri()}")
    assert main(["report", str(folder), "--samp"]) == 1
    assert "no SAMP hub runs" in capsys.readouterr().err


def test_a_result_from_python_draws_the_same_star(catalogue, folder):
    """The summary of a single fit with the run's seed is the run's own row."""
    star = read_catalogue(catalogue).rows()[0]
    view = view_of(fit(star, rng=0))
    assert view.chain_names[0] == "ln_temperature"
    assert set(view.priors) == {"temperature", "angular_diameter", "av", "misfit", "distance"}
    figure = corner_figure(view)
    assert figure.axes[0].get_title().startswith("$T$ = $")
    assert len(sed_figure(view).axes) == 4
