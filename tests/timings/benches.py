"""A small invented bench for tests of names and marks."""

from __future__ import annotations

from plumbfall.bench.records import (
    Ball,
    Bench,
    Liquid,
    RunSetEntry,
    Thermometer,
    Timer,
    TimingHints,
    Tube,
)
from plumbfall.estimate import Estimate


def bench(
    *,
    balls: str = "AB",
    marks: int = 3,
    tubes: str = "T",
    sets: dict[str, RunSetEntry] | None = None,
    timings: TimingHints | None = None,
) -> Bench:
    """Return a bench with balls and tubes of one-letter names, and one of everything else."""
    distances = tuple(Estimate(0.1 * n) for n in range(marks))
    return Bench(
        balls={name: Ball(name=name, diameter=Estimate(0.002)) for name in balls},
        tubes={name: Tube(name=name, marks=distances) for name in tubes},
        liquids={"oil": Liquid(name="oil", density=Estimate(970.0))},
        timers={
            "watch": Timer(
                name="watch",
                kind="stopwatch",
                per_drop=Estimate(0.1),
                bias=Estimate(0.0),
                rate=Estimate(0.0),
                resolution=None,
            )
        },
        thermometers={"probe": Thermometer(name="probe", correction=Estimate(0.0))},
        sets=sets or {},
        timings=timings or TimingHints(),
        path="bench.toml",
    )
