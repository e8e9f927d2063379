"""The command ``plan``."""

from __future__ import annotations

import argparse
from typing import Any

from plumbfall.cli.arguments import add_coverage, add_json
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID
from plumbfall.cli.output import print_result, say

__all__ = ["add_choices", "add_plan", "choices"]


def add_plan(commands: Commands) -> None:
    """Add the command to the parser."""
    plan = commands.add_parser(
        "plan",
        help="which of the balls and tubes will reach the wanted uncertainty",
        description="Plan a measurement before the liquid is poured: each ball and tube with fall "
        "time, Reynolds number, run-in and predicted uncertainty, ranked.",
        epilog="Exit code: 0 a ball and tube will do, 1 nothing will, 2 bad input.",
    )
    plan.add_argument("--bench", metavar="FILE", default="bench.toml",
                      help="bench sheet (default: bench.toml in this folder)")  # fmt: skip
    plan.add_argument(
        "--viscosity",
        nargs="+",
        required=True,
        metavar="V",
        help='expected viscosity, such as "0.5 Pa.s"; two are a range',
    )
    plan.add_argument(
        "--target",
        metavar="U",
        help='wanted expanded uncertainty over the viscosity, such as "0.5 %%"',
    )
    plan.add_argument("--drops", type=_count, metavar="N", help="drops of a run set (default 8)")
    plan.add_argument(
        "--most-drops", type=_count, metavar="N", help="most drops that are made (default 20)"
    )
    plan.add_argument(
        "--longest", metavar="T", help='longest fall time, such as "30 min" (default 1 h)'
    )
    add_coverage(plan)
    plan.add_argument("--set", metavar="NAME", help="run set whose entry says what is used")
    add_choices(plan)
    plan.add_argument(
        "--grade", metavar="G", help="grade of catalogue balls by ISO 3290-1 (default G10)"
    )
    plan.add_argument("--out", metavar="DIR", help="write plan.html and plan.json there")
    add_json(plan)
    plan.set_defaults(run=_run)


def add_choices(parser: argparse.ArgumentParser) -> None:
    """Add what of the bench is used, and at which temperature."""
    for kind in ("liquid", "timer", "thermometer"):
        parser.add_argument(f"--{kind}", metavar="NAME", help=f"which {kind}, of several")
    parser.add_argument("--temperature", metavar="T", help='of the liquid, such as "25 degC"')
    parser.add_argument("--tubes", nargs="+", metavar="NAME", help="only these tubes")
    parser.add_argument(
        "--balls",
        nargs="+",
        metavar="NAME",
        help="only these balls; the word catalogue looks for the best ball instead",
    )


def choices(options: argparse.Namespace) -> dict[str, Any]:
    """Return what was chosen of them, and the target."""
    names = ("target", "liquid", "timer", "thermometer", "temperature", "tubes", "balls")
    return {name: value for name in names if (value := getattr(options, name)) is not None}


def _run(options: argparse.Namespace) -> int:
    from plumbfall.report.plan_report import plan

    asked = {
        "drops": options.drops,
        "most_drops": options.most_drops,
        "longest": options.longest,
        "coverage": options.coverage,
        "run_set": options.set,
        "grade": options.grade,
    }
    given = {name: value for name, value in asked.items() if value is not None}
    planned = plan(options.bench, viscosity=options.viscosity, **given, **choices(options))
    if options.out:
        planned.write(options.out)
        say(f"written to {options.out}: plan.html, plan.json")
    print_result(planned, options.json)
    return DONE if planned.suitable else INVALID


def _count(text: str) -> int:
    if not text.isdecimal() or int(text) < 1:
        raise argparse.ArgumentTypeError(f"{text!r} is no number of drops; write 8")
    return int(text)
