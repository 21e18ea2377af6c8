"""Run every static check in the tests' environment: style, types, import contract."""

import sys

from _environment import environment, run, say

CHECKS = {
    "ruff check": ("-m", "ruff", "check", "."),
    "ruff format": ("-m", "ruff", "format", "--check", "."),
    "mypy": ("-m", "mypy"),
    "import contract": ("-c", "from importlinter.cli import lint_imports_command as c; c()"),
}


def main():
    """Run the checks and return 1 when one of them fails."""
    python = environment("dev")
    failed = []
    for name, words in CHECKS.items():
        say(name)
        if run(python, *words):
            failed.append(name)
    say("failed: " + ", ".join(failed) if failed else "all static checks passed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
