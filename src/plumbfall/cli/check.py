"""The command ``check``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_coverage, add_inputs
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID, UNDECIDED
from plumbfall.cli.output import print_result, say

__all__ = ["add_check"]


def add_check(commands: Commands) -> None:
    """Add the command to the parser."""
    check = commands.add_parser(
        "check",
        help="bias against a certified liquid, and a decision",
        description="Check run sets against a certified liquid: bias with its uncertainty, E_n, "
        "zeta, and a decision with its reason.",
        epilog="Exit code: 0 passed, 1 failed or a set invalid, 2 bad input (nothing is written), "
        "3 undecided. Several sets: the gravest of them.",
    )
    add_inputs(check, timings="+")
    check.add_argument(
        "--reference", required=True, metavar="NAME", help="[reference.NAME] of the bench sheet"
    )
    check.add_argument(
        "--tolerance",
        metavar="RATIO",
        help='largest bias allowed, such as "0.5 %%" (default: passed where E_n is within 1)',
    )
    check.add_argument(
        "--history", metavar="FILE.csv", help="append the check there; once for the same inputs"
    )
    check.add_argument(
        "--date", metavar="DATE", help="when the drops were made, where they do not say: 2026-03-02"
    )
    add_coverage(check)
    check.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.checking import check

    report = check(
        options.timings,
        options.bench,
        reference=options.reference,
        tolerance=options.tolerance,
        history=options.history,
        date=options.date,
        coverage=options.coverage,
        encoding=options.encoding,
    )
    if report.appended is not None:
        known = len(report) - report.appended
        told = f"{report.appended} appended to {options.history}"
        say(told + (f", {known} there already" if known else ""))
    print_result(report, options.json)
    if report.invalid or report.decision == "failed":
        return INVALID
    return UNDECIDED if report.decision == "undecided" else DONE
