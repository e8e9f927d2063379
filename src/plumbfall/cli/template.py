"""The command ``template``."""

from __future__ import annotations

import argparse

from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE
from plumbfall.cli.output import say
from plumbfall.cli.plan import add_choices, choices

__all__ = ["add_template"]


def add_template(commands: Commands) -> None:
    """Add the command to the parser."""
    template = commands.add_parser(
        "template",
        help="a bench sheet, a timing file and a recording form to fill in",
        description="Write a commented bench sheet, a timing file and a recording form to print. "
        "With --bench and --viscosity they are those of the plan's best ball and tube.",
        epilog="Exit code: 0 written, 2 bad input, or nothing that will do. No file is "
        "overwritten.",
    )
    template.add_argument("folder", metavar="DIR", help="folder to write into")
    template.add_argument("--bench", metavar="FILE", help="bench sheet that is planned with")
    template.add_argument(
        "--viscosity", nargs="+", metavar="V", help='expected viscosity, such as "0.5 Pa.s"'
    )
    template.add_argument(
        "--target", metavar="U", help='wanted expanded uncertainty, such as "0.5 %%"'
    )
    template.add_argument("--set", metavar="NAME", help="name of the run set (default A)")
    add_choices(template)
    template.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.errors import InputError
    from plumbfall.planning.asked import bench_from, plan_bench
    from plumbfall.report.plan_forms import blank_forms, forms_of_plan, write_forms

    if (options.bench is None) != (options.viscosity is None):
        raise InputError(
            "a plan needs both a bench sheet and a viscosity",
            remedy='give --bench FILE and --viscosity "0.5 Pa.s", or neither',
        )
    if options.bench is None:
        names = write_forms(options.folder, blank_forms())
    else:
        bench = bench_from(options.bench)
        entry = options.set if options.set in bench.sets else None
        plan = plan_bench(bench, viscosity=options.viscosity, run_set=entry, **choices(options))
        forms = forms_of_plan(plan, options.set or "A")
        names = write_forms(options.folder, forms, plan.bench)
    say(f"written to {options.folder}: {', '.join(names)}")
    return DONE
