"""`starkiln atmosphere` from the command line."""

import numpy as np
import pytest
from astropy.table import Table

from starkiln.cli import main


def test_prints_the_structure(capsys):
    assert main(["atmosphere", "--temperature", "6kK", "--logg", "4", "--format", "ecsv"]) == 0
    out, err = capsys.readouterr()
    table = Table.read(out.splitlines(), format="ascii.ecsv")
    assert list(table.colnames)[:3] == ["tau_rosseland", "temperature", "gas_pressure"]
    assert np.abs(table["flux_error"]).max() < 5e-3
    assert "iterations" in err


def test_prints_text_and_a_spectrum(capsys):
    words = ["atmosphere", "--temperature", "9000", "--logg", "4", "--table", "spectrum"]
    assert main(words) == 0
    out = capsys.readouterr().out.splitlines()
    assert out[0].split() == ["wavelength", "surface_flux"]
    assert out[1].split()[0] == "um"
    assert len(out) > 500


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--temperature", "3000", "--logg", "4"], "molecules"),
        (["--temperature", "30000", "--logg", "2"], "Gamma > 1"),
        (["--temperature", "hot", "--logg", "4"], "temperature"),
    ],
)
def test_bad_input_is_one_line_and_code_2(capsys, words, said):
    assert main(["atmosphere", *words]) == 2
    err = capsys.readouterr().err
    assert said in err
    assert err.count("\n") == 1
