"""The command line: arguments to calls to an exit code; no arithmetic.

Nothing heavy is imported until a command runs, so that help comes at once.
"""

from __future__ import annotations

import argparse
import io
import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import TYPE_CHECKING, TextIO

from plumbfall._version import __version__

if TYPE_CHECKING:
    from plumbfall.errors import InputError

__all__ = ["build_parser", "main"]

DONE, INVALID, BAD_INPUT, INTERRUPTED = 0, 1, 2, 130

CAUTIONS = (
    "Results are computed from the numbers you supply and do not replace calibration by an "
    "accredited laboratory. Hot baths, glass and solvents hurt: follow your local codes, the "
    "safety data sheets and licensed practice."
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command and return its exit code.

    Exit codes: 0 done and every set valid; 1 a set invalid (with ``--strict`` also one with
    warnings), or a figure of the self-test failed; 2 bad input or usage, and then nothing has
    been written.
    """
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:  # closed by the shell: what is said there goes nowhere
            setattr(sys, name, io.StringIO())
    parsed = build_parser().parse_args(arguments)
    from plumbfall.errors import InputError, PlumbfallError

    try:
        return int(parsed.run(parsed))
    except InputError as error:
        _say_problems(error)
        return BAD_INPUT
    except PlumbfallError as error:
        _say(f"error: {error}")
        return BAD_INPUT
    except KeyboardInterrupt:
        _say("stopped before the end")
        return INTERRUPTED


def build_parser() -> argparse.ArgumentParser:
    """Return the parser of the command line."""
    parser = argparse.ArgumentParser(
        prog="plumbfall",
        description="Viscosity with confidence bounds from timed drops of balls in a tube.",
        epilog=CAUTIONS,
    )
    parser.add_argument("--version", action="version", version=f"plumbfall {__version__}")
    commands = parser.add_subparsers(title="commands", metavar="COMMAND", required=True)

    inspect = commands.add_parser(
        "inspect",
        help="show what was understood of timing files and bench sheet; compute nothing",
        description="Show what was understood, what was repaired and what is wrong.",
    )
    _add_inputs(inspect, timings="*")
    inspect.set_defaults(run=_inspect)

    reduce = commands.add_parser(
        "reduce",
        help="viscosity with bounds for each run set",
        description="Reduce timed drops to a viscosity with confidence bounds for each run set.",
        epilog="Exit code: 0 every set valid, 1 a set invalid, 2 bad input (nothing is written).",
    )
    _add_inputs(reduce, timings="+")
    reduce.add_argument(
        "--out",
        metavar="DIR",
        help="write report.html, report.json, run_sets.csv and drops.csv there, all or none",
    )
    reduce.add_argument(
        "--coverage", type=_probability, metavar="P", help="coverage probability (default 0.95)"
    )
    reduce.add_argument(
        "--draws",
        type=_draws,
        metavar="N|auto",
        help="Monte Carlo draws, such as 200000, or as many as it takes (default 0: linear only)",
    )
    reduce.add_argument(
        "--seed",
        type=_seed,
        default=0,
        metavar="N",
        help="seed of the draws, recorded in the report (default 0)",
    )
    reduce.add_argument(
        "--strict", action="store_true", help="exit with 1 also where a set has warnings"
    )
    reduce.set_defaults(run=_reduce)

    methods = commands.add_parser(
        "methods",
        help="every correction with its range and source",
        description="List the laws that [methods] of a bench sheet may name.",
    )
    methods.set_defaults(run=_methods)

    selftest = commands.add_parser(
        "selftest",
        help="recompute known figures and print each with its source: evidence for validation",
        description="Recompute known figures with the code as installed; print each with its "
        "source, its basis and the difference.",
        epilog="Exit code: 0 every figure agrees, 1 one does not.",
    )
    selftest.add_argument("--json", action="store_true", help="print JSON instead of text")
    selftest.set_defaults(run=_selftest)
    return parser


def _add_inputs(parser: argparse.ArgumentParser, timings: str) -> None:
    parser.add_argument(
        "timings", nargs=timings, metavar="TIMINGS", help="timing files; wildcards are expanded"
    )
    parser.add_argument(
        "--bench", metavar="FILE", help="bench sheet (default: bench.toml beside the timings)"
    )
    parser.add_argument("--encoding", metavar="NAME", help="encoding of the timing files")
    parser.add_argument("--json", action="store_true", help="print JSON instead of text")


def _probability(text: str) -> float:
    try:
        value = float(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"{text!r} is no number; write 0.95 for 95 %") from None
    if not 0 < value < 1:
        raise argparse.ArgumentTypeError(f"{text} is not between 0 and 1; write 0.95 for 95 %")
    return value


def _seed(text: str) -> int:
    if not text.isdecimal():
        raise argparse.ArgumentTypeError(f"{text!r} is no seed; write a whole number from 0 up")
    return int(text)


def _draws(text: str) -> int | str:
    if text == "auto":
        return text
    if not text.isdecimal():
        raise argparse.ArgumentTypeError(f"{text!r} is no number of draws; write 200000, or auto")
    return int(text)


@contextmanager
def _standard_output() -> Iterator[TextIO]:
    """Write to the standard output; a reader that has gone, as ``head`` goes, is no error."""
    from plumbfall.errors import PlumbfallError

    try:
        yield sys.stdout
        sys.stdout.flush()
    except OSError as error:
        # Whatever is still held back would be tried, and fail, once more when the program ends.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        if not isinstance(error, BrokenPipeError):
            raise PlumbfallError(
                f"the standard output cannot be written: {error.strerror or error}"
            ) from error


def _reduce(options: argparse.Namespace) -> int:
    import warnings

    from plumbfall.errors import PlumbfallWarning
    from plumbfall.report.text import show
    from plumbfall.workflow import reduce

    with warnings.catch_warnings(record=True) as said:
        warnings.simplefilter("always", PlumbfallWarning)
        report = reduce(
            options.timings,
            options.bench,
            draws=options.draws,
            seed=options.seed,
            coverage=options.coverage,
            encoding=options.encoding,
        )
    for warning in said:
        _say(f"warning: {warning.message}")
    statuses = set(report.table()["status"])
    failing = {"invalid", "valid-with-warnings"} if options.strict else {"invalid"}
    if options.out:
        report.write(options.out)
        _say(f"written to {options.out}: report.html, report.json, run_sets.csv, drops.csv")
    with _standard_output() as output:
        if options.json:
            output.write(report.to_json())
        else:
            show(report, output)
    return INVALID if statuses & failing else DONE


def _inspect(options: argparse.Namespace) -> int:
    from plumbfall.errors import InputError
    from plumbfall.report.inspection import inspection_text, inspection_to_dict
    from plumbfall.report.json_report import json_text
    from plumbfall.report.text import printable
    from plumbfall.timings.records import Timings
    from plumbfall.workflow import inspect_inputs

    bench = None
    try:
        timings, bench = inspect_inputs(options.timings, options.bench, encoding=options.encoding)
    except InputError as error:
        if not options.json:
            raise
        timings = Timings.empty(problems=error.problems)
    errors = [problem for problem in timings.problems if problem.severity == "error"]
    if errors and options.json:
        _say_problems(InputError(errors))
    with _standard_output() as output:
        if options.json:
            output.write(json_text(inspection_to_dict(timings, bench)))
        else:
            output.write(printable(inspection_text(timings, bench), output.encoding))
    return BAD_INPUT if errors else DONE


def _methods(options: argparse.Namespace) -> int:
    from plumbfall.report.methods import methods_text
    from plumbfall.report.text import printable

    with _standard_output() as output:
        output.write(printable(methods_text(), output.encoding))
    return DONE


def _selftest(options: argparse.Namespace) -> int:
    from plumbfall.published.selftest import selftest
    from plumbfall.report.json_report import json_text
    from plumbfall.report.selftest_text import selftest_text
    from plumbfall.report.text import printable

    result = selftest()
    with _standard_output() as output:
        if options.json:
            output.write(json_text(result.to_dict()))
        else:
            output.write(printable(selftest_text(result), output.encoding))
    return INVALID if result.failed else DONE


def _say_problems(error: InputError) -> None:
    for problem in error.problems:
        _say(f"error: {problem}")


def _say(line: str) -> None:
    from plumbfall.report.text import printable

    sys.stderr.write(printable(line, sys.stderr.encoding) + "\n")
