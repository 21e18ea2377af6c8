"""Run the tests in an environment of their own, which is made when it is not there.

python3 scripts/test.py            the tests, without the long statistical ones
python3 scripts/test.py --all      all of them
python3 scripts/test.py WORDS      further words go to pytest
"""

import sys

from _environment import environment, run, say


def main():
    """Run pytest and return its exit code."""
    words = [word for word in sys.argv[1:] if word != "--all"]
    if "--all" not in sys.argv[1:]:
        words = ["-m", "not long", *words]
    python = environment("dev")
    say("running pytest " + " ".join(words))
    return run(python, "-m", "pytest", *words)


if __name__ == "__main__":
    sys.exit(main())
