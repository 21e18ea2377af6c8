"""The worked examples under scripts/ run, and find what their invented stars were made with."""

import importlib.util
from pathlib import Path

import pytest

SCRIPTS = Path(__file__).resolve().parents[2] / "scripts"


def load(name):
    spec = importlib.util.spec_from_file_location(f"example_{name}", SCRIPTS / f"{name}.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_dusty_giant_shows_the_trade_of_dust_and_temperature(tmp_path, capsys):
    """Made with 4300 K and 0.10 mas; free dust is flagged and widens the temperature."""
    load("dusty_giant").main(tmp_path)
    known, free = capsys.readouterr().out.split("dust free")
    assert "degenerate" not in known
    assert "degenerate" in free
    errors = [
        float(text.split("temperature")[1].split("+")[1].split()[0]) for text in (known, free)
    ]
    assert errors[1] > 1.5 * errors[0]
    assert len(list(tmp_path.glob("*.pdf"))) == 4


def test_eclipsing_pair_gives_its_distance(tmp_path):
    """Made at 640 pc: found within two of its standard errors, which are near 5 per cent."""
    distance, error = load("eclipsing_pair").main(tmp_path)
    assert distance == pytest.approx(640.0, abs=2 * error)
    assert 0.02 < error / distance < 0.08


@pytest.mark.long
def test_association_leaves_page_tables_and_figures(tmp_path, capsys):
    load("association").main(tmp_path)
    printed = capsys.readouterr().out
    for name in ("hr.pdf", "misfit.pdf", "report.html", "results.vot", "table_aas.tex"):
        assert name in printed
