"""The command ``calibrate``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_inputs, day
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID
from plumbfall.cli.output import print_result, say

__all__ = ["add_calibrate"]


def add_calibrate(commands: Commands) -> None:
    """Add the command to the parser."""
    calibrate = commands.add_parser(
        "calibrate",
        help="constants of tubes and balls from certified liquids",
        description="Find the constant of each ball and tube from timings in certified liquids: "
        "viscosity = constant x (ball density - liquid density) x time.",
        epilog="Exit code: 0 every constant found, 1 a set invalid, 2 bad input. Unless it is 0 "
        "nothing is written.",
    )
    add_inputs(calibrate, timings="+")
    calibrate.add_argument(
        "--reference",
        nargs="+",
        required=True,
        metavar="R",
        help="names of the [reference.NAME] entries that certify the liquids",
    )
    calibrate.add_argument(
        "--out",
        metavar="FILE",
        help="write the constants there, such as constant.json, for [constant.NAME] file",
    )
    calibrate.add_argument(
        "--date",
        type=day,
        metavar="DAY",
        help="day of the calibration, such as 2026-03-02 (default: that of the last drop, where "
        "the timings say when it started)",
    )
    calibrate.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.workflow import calibrate

    found = calibrate(
        options.timings,
        options.bench,
        reference=options.reference,
        date=options.date,
        encoding=options.encoding,
    )
    if options.out and found.complete:
        found.to_json(options.out)
        say(f"written to {options.out}")
    elif options.out:
        say("nothing is written, as a run set is invalid")
    print_result(found, options.json)
    return DONE if found.complete else INVALID
