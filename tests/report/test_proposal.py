import re
import shutil
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from astropy.table import Table

from starkiln.derived import pressure_table
from starkiln.errors import InputError
from starkiln.interiors import pressure_ratio
from starkiln.report import (
    methods_paragraph,
    proposal_bibtex,
    proposal_deluxetable,
    proposal_plot,
    proposal_table,
    write_proposal,
)


@pytest.fixture(scope="module")
def table():
    return pressure_table(
        {
            "name": ["Plain & 1", "Heavy_2", "Giant", "Bad"],
            "temperature": [25000.0, 45000.0, 4500.0, -1.0],
            "e_temperature": [800.0, 1500.0, 100.0, 1.0],
            "luminosity": [9000.0, 8e5, 150.0, 1.0],
            "e_luminosity": [900.0, 8e4, 15.0, 1.0],
        }
    )


@pytest.mark.parametrize("make", [proposal_deluxetable, proposal_table])
def test_table_has_intervals_definitions_and_notes(table, make):
    text = make(table)
    assert r"Plain \& 1" in text
    assert r"Heavy\_2" in text
    assert "Bad" not in text
    assert "1 rejected star is left out" in text
    assert len(re.findall(r"\^\{\+", text)) >= 14
    assert "integrated over the volume" in text
    assert "at its centre" in text
    assert "68 per cent" in text
    assert "(a) above 40 solar masses the models lack mass loss." in text
    assert "(g) no main-sequence model" in text
    heavy = next(line for line in text.splitlines() if line.startswith("Heavy"))
    assert "a,b,c" in heavy
    columns = {line.count("&") - line.count(r"\&") for line in text.splitlines() if "&" in line}
    assert columns == {8}


def test_printed_numbers_are_those_of_the_table(table):
    # Within the rounding of the printed error.
    row = next(line for line in proposal_table(table).splitlines() if line.startswith("Plain"))
    mass = float(re.search(r"\$([\d.]+)\^", row.split(" & ")[3]).group(1))
    assert mass == pytest.approx(table["mass"][0], rel=0.01)


def test_paragraph_cites_only_what_the_bibliography_holds(table):
    text, entries = methods_paragraph(table), proposal_bibtex()
    keys = {key for group in re.findall(r"\\cite[pt]\{([^}]*)\}", text) for key in group.split(",")}
    assert len(keys) >= 6
    assert keys <= set(re.findall(r"@\w+\{([^,]+),", entries))
    for words in ("2 of 4 targets", "-2.35", "mass loss", "companion", "Coulomb", "calibrated"):
        assert words in text
    assert "photometric fit" in methods_paragraph(table, fitted=True)


def test_figure_shows_targets_and_both_kinds_of_model(table):
    axes = proposal_plot(table)
    labels = axes.get_legend_handles_labels()[1]
    assert any("standard model" in label for label in labels)
    assert sum("structure" in label for label in labels) == 2
    assert axes.get_xscale() == axes.get_yscale() == "log"
    young = next(line for line in axes.lines if line.get_label() == "structure, zero age")
    expected = pressure_ratio(young.get_xdata()).radiation_to_gas
    assert young.get_ydata() == pytest.approx(expected)
    points = axes.containers[0].lines[0].get_xdata()
    assert points == pytest.approx(np.asarray(table["mass"][:2]))


def test_files_are_written_whole(table, tmp_path):
    names = {path.name for path in write_proposal(table, tmp_path)}
    assert {"pressure_deluxe.tex", "pressure_plain.tex", "methods.tex", "pressure.bib"} <= names
    assert (tmp_path / "pressure.pdf").read_bytes().startswith(b"%PDF")


@pytest.mark.skipif(shutil.which("pdflatex") is None, reason="LaTeX is not installed")
def test_the_plain_document_compiles(table, tmp_path):
    write_proposal(table, tmp_path)
    command = ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "proposal"]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, check=False)
    assert done.returncode == 0, done.stdout.decode(errors="replace")[-2000:]


def test_tables_that_cannot_serve_are_refused(table):
    with pytest.raises(InputError, match="no column"):
        proposal_table(Table({"name": ["a"]}))
    with pytest.raises(InputError, match="every row of the table is rejected"):
        proposal_table(table[3:])
    with pytest.raises(InputError, match="nothing to draw"):
        proposal_plot(table[2:])


@pytest.mark.long
def test_the_script_makes_a_proposal_from_the_demo(tmp_path):
    root = Path(__file__).parent.parent.parent
    command = [sys.executable, str(root / "scripts" / "hot_star_proposal.py"), str(tmp_path)]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert "Cinder 6: off_grid" in done.stdout
    text = (tmp_path / "pressure_deluxe.tex").read_text(encoding="utf-8")
    # The invented truth: 55, 40, 38, 30 and 25 solar masses (catalogs-demo, the truth's table).
    masses = [
        float(re.search(r"\$([\d.]+)\^", line.split(" & ")[3]).group(1))
        for line in text.splitlines()
        if line.startswith("Cinder")
    ]
    assert masses[:5] == pytest.approx([55.0, 40.0, 38.0, 30.0, 25.0], rel=0.15)
