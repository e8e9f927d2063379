"""The command ``reduce``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_coverage, add_inputs, day, draws, seed
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID
from plumbfall.cli.output import say, standard_output
from plumbfall.cli.progress import progress_bar

__all__ = ["add_reduce"]


def add_reduce(commands: Commands) -> None:
    """Add the command to the parser."""
    reduce = commands.add_parser(
        "reduce",
        help="viscosity with bounds for each run set",
        description="Reduce timed drops to a viscosity with confidence bounds for each run set.",
        epilog="Exit code: 0 every set valid, 1 a set invalid, 2 bad input (nothing is written).",
    )
    add_inputs(reduce, timings="+")
    reduce.add_argument(
        "--out",
        metavar="DIR",
        help="write report.html, report.json, run_sets.csv and drops.csv there, all or none",
    )
    reduce.add_argument(
        "--format",
        choices=("html", "pdf"),
        default="html",
        help="pdf: write report.pdf into DIR too, printed by an installed Chromium (default html)",
    )
    add_coverage(reduce)
    reduce.add_argument(
        "--draws",
        type=draws,
        metavar="N|auto",
        help="Monte Carlo draws of each run set (default 200000; 0: linear bounds only), or auto "
        "for as many as it takes to validate the linear bounds",
    )
    reduce.add_argument(
        "--seed",
        type=seed,
        default=0,
        metavar="N",
        help="seed of the draws, recorded in the report (default 0)",
    )
    reduce.add_argument(
        "--date",
        type=day,
        metavar="DAY",
        help="day that the report bears, such as 2026-03-02; it is never taken from the clock",
    )
    reduce.add_argument(
        "--strict", action="store_true", help="exit with 1 also where a set has warnings"
    )
    reduce.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    import warnings

    from plumbfall.errors import InputError, PlumbfallWarning
    from plumbfall.report.browser import find_browser
    from plumbfall.report.terminal import show
    from plumbfall.workflow import reduce

    if options.format == "pdf":
        if not options.out:
            raise InputError("--format pdf needs a folder", remedy="add --out DIR")
        find_browser()  # before anything is computed
    asked = {} if options.draws is None else {"draws": options.draws}
    with warnings.catch_warnings(record=True) as said, progress_bar("run sets") as progress:
        warnings.simplefilter("always", PlumbfallWarning)
        report = reduce(
            options.timings,
            options.bench,
            **asked,
            progress=progress,
            seed=options.seed,
            coverage=options.coverage,
            encoding=options.encoding,
            date=options.date,
        )
    for warning in said:
        say(f"warning: {warning.message}")
    statuses = set(report.table()["status"])
    failing = {"invalid", "valid-with-warnings"} if options.strict else {"invalid"}
    if options.out:
        printed = options.format == "pdf"
        with progress_bar("pages") as progress:
            report.write(options.out, pdf=printed, progress=progress)
        written = ["report.html", "report.json", "run_sets.csv", "drops.csv"]
        written += ["report.pdf"] if printed else []
        say(f"written to {options.out}: {', '.join(written)}")
    with standard_output() as output:
        if options.json:
            output.write(report.to_json())
        else:
            show(report, output)
    return INVALID if statuses & failing else DONE
