"""Tables on disk: kept, shared between processes, and made again when damaged."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from starkiln.dust import Dust
from starkiln.emitters import BlackbodyEmitter
from starkiln.forward import band_fluxes, cache_folder
from starkiln.forward._build import _kept
from starkiln.forward._cache import cached_array

BANDS = ("Gaia G", "2MASS J")


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.setenv("STARKILN_CACHE", str(tmp_path))
    _kept.cache_clear()
    return tmp_path / "band-fluxes"


def coefficients() -> np.ndarray:
    _kept.cache_clear()
    return band_fluxes(BlackbodyEmitter(), BANDS, Dust()).coefficients


def test_a_table_is_kept_and_read_back(folder: Path) -> None:
    first = coefficients()
    files = sorted(folder.iterdir())
    assert len(files) == len(BANDS)
    stamps = [file.stat().st_mtime_ns for file in files]
    np.testing.assert_array_equal(coefficients(), first)
    assert [file.stat().st_mtime_ns for file in files] == stamps


def test_key_follows_the_content(folder: Path) -> None:
    coefficients()
    for dust in (Dust(law="F99"), Dust(law="F99", rv=4.0), Dust(law="F99", rv=5.0)):
        band_fluxes(BlackbodyEmitter(), BANDS, dust)
    band_fluxes(BlackbodyEmitter(), BANDS, Dust(prior="free", width=0.3))
    band_fluxes(BlackbodyEmitter(), BANDS, Dust(law="G03_SMCBar", rv=2.5))
    band_fluxes(BlackbodyEmitter(), BANDS, Dust(law="G03_SMCBar", rv=4.5))
    # G23 and F99 at 3.1, F99 at all R_V, and the average that has none.
    assert len(list(folder.iterdir())) == 4 * len(BANDS)


@pytest.mark.parametrize("damage", ["empty", "cut", "flipped", "other"])
def test_a_damaged_table_is_made_again(folder: Path, damage: str) -> None:
    first = coefficients()
    for file in folder.iterdir():
        data = bytearray(file.read_bytes())
        data[len(data) // 2] ^= 1
        changed = {"empty": b"", "cut": data[:100], "flipped": data, "other": b"x" * 4000}
        file.write_bytes(bytes(changed[damage]))
    with pytest.warns(UserWarning, match="is damaged and is made again"):
        np.testing.assert_array_equal(coefficients(), first)
    np.testing.assert_array_equal(coefficients(), first)


def test_a_folder_that_cannot_be_written(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "file").write_text("no folder")
    monkeypatch.setenv("STARKILN_CACHE", str(tmp_path / "file"))
    assert coefficients().size > 0
    monkeypatch.setenv("STARKILN_CACHE", "off")
    assert cache_folder() is None
    assert coefficients().size > 0


def test_place_of_the_cache(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    # XDG Base Directory Specification: $XDG_CACHE_HOME, default $HOME/.cache.
    monkeypatch.delenv("STARKILN_CACHE")
    monkeypatch.setattr(sys, "platform", "linux")
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    assert cache_folder() == tmp_path / "starkiln"
    monkeypatch.delenv("XDG_CACHE_HOME")
    monkeypatch.setenv("HOME", str(tmp_path))
    assert cache_folder() == tmp_path / ".cache" / "starkiln"


def test_two_processes_at_once(tmp_path: Path) -> None:
    code = (
        "import hashlib; from starkiln.dust import Dust; from starkiln.emitters import "
        "BlackbodyEmitter; from starkiln.forward import band_fluxes; "
        f"c = band_fluxes(BlackbodyEmitter(), {BANDS}, Dust()).coefficients; "
        "print(hashlib.sha256(c.tobytes()).hexdigest())"
    )
    environment = {**os.environ, "STARKILN_CACHE": str(tmp_path)}
    command = [sys.executable, "-W", "error", "-c", code]
    both = [
        subprocess.Popen(command, env=environment, stdout=subprocess.PIPE, text=True)
        for _ in range(2)
    ]
    answers = {process.communicate()[0] for process in both}
    assert [process.returncode for process in both] == [0, 0]
    assert len(answers) == 1
    assert len(list((tmp_path / "band-fluxes").iterdir())) == len(BANDS)


def test_what_is_kept_is_what_was_built(folder: Path) -> None:
    array = np.arange(12.0).reshape(3, 4)
    np.testing.assert_array_equal(cached_array("k", lambda: array), array)
    np.testing.assert_array_equal(cached_array("k", lambda: np.zeros(1)), array)
    assert (folder / "k.npy").is_file()
