"""The command, interrupted and killed: what is done is kept, and the end is the same bytes."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time

import psutil
import pytest

TABLES = ("results.ecsv", "photometry.ecsv", "draws.fits")
HEAD = "name,Gaia G,e_Gaia G,2MASS J,e_2MASS J,2MASS Ks,e_2MASS Ks,parallax,e_parallax,av,e_av"
SETTINGS = "[sampling]\neffective_draws = 300\nwalkers = 32\ndraws = 20\n[dust]\nprior = 'zero'\n"


@pytest.fixture(scope="module")
def stars(tmp_path_factory):
    folder = tmp_path_factory.mktemp("stars")
    rows = [
        f"Mirel {i},{10.2 + 0.01 * i:.2f},0.01,9.10,0.02,8.66,0.02,2.31,0.03,0.3,0.05"
        for i in range(40)
    ]
    (folder / "stars.csv").write_text("\n".join([HEAD, *rows]) + "\n")
    (folder / "settings.toml").write_text(SETTINGS)
    return folder


@pytest.fixture(scope="module")
def whole(stars):
    return finish(stars, "whole")


def command(folder, run, workers):
    words = ["fit", "stars.csv", "--run", run, "--settings", "settings.toml", "--quiet"]
    return [sys.executable, "-m", "starkiln", *words, "--workers", str(workers)]


def finish(folder, run, workers=1):
    done = subprocess.run(
        command(folder, run, workers), cwd=folder, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stderr
    return [(folder / run / name).read_bytes() for name in TABLES]


def wait_for_a_part(run, process):
    parts = run / "parts"
    end = time.monotonic() + 120.0
    while not (parts.is_dir() and list(parts.glob("rows-*.npz"))):
        assert time.monotonic() < end
        assert process.poll() is None
        time.sleep(0.02)


def begin_and_send(folder, run, workers, what):
    """Start the command, send a signal once a part is written; return its exit code."""
    process = subprocess.Popen(
        command(folder, run, workers),
        cwd=folder,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        start_new_session=True,
    )
    wait_for_a_part(folder / run, process)
    os.killpg(process.pid, what)
    _, errors = process.communicate(timeout=60)
    return process.returncode, errors


@pytest.mark.parametrize("workers", [1, 2])
def test_ctrl_c_leaves_a_run_that_resumes_to_the_same_bytes(stars, whole, workers):
    code, errors = begin_and_send(stars, f"broken{workers}", workers, signal.SIGINT)
    assert code == 130, errors
    assert "the same command resumes" in errors
    assert "Traceback" not in errors
    assert finish(stars, f"broken{workers}", workers) == whole


def test_kill_9_leaves_a_run_that_resumes_to_the_same_bytes(stars, whole):
    code, _ = begin_and_send(stars, "killed", 2, signal.SIGKILL)
    assert code == -signal.SIGKILL
    assert not (stars / "killed" / "results.ecsv").exists()
    assert finish(stars, "killed") == whole


def test_a_second_fit_in_the_same_folder_is_told_to_wait(stars):
    first = subprocess.Popen(
        command(stars, "shared", 1), cwd=stars, stdout=subprocess.DEVNULL, start_new_session=True
    )
    try:
        wait_for_a_part(stars / "shared", first)
        second = subprocess.run(
            command(stars, "shared", 1), cwd=stars, capture_output=True, text=True, check=False
        )
        assert second.returncode == 2
        assert "another starkiln fit is at work in shared" in second.stderr
        assert first.wait(timeout=120) == 0
    finally:
        first.kill()


def test_workers_end_when_their_parent_was_killed(stars):
    process = subprocess.Popen(
        command(stars, "orphans", 2), cwd=stars, stdout=subprocess.DEVNULL, start_new_session=True
    )
    wait_for_a_part(stars / "orphans", process)
    children = psutil.Process(process.pid).children(recursive=True)
    assert len(children) >= 2
    process.kill()
    process.wait()
    _, alive = psutil.wait_procs(children, timeout=15)
    assert alive == []
