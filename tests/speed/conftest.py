"""Figures of the benchmarks are shown."""

from __future__ import annotations

import sys
from collections.abc import Callable

import pytest


@pytest.fixture
def say(capsys) -> Callable[[str], None]:
    """Write a figure to the terminal whatever pytest captures."""

    def write(line: str) -> None:
        with capsys.disabled():
            sys.stdout.write(f"\n  {line}\n")

    return write
