"""Arguments that several commands share, and what they may be."""

from __future__ import annotations

import argparse
import datetime as dt

__all__ = ["add_coverage", "add_inputs", "add_json", "day", "draws", "probability", "seed"]


def add_inputs(parser: argparse.ArgumentParser, timings: str) -> None:
    """Add the timing files, the bench sheet, the encoding and ``--json``."""
    parser.add_argument(
        "timings", nargs=timings, metavar="TIMINGS", help="timing files; wildcards are expanded"
    )
    parser.add_argument(
        "--bench", metavar="FILE", help="bench sheet (default: bench.toml beside the timings)"
    )
    parser.add_argument("--encoding", metavar="NAME", help="encoding of the timing files")
    add_json(parser)


def add_coverage(parser: argparse.ArgumentParser) -> None:
    """Add ``--coverage``, the probability of the bounds."""
    parser.add_argument(
        "--coverage", type=probability, metavar="P", help="coverage probability (default 0.95)"
    )


def add_json(parser: argparse.ArgumentParser) -> None:
    """Add ``--json``."""
    parser.add_argument("--json", action="store_true", help="print JSON instead of text")


def probability(text: str) -> float:
    """Read a probability between 0 and 1."""
    try:
        value = float(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"{text!r} is no number; write 0.95 for 95 %") from None
    if not 0 < value < 1:
        raise argparse.ArgumentTypeError(f"{text} is not between 0 and 1; write 0.95 for 95 %")
    return value


def seed(text: str) -> int:
    """Read a seed, a whole number from 0 up."""
    if not text.isdecimal():
        raise argparse.ArgumentTypeError(f"{text!r} is no seed; write a whole number from 0 up")
    return int(text)


def day(text: str) -> dt.date:
    """Read a day as ISO 8601 has it."""
    try:
        return dt.date.fromisoformat(text)
    except ValueError:
        raise argparse.ArgumentTypeError(f"{text!r} is no day; write it as 2026-03-02") from None


def draws(text: str) -> int | str:
    """Read a number of draws, or ``auto``."""
    if text == "auto":
        return text
    if not text.isdecimal():
        raise argparse.ArgumentTypeError(f"{text!r} is no number of draws; write 200000, or auto")
    return int(text)
