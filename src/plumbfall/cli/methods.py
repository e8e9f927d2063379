"""The command ``methods``."""

from __future__ import annotations

import argparse

from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE
from plumbfall.cli.output import print_text

__all__ = ["add_methods"]


def add_methods(commands: Commands) -> None:
    """Add the command to the parser."""
    methods = commands.add_parser(
        "methods",
        help="every correction with its range and source",
        description="List the laws that [methods] of a bench sheet may name.",
    )
    methods.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.report.methods import methods_text

    print_text(methods_text())
    return DONE
