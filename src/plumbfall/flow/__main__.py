"""Make the flow tables, or check the shipped ones: ``python -m plumbfall.flow --help``."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Sequence
from pathlib import Path

from rich.console import Console
from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn, TimeRemainingColumn

# Before numpy is imported: the solvers' small dense systems are far quicker on one thread.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

from plumbfall.flow.tables import (
    TableBuilder,
    builders,
    read_table,
    tables_directory,
    write_table,
)

__all__ = ["main"]


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="python -m plumbfall.flow",
        description="Solve the flow round a ball in a tube and write the tables that "
        "plumbfall looks its corrections up in.",
    )
    parser.add_argument(
        "--check",
        action="store_true",
        help="write nothing; recompute a sample of the nodes of each table and compare",
    )
    parser.add_argument(
        "--only",
        action="append",
        metavar="NAME",
        help="this table only; may be given several times",
    )
    parser.add_argument(
        "--quick", action="store_true", help="leave out the tables that --list calls slow"
    )
    parser.add_argument("--list", action="store_true", help="name the tables and stop")
    parser.add_argument(
        "--directory",
        type=Path,
        default=tables_directory(),
        help="where the tables are (default: inside the package)",
    )
    return parser


def _build(chosen: Sequence[TableBuilder], directory: Path, console: Console) -> int:
    columns = (
        TextColumn("{task.description}"),
        BarColumn(),
        TextColumn("{task.completed:.0f}/{task.total:.0f}"),
        TimeElapsedColumn(),
        TimeRemainingColumn(),
    )
    with Progress(*columns, console=console) as progress:
        for builder in chosen:
            task = progress.add_task(builder.title, total=builder.steps)
            table = builder.build(lambda task=task: progress.advance(task))  # type: ignore[misc]  # bound at once
            written = write_table(table, directory)
            progress.console.print(f"{builder.name}: {written.stat().st_size / 1000:.0f} kB")
    return 0


def _check(chosen: Sequence[TableBuilder], directory: Path, console: Console) -> int:
    failed = 0
    for builder in chosen:
        for check in builder.check(read_table(builder.name, directory)):
            failed += not check.passed
            verdict = "agrees" if check.passed else "DIFFERS"
            console.print(
                f"{builder.name}, {check.node}: shipped {check.shipped:.10g}, "
                f"recomputed {check.recomputed:.10g}, difference {check.difference:.1e} "
                f"(allowed {check.tolerance:.0e}): {verdict}"
            )
    console.print("all nodes agree" if not failed else f"{failed} nodes differ")
    return 1 if failed else 0


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line; see ``--help``.

    Parameters
    ----------
    arguments : sequence of str, optional
        Arguments; those of the process where absent.

    Returns
    -------
    int
        0 if done or all nodes agree, 1 if nodes differ.
    """
    parser = _parser()
    options = parser.parse_args(arguments)
    console = Console(soft_wrap=True, highlight=False)
    known = {builder.name: builder for builder in builders()}
    if options.list:
        for builder in known.values():
            console.print(f"{builder.name}: {builder.title}{' (slow)' if builder.slow else ''}")
        return 0
    names = options.only or [
        name for name, builder in known.items() if not (options.quick and builder.slow)
    ]
    if unknown := [name for name in names if name not in known]:
        parser.error(f"no table named {', '.join(unknown)}; known are {', '.join(known)}")
    chosen = [known[name] for name in names]
    directory: Path = options.directory
    if not directory.is_dir():
        parser.error(f"{directory} is not a directory; make it, or leave --directory out")
    if options.check:
        if missing := [name for name in names if not (directory / f"{name}.json").is_file()]:
            parser.error(
                f"{directory} holds no table {', '.join(missing)}; make it without --check"
            )
    elif not os.access(directory, os.W_OK):
        parser.error(f"{directory} cannot be written to; name another with --directory")
    work = _check if options.check else _build
    return work(chosen, directory, console)


if __name__ == "__main__":
    sys.exit(main())
