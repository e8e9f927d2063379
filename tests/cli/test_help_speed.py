"""Help must come at once: within three times what bare argparse costs."""

from __future__ import annotations

import os
import subprocess
import sys
import time

BARE = """
import argparse
parser = argparse.ArgumentParser()
commands = parser.add_subparsers()
for name in ("one", "two", "three"):
    commands.add_parser(name).add_argument("--option")
parser.parse_args(["--help"])
"""


def seconds(*command: str) -> float:
    best = float("inf")
    for _ in range(7):
        start = time.perf_counter()
        subprocess.run(command, stdout=subprocess.DEVNULL, check=True, env=os.environ)
        best = min(best, time.perf_counter() - start)
    return best


def test_help_costs_at_most_three_times_bare_argparse():
    bare = seconds(sys.executable, "-c", BARE)
    ours = seconds(sys.executable, "-m", "plumbfall", "--help")
    assert ours < 3 * bare
