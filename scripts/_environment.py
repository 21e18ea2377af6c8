"""The environment of the set-up commands: made once, found again, usable offline.

Only the standard library is used, in a dialect that an old Python 3 still parses,
so that it is told what is wrong instead of meeting a syntax error.
"""

import hashlib
import os
import shutil
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
HOME = ROOT / ".starkiln"
OLDEST = (3, 11)
_NO_INDEX = (
    "NewConnectionError",
    "Failed to establish",
    "Temporary failure",
    "No matching distribution",
    "Connection refused",
    "Network is unreachable",
    "Max retries",
    "ReadTimeout",
)


def fail(text):
    """End with one line and exit code 1."""
    sys.stderr.write("starkiln: " + text + "\n")
    sys.exit(1)


def say(text):
    """Tell what is being done."""
    sys.stderr.write("starkiln: " + text + "\n")
    sys.stderr.flush()


def environment(extra):
    """Return the Python of an environment that holds starkiln, making it when needed.

    Parameters
    ----------
    extra : str
        Empty for the package alone, `dev` for what the tests need as well.
    """
    _check_python()
    folder = HOME / ("test" if extra else "demo")
    python = folder / ("Scripts" if os.name == "nt" else "bin") / "python"
    stamp = folder / "starkiln-installed"
    wanted = _fingerprint(extra)
    if python.exists() and _read(stamp) == wanted:
        say(f"using the environment in {folder}")
        return str(python)
    say(f"making an environment in {folder} (once; about a minute)")
    try:
        _make(folder, python, extra)
    except KeyboardInterrupt:
        shutil.rmtree(folder, ignore_errors=True)
        fail("interrupted; the same command starts again")
    stamp.write_text(wanted)
    return str(python)


def run(python, *words):
    """Run the environment's Python on `words` and return its exit code."""
    try:
        return subprocess.call([python, *words], cwd=ROOT)
    except KeyboardInterrupt:
        return 130


def _check_python():
    if sys.version_info < OLDEST:
        fail(
            f"Python {sys.version_info[0]}.{sys.version_info[1]} is too old: starkiln needs "
            f"{OLDEST[0]}.{OLDEST[1]} or newer; call this script with one"
        )
    try:
        import ensurepip
        import venv
    except ImportError:
        fail("this Python lacks the venv module; install the package python3-venv and try again")
    else:
        del ensurepip, venv


def _make(folder, python, extra):
    shutil.rmtree(folder, ignore_errors=True)
    try:
        HOME.mkdir(exist_ok=True)
        command = [sys.executable, "-m", "venv", str(folder)]
        subprocess.check_output(command, stderr=subprocess.STDOUT)
    except OSError as error:
        fail(f"cannot make {folder}: {error.strerror}")
    except subprocess.CalledProcessError as error:
        fail(
            f"cannot make an environment ({_last_line(error.output)}); on Debian or Ubuntu "
            "install the package python3-venv"
        )
    say("installing starkiln and the libraries that it needs")
    target = f"{ROOT}[{extra}]" if extra else str(ROOT)
    command = [str(python), "-m", "pip", "install", "--quiet", "--disable-pip-version-check"]
    done = subprocess.run(
        [*command, "--editable", target],
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        check=False,
    )
    if done.returncode:
        shutil.rmtree(folder, ignore_errors=True)
        text = done.stdout.decode("utf-8", "replace")
        if any(word in text for word in _NO_INDEX):
            fail(
                "the Python package index cannot be reached; the first run needs the network, "
                "later ones do not"
            )
        fail(f"the installation failed: {_last_line(done.stdout)}")


def _fingerprint(extra):
    content = (ROOT / "pyproject.toml").read_bytes()
    words = f"{sys.version} {ROOT} {extra}"
    return hashlib.sha256(content + words.encode()).hexdigest()


def _read(path):
    try:
        return path.read_text()
    except OSError:
        return ""


def _last_line(output):
    lines = [line for line in output.decode("utf-8", "replace").splitlines() if line.strip()]
    return lines[-1].strip() if lines else "no reason given"
