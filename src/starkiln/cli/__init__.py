"""The command line: parses, calls and prints; no physics.

Each command lives in a module of its own with two functions, `configure(parser)`
and `run(args) -> int` (the exit code), and is named once, in `COMMANDS`; only the
module of the command that was asked for is imported.
"""

from __future__ import annotations

import argparse
import shlex
import signal
import sys
from collections.abc import Sequence
from importlib import import_module

from starkiln._version import __version__
from starkiln.errors import StarkilnError

#: Command -> (module, what it does in one line).
COMMANDS: dict[str, tuple[str, str]] = {
    "inspect": ("starkiln.cli.inspect", "what a catalogue holds, what is unusable, and why"),
    "fit": ("starkiln.cli.fit", "fit a catalogue: temperatures, diameters, radii, luminosities"),
    "figures": ("starkiln.cli.figures", "draw the figures of a run"),
    "report": ("starkiln.cli.report", "write one self-contained page of a run, and its tables"),
    "pressure": ("starkiln.cli.pressure", "radiation against gas pressure inside stars"),
    "atmosphere": (
        "starkiln.cli.atmosphere",
        "structure, spectrum and light pressure of one model atmosphere",
    ),
    "luminosity": ("starkiln.cli.luminosity", "luminosity from radius and temperature"),
    "photons": ("starkiln.cli.photons", "blackbody radiation and the photon gas at a temperature"),
    "force": ("starkiln.cli.force", "pressure and force of light: sail, grain, eddington, surface"),
    "bands": ("starkiln.cli.bands", "what is known of passbands, with sources"),
    "convert": ("starkiln.cli.convert", "photometry from one unit or band to another"),
}

_DESCRIPTION = (
    "Temperature, angular diameter, extinction, radius and luminosity of stars from their "
    "photometry, with posteriors; and what their light presses on."
)


def console() -> int:
    """Run the command line as a process of its own: the console command.

    SIGTERM, with which batch systems end a job, is taken as Ctrl-C; after the first
    of either, further ones no longer disturb the way out.
    """
    signal.signal(signal.SIGTERM, signal.default_int_handler)
    try:
        code = main()
    except KeyboardInterrupt:
        code = 130
    if code == 130:
        signal.signal(signal.SIGINT, signal.SIG_IGN)
        signal.signal(signal.SIGTERM, signal.SIG_IGN)
    return code


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command line and return its exit code.

    0 complete, 1 failed, 2 bad command or file, 3 complete with rejected rows,
    130 interrupted and resumable.
    """
    words = list(sys.argv[1:] if argv is None else argv)
    label = "starkiln"
    try:
        parser = _parser(words)
        args = parser.parse_args(words)
        args.command_line = shlex.join(["starkiln", *words])
        if args.command is None:
            parser.print_help(sys.stderr)
            return 2
        label = f"starkiln {args.command}"
        return int(args.execute(args))
    except StarkilnError as error:
        sys.stderr.write(f"{label}: {error}\n")
        return error.exit_code
    except BrokenPipeError:
        sys.stderr.close()
        return 1
    except KeyboardInterrupt:
        sys.stderr.write(f"{label}: interrupted\n")
        return 130


def _parser(words: Sequence[str]) -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="starkiln",
        description=_DESCRIPTION,
        allow_abbrev=False,
        formatter_class=lambda prog: argparse.HelpFormatter(prog, max_help_position=18),
    )
    parser.add_argument("--version", action="version", version=f"starkiln {__version__}")
    commands = parser.add_subparsers(dest="command", metavar="COMMAND", title="commands")
    chosen = next((word for word in words if not word.startswith("-")), None)
    for name, (module_name, summary) in COMMANDS.items():
        command = commands.add_parser(
            name,
            help=summary,
            description=summary,
            allow_abbrev=False,
            formatter_class=argparse.RawDescriptionHelpFormatter,
        )
        if name == chosen:
            module = import_module(module_name)
            module.configure(command)
            command.set_defaults(execute=module.run)
    return parser
