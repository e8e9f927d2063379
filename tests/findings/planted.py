"""Invented run sets with a fault planted in each, and how often a finding sees it."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pandas as pd

import plumbfall as pf
from plumbfall.results import Finding
from support.benches import bench_dict

SETS = 25
STOPWATCH = {"T1": {"kind": "stopwatch"}}
GATE = {"T1": {"kind": "gate"}}

Plant = Callable[[pd.DataFrame, np.random.Generator], None]


def sets_of(
    bench: pf.Bench,
    *,
    n_sets: int = SETS,
    drops: int = 8,
    balls: Any = None,
    viscosity: float = 2.0,
) -> list[pd.DataFrame]:
    """Return clean run sets, each of its own seed."""
    return [
        pf.simulate(
            bench, viscosity=viscosity, run_set=f"set {i}", drops=drops, seed=i, balls=balls
        ).assign(note="")
        for i in range(n_sets)
    ]


def findings_of(
    plant: Plant | None = None, *, read_with: dict[str, Any] | None = None, **how: Any
) -> list[list[Finding]]:
    """Reduce clean or planted run sets; ``read_with`` is a bench sheet other than the true one.

    Other arguments go to :func:`sets_of`, but for ``timer`` and ``changes`` of the bench sheet.
    """
    changes = {"timer": how.pop("timer", STOPWATCH), **how.pop("changes", {})}
    bench = pf.read_bench(bench_dict(**changes))
    tables = sets_of(bench, **how)
    if plant is not None:
        for i, table in enumerate(tables):
            plant(table, np.random.default_rng(1000 + i))
    report = pf.reduce(
        pd.concat(tables, ignore_index=True),
        bench if read_with is None else bench_dict(**changes, **read_with),
        draws=0,
    )
    return [list(one.result.findings) for one in report]


def share_with(found: list[list[Finding]], code: str) -> float:
    """Return the share of run sets with a finding of the code."""
    return float(np.mean([any(one.code == code for one in findings) for findings in found]))


def first(found: list[list[Finding]], code: str) -> Finding:
    """Return the first finding of the code."""
    return next(one for findings in found for one in findings if one.code == code)
