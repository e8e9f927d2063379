"""Falling-ball viscometry: timed drops and a bench sheet in, viscosity with bounds out.

Names are loaded when they are first used, so that importing the package costs nothing.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

from plumbfall._version import __version__

if TYPE_CHECKING:
    from plumbfall import physics
    from plumbfall.bench.reader import read_bench
    from plumbfall.bench.records import Bench
    from plumbfall.checking import chart, check, compare
    from plumbfall.errors import InputError, PlumbfallError, PlumbfallWarning
    from plumbfall.estimate import Estimate
    from plumbfall.planning.simulation import simulate
    from plumbfall.report.plan_report import plan
    from plumbfall.report.report import Report
    from plumbfall.timings.reader import read_timings
    from plumbfall.timings.records import Timings
    from plumbfall.workflow import calibrate, reduce

__all__ = [
    "Bench",
    "Estimate",
    "InputError",
    "PlumbfallError",
    "PlumbfallWarning",
    "Report",
    "Timings",
    "__version__",
    "calibrate",
    "chart",
    "check",
    "compare",
    "physics",
    "plan",
    "read_bench",
    "read_timings",
    "reduce",
    "simulate",
]

_HOME = {
    "Bench": "plumbfall.bench.records",
    "Estimate": "plumbfall.estimate",
    "InputError": "plumbfall.errors",
    "PlumbfallError": "plumbfall.errors",
    "PlumbfallWarning": "plumbfall.errors",
    "Report": "plumbfall.report.report",
    "Timings": "plumbfall.timings.records",
    "calibrate": "plumbfall.workflow",
    "chart": "plumbfall.checking",
    "check": "plumbfall.checking",
    "compare": "plumbfall.checking",
    "plan": "plumbfall.report.plan_report",
    "read_bench": "plumbfall.bench.reader",
    "read_timings": "plumbfall.timings.reader",
    "reduce": "plumbfall.workflow",
    "simulate": "plumbfall.planning.simulation",
}


def __getattr__(name: str) -> Any:
    if name == "physics":
        return importlib.import_module("plumbfall.physics")
    if name not in _HOME:
        raise AttributeError(f"module 'plumbfall' has no attribute {name!r}")
    value = getattr(importlib.import_module(_HOME[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted(__all__)
