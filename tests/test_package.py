"""The package's public face: few names, each loads, and importing costs next to nothing."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import starkiln

PUBLIC = {
    "AtmosphereEmitter",
    "Band",
    "BlackbodyEmitter",
    "Dust",
    "FitResult",
    "Star",
    "__version__",
    "fit",
    "fit_catalogue",
    "load_band",
    "luminosity",
    "pressure_ratio",
    "read_catalogue",
}
SOURCE = Path(starkiln.__file__).parent


def test_public_names_are_these_and_load():
    assert set(starkiln.__all__) == PUBLIC
    assert len(PUBLIC) <= 16  # 15 and the version
    for name in PUBLIC:
        assert getattr(starkiln, name) is not None


def test_unknown_name_is_an_attribute_error_and_rooms_are_reached():
    assert starkiln.photons.planck_wavelength is not None
    with pytest.raises(AttributeError, match="no attribute 'phtons'"):
        _ = starkiln.phtons


@pytest.mark.parametrize("words", [["--version"], ["--help"]])
def test_version_and_help_import_nothing_heavy(words):
    code = (
        "import sys\n"
        "from starkiln.cli import main\n"
        "try:\n"
        f"    main({words!r})\n"
        "except SystemExit:\n"
        "    pass\n"
        "heavy = {'numpy', 'scipy', 'astropy', 'matplotlib', 'emcee', 'importlib.metadata'}\n"
        "loaded = heavy & set(sys.modules)\n"
        "sys.exit(str(loaded) if loaded else 0)\n"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


def test_kernels_know_neither_astropy_nor_matplotlib():
    for path in SOURCE.rglob("_kernels.py"):
        tree = ast.parse(path.read_text())
        names = {
            alias.name
            for node in ast.walk(tree)
            if isinstance(node, ast.Import)
            for alias in node.names
        } | {node.module or "" for node in ast.walk(tree) if isinstance(node, ast.ImportFrom)}
        assert not [n for n in names if n.startswith(("astropy", "matplotlib"))], path


def test_pyplot_is_imported_by_report_alone():
    users = [
        path.relative_to(SOURCE)
        for path in SOURCE.rglob("*.py")
        if "pyplot" in path.read_text() and path.parent.name != "report"
    ]
    assert users == []


def test_imports_go_down_only():
    from importlinter.cli import lint_imports

    root = SOURCE.parent.parent
    if not (root / "pyproject.toml").exists():
        pytest.fail("the import contract stands in pyproject.toml; run the tests from a checkout")
    assert lint_imports(config_filename=str(root / "pyproject.toml"), no_cache=True) == 0
