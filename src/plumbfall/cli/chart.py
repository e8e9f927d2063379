"""The command ``chart``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_json
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID
from plumbfall.cli.output import print_result, say

__all__ = ["add_chart"]


def add_chart(commands: Commands) -> None:
    """Add the command to the parser."""
    chart = commands.add_parser(
        "chart",
        help="control chart of the check history",
        description="Chart the history of checks: limits, moving average, signals and drift.",
        epilog="Exit code: 0 in control, 1 out of control, 2 bad input (nothing is written).",
    )
    chart.add_argument(
        "history", metavar="HISTORY.csv", help="file that check --history appends to"
    )
    chart.add_argument(
        "--out",
        metavar="FILE",
        help="write the chart as .png or .svg, or the points as .csv, .json",
    )
    chart.add_argument(
        "--reference", metavar="NAME", help="chart the checks of this certified liquid alone"
    )
    chart.add_argument(
        "--baseline",
        type=_count,
        metavar="N",
        help="take the limits from the first N checks (default: from all)",
    )
    add_json(chart)
    chart.set_defaults(run=_run)


def _count(text: str) -> int:
    if not text.isdecimal() or int(text) < 2:
        raise argparse.ArgumentTypeError(f"{text!r} is no count; write a whole number from 2 up")
    return int(text)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.checking import chart

    report = chart(options.history, reference=options.reference, baseline=options.baseline)
    if options.out:
        report.write(options.out)
        say(f"written to {options.out}")
    print_result(report, options.json)
    return INVALID if report.out_of_control else DONE
