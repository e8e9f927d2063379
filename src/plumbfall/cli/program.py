"""The program: its parser, and what becomes of a command that fails.

Nothing heavy is imported until a command runs, so that help comes at once.
"""

from __future__ import annotations

import argparse
import io
import sys
from collections.abc import Sequence

from plumbfall._version import __version__
from plumbfall.cli.calibrate import add_calibrate
from plumbfall.cli.chart import add_chart
from plumbfall.cli.check import add_check
from plumbfall.cli.compare import add_compare
from plumbfall.cli.exit_codes import BAD_INPUT, INTERRUPTED
from plumbfall.cli.inspect import add_inspect
from plumbfall.cli.methods import add_methods
from plumbfall.cli.output import say, say_problems
from plumbfall.cli.plan import add_plan
from plumbfall.cli.reduce import add_reduce
from plumbfall.cli.selftest import add_selftest
from plumbfall.cli.template import add_template

__all__ = ["build_parser", "main"]

CAUTIONS = (
    "Results are computed from the numbers you supply and do not replace calibration by an "
    "accredited laboratory. Hot baths, glass and solvents hurt: follow your local codes, the "
    "safety data sheets and licensed practice."
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command and return its exit code.

    Exit codes: 0 done and every set valid; 1 a set invalid (with ``--strict`` also one with
    warnings), a check failed, a chart out of control, nothing suitable to plan, or a figure of the
    self-test failed; 2 bad input or usage, and then nothing has been written; 3 a check undecided.
    """
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:  # closed by the shell: what is said there goes nowhere
            setattr(sys, name, io.StringIO())
    parsed = build_parser().parse_args(arguments)
    from plumbfall.errors import InputError, PlumbfallError

    try:
        return int(parsed.run(parsed))
    except InputError as error:
        say_problems(error)
        return BAD_INPUT
    except PlumbfallError as error:
        say(f"error: {error}")
        return BAD_INPUT
    except KeyboardInterrupt:
        say("stopped before the end")
        return INTERRUPTED


def build_parser() -> argparse.ArgumentParser:
    """Return the parser of the command line."""
    parser = argparse.ArgumentParser(
        prog="plumbfall",
        description="Viscosity with confidence bounds from timed drops of balls in a tube.",
        epilog=CAUTIONS,
    )
    parser.add_argument("--version", action="version", version=f"plumbfall {__version__}")
    commands = parser.add_subparsers(title="commands", metavar="COMMAND", required=True)
    for add in (
        add_inspect,
        add_reduce,
        add_calibrate,
        add_check,
        add_compare,
        add_chart,
        add_plan,
        add_methods,
        add_template,
        add_selftest,
    ):
        add(commands)
    return parser
