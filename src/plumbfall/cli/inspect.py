"""The command ``inspect``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_inputs
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import BAD_INPUT, DONE
from plumbfall.cli.output import print_json, print_text, say_problems

__all__ = ["add_inspect"]


def add_inspect(commands: Commands) -> None:
    """Add the command to the parser."""
    inspect = commands.add_parser(
        "inspect",
        help="show what was understood of timing files and bench sheet; compute nothing",
        description="Show what was understood, what was repaired and what is wrong.",
    )
    add_inputs(inspect, timings="*")
    inspect.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.errors import InputError
    from plumbfall.report.inspection import inspection_to_dict
    from plumbfall.report.inspection_text import inspection_text
    from plumbfall.timings.records import Timings
    from plumbfall.workflow import inspect_inputs

    bench = None
    try:
        timings, bench = inspect_inputs(options.timings, options.bench, encoding=options.encoding)
    except InputError as error:
        if not options.json:
            raise
        timings = Timings.empty(problems=error.problems)
    errors = [problem for problem in timings.problems if problem.severity == "error"]
    if errors and options.json:
        say_problems(InputError(errors))
    if options.json:
        print_json(inspection_to_dict(timings, bench))
    else:
        print_text(inspection_text(timings, bench))
    return BAD_INPUT if errors else DONE
