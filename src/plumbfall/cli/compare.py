"""The command ``compare``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_coverage, add_inputs
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE
from plumbfall.cli.output import print_result

__all__ = ["add_compare"]


def add_compare(commands: Commands) -> None:
    """Add the command to the parser."""
    compare = commands.add_parser(
        "compare",
        help="ratio and difference of two run sets, shared errors cancelled",
        description="Compare two run sets: ratio (the first over the second) and difference, with "
        "the errors that they share cancelled; tests of difference and equality.",
        epilog="Exit code: 0 compared, 2 bad input or a set without a viscosity.",
    )
    add_inputs(compare, timings="+")
    compare.add_argument(
        "--sets", nargs=2, required=True, metavar=("A", "B"), help="names of the two run sets"
    )
    compare.add_argument(
        "--margin", metavar="RATIO", help='within which the two count as equal, such as "1 %%"'
    )
    add_coverage(compare)
    compare.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.checking import compare

    report = compare(
        options.timings,
        options.bench,
        sets=options.sets,
        margin=options.margin,
        coverage=options.coverage,
        encoding=options.encoding,
    )
    print_result(report, options.json)
    return DONE
