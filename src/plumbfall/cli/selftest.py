"""The command ``selftest``."""

from __future__ import annotations

import argparse

from plumbfall.cli.arguments import add_json
from plumbfall.cli.commands import Commands
from plumbfall.cli.exit_codes import DONE, INVALID
from plumbfall.cli.output import print_json, print_text

__all__ = ["add_selftest"]


def add_selftest(commands: Commands) -> None:
    """Add the command to the parser."""
    selftest = commands.add_parser(
        "selftest",
        help="recompute known figures and print each with its source: evidence for validation",
        description="Recompute known figures with the code as installed; print each with its "
        "source, its basis and the difference.",
        epilog="Exit code: 0 every figure agrees, 1 one does not.",
    )
    add_json(selftest)
    selftest.set_defaults(run=_run)


def _run(options: argparse.Namespace) -> int:
    from plumbfall.published.selftest import selftest
    from plumbfall.report.selftest_text import selftest_text

    result = selftest()
    if options.json:
        print_json(result.to_dict())
    else:
        print_text(selftest_text(result))
    return INVALID if result.failed else DONE
