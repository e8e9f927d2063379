"""What commands print: results to the standard output, all else to the standard error."""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any, Protocol, TextIO

if TYPE_CHECKING:
    from plumbfall.errors import InputError

__all__ = ["print_json", "print_result", "print_text", "say", "say_problems", "standard_output"]


@contextmanager
def standard_output() -> Iterator[TextIO]:
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


def print_json(document: dict[str, Any]) -> None:
    """Print a document in the form of every ``--json``."""
    from plumbfall.report.json_report import json_text

    with standard_output() as output:
        output.write(json_text(document))


def print_text(text: str) -> None:
    """Print text, in ASCII where the console cannot do better."""
    from plumbfall.report.text import printable

    with standard_output() as output:
        output.write(printable(text, output.encoding))


class Printable(Protocol):
    """A result that a command prints."""

    def to_dict(self) -> dict[str, Any]:
        """Return the document of ``--json``."""

    def text(self) -> str:
        """Return what is printed without it."""


def print_result(result: Printable, as_json: bool) -> None:
    """Print a result as JSON or as text."""
    if as_json:
        print_json(result.to_dict())
    else:
        print_text(result.text())


def say_problems(error: InputError) -> None:
    """Say every problem of the inputs on a line of its own."""
    for problem in error.problems:
        say(f"error: {problem}")


def say(line: str) -> None:
    """Say a line on the standard error."""
    from plumbfall.report.text import printable

    sys.stderr.write(printable(line, sys.stderr.encoding) + "\n")
