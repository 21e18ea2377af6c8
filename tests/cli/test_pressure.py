import pytest
from astropy.table import Table

from starkiln.cli import main


def table(capsys, *words):
    assert main(["pressure", *words, "--format", "ecsv"]) == 0
    return Table.read(capsys.readouterr().out, format="ascii.ecsv")


def test_standard_model_by_mass(capsys):
    # M mu^2 = 20.44 has 1 - beta = 0.3, 1 - beta over beta = 3/7 (independent calculation).
    rows = table(capsys, "--mass", "20.441395", "--mu", "1", "--model", "standard")
    assert rows.colnames[:8] == [
        "name",
        "mass",
        "mu",
        "radiation_fraction",
        "radiation_to_gas",
        "radiation_fraction_core",
        "radiation_to_gas_core",
        "gamma_e",
    ]
    assert rows["radiation_fraction"][0] == pytest.approx(0.3, rel=1e-7)
    assert rows["radiation_to_gas_core"][0] == pytest.approx(3 / 7, rel=1e-7)


def test_mass_with_a_unit(capsys):
    rows = table(capsys, "--mass", "20solMass", "20", "--model", "standard")
    assert rows["mu"][0] == rows["mu"][1]
    assert rows["radiation_fraction"][0] == rows["radiation_fraction"][1]


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (["--mass", "ten"], "--mass ten is not a mass"),
        (["--mass", "3K"], "--mass 3K is not a mass"),
        (["--mass", "-4"], "mass = -4 solMass is out of bounds"),
        (["--mass", "4", "--hydrogen", "70"], "X = 70 is out of bounds"),
    ],
)
def test_bad_input_is_one_line_and_code_two(capsys, words, message):
    assert main(["pressure", *words]) == 2
    captured = capsys.readouterr()
    assert message in captured.err
    assert captured.err.count("\n") == 1
    assert captured.out == ""
