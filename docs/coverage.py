"""How often the bounds hold the truth: simulated run sets, reduced, and counted.

``python docs/coverage.py`` prints the tables of docs/uncertainty.md (some minutes);
``--sets 400`` is quicker. All benches are invented. The tests run the same study at a fixed seed.
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

import plumbfall as pf
from plumbfall.planning.simulation import simulate_sets
from plumbfall.reduction.numbers import reduce_numbers
from plumbfall.run_sets.monte_carlo import draw_run_set
from plumbfall.run_sets.result import SetColumns
from plumbfall.timings.records import Timings
from plumbfall.uncertainty.coverage import coverage_factor

__all__ = ["BALLS", "DROPS", "KINDS", "Stratum", "bench", "ratio_coverage", "study", "study_drawn"]

BALLS, DROPS = (1, 2, 3, 4, 6), (1, 2, 4, 8)
KINDS = ("shared", "scatter", "both")
VISCOSITY = 1.0
PARTS = {  # relative standard uncertainties: of the distance, of a drop's time, of a ball
    "shared": (0.006, 0.001, 0.0005),
    "scatter": (0.001, 0.008, 0.004),
    "both": (0.006, 0.008, 0.002),
}


@dataclass(frozen=True)
class Stratum:
    """One kind of bench, so many balls and drops of each, and what came of it.

    ``width`` is the mean half-width over that of an oracle, who knows the standard deviation of
    the errors; ``student`` the mean half-width over that of Student's t on the values, with 1.96
    times everything else beside it in quadrature.
    """

    kind: str
    known_scatter: bool
    balls: int
    drops: int
    coverage: float
    width: float
    student: float


def bench(kind: str, *, balls: int = 6, known_scatter: bool = False) -> dict[str, Any]:
    """Return an invented bench whose uncertainty is mostly shared, mostly scatter, or both."""
    distance, time, ball = PARTS[kind]
    sheet: dict[str, Any] = {
        "site": {"gravity": "9.8123(1) m/s2"},
        "timer": {"clock": {"per_drop": {"value": 9.7 * time, "unit": "s"}}},
        "tube": {
            "tube": {
                "bore": "60.00(2) mm",
                "distance": {"value": 200.0, "unit": "mm", "u": 200.0 * distance},
            }
        },
        "ball": {
            # viscosity goes with the square of the diameter
            f"ball {i}": {
                "diameter": {"value": 2.5, "unit": "mm", "u": 2.5 * ball / 2},
                "density": "7700 kg/m3",
            }
            for i in range(1, balls + 1)
        },
        "liquid": {"oil": {"density": "970.0(2) kg/m3"}},
        "methods": {"model_uncertainty": "0.05 %"},
    }
    if known_scatter:
        sheet["scatter"] = {"relative": {"value": time, "unit": "1"}, "dof": 40}
    return sheet


def _reduced(
    kind: str, balls: int, drops: int, known_scatter: bool, sets: int, seed: int
) -> tuple[SetColumns, Timings]:
    sheet = pf.read_bench(bench(kind, balls=balls, known_scatter=known_scatter))
    of_balls = [f"ball {1 + place % balls}" for place in range(balls * drops)]
    made = simulate_sets(
        sheet, viscosity=VISCOSITY, sets=sets, drops=balls * drops, balls=of_balls, seed=seed
    )
    timings = pf.read_timings(made.table(), sheet)
    return reduce_numbers(timings, sheet), timings


def study(*, sets: int, seed: int, known: Sequence[bool] = (False, True)) -> Iterator[Stratum]:
    """Simulate and reduce run sets of every stratum; linear bounds."""
    for kind in KINDS:
        for known_scatter in known:
            for balls in BALLS:
                for drops in DROPS:
                    reduced, _ = _reduced(kind, balls, drops, known_scatter, sets, seed)
                    output = reduced.outputs.of("viscosity")
                    inside = (output.low <= VISCOSITY) & (output.high >= VISCOSITY)
                    oracle = 1.96 * np.std(output.value, ddof=1)
                    u, dof = reduced.scatter.u, reduced.scatter.dof
                    rest = np.maximum(output.u**2 - u**2, 0)
                    t = coverage_factor(dof=dof, probability=0.95)
                    student = np.sqrt((t * u) ** 2 + 1.96**2 * rest)
                    yield Stratum(
                        kind,
                        known_scatter,
                        balls,
                        drops,
                        float(inside.mean()),
                        float(output.expanded.mean() / oracle),
                        float(output.expanded.mean() / student.mean()),
                    )


def study_drawn(
    *, sets: int, draws: int, seed: int, shapes: Sequence[tuple[int, int]]
) -> Iterator[Stratum]:
    """Do the same with Monte Carlo, and count the bounds that are quoted."""
    for kind in KINDS:
        for balls, drops in shapes:
            reduced, _ = _reduced(kind, balls, drops, False, sets, seed)
            output = reduced.outputs.of("viscosity")
            used = np.arange(sets * balls * drops).reshape(sets, -1)
            low, high = output.low.copy(), output.high.copy()
            for place in range(sets):
                drawn = draw_run_set(reduced, place, used[place], draws=draws, seed=seed + place)
                if drawn.replaces("viscosity"):
                    found = drawn.output("viscosity")
                    low[place], high[place] = found.low, found.high
            oracle = 1.96 * np.std(output.value, ddof=1)
            yield Stratum(
                kind,
                False,
                balls,
                drops,
                float(((low <= VISCOSITY) & (high >= VISCOSITY)).mean()),
                float((high - low).mean() / 2 / oracle),
                float((high - low).mean() / 2 / output.expanded.mean()),
            )


def ratio_coverage(
    kind: str, *, balls: int, drops: int, pairs: int, seed: int, same_balls: bool = True
) -> tuple[float, float]:
    """Coverage of the ratio of two run sets on one bench, and its width over the oracle's."""
    every = balls if same_balls else 2 * balls
    sheet = pf.read_bench(bench(kind, balls=every))
    tables = []
    for run_set in ("A", "B"):
        first = 0 if same_balls or run_set == "A" else balls
        of_balls = [f"ball {1 + first + place % balls}" for place in range(balls * drops)]
        made = simulate_sets(
            sheet, viscosity=VISCOSITY, sets=pairs, run_set=run_set, drops=balls * drops,
            balls=of_balls, seed=seed, bench_seed=seed + 1,
        )  # fmt: skip
        tables.append(made.table())
    timings = pd.concat(tables, ignore_index=True)
    outputs = reduce_numbers(pf.read_timings(timings, sheet), sheet).outputs
    first, second = outputs.of("viscosity").value.reshape(2, pairs)
    ratio = first / second
    half = np.empty(pairs)
    for pair in range(pairs):
        weights = np.array([1 / second[pair], -ratio[pair] / second[pair]])
        u, dof = outputs.combination([pair, pairs + pair], weights)
        half[pair] = u * float(coverage_factor(dof=dof, probability=0.95))
    oracle = 1.96 * np.std(ratio, ddof=1)
    return float((np.abs(ratio - 1) <= half).mean()), float(half.mean() / oracle)


def _table(strata: Sequence[Stratum], value: str) -> Iterator[str]:
    yield "| balls | " + " | ".join(f"{drops} drops each" for drops in DROPS) + " |"
    yield "|---|" + "---|" * len(DROPS)
    for balls in BALLS:
        row = [getattr(one, value) for one in strata if one.balls == balls]
        shown = [f"{100 * x:.1f} %" if value == "coverage" else f"{x:.2f}" for x in row]
        yield f"| {balls} | " + " | ".join(shown) + " |"


def main(arguments: Sequence[str] | None = None) -> int:
    """Print the tables of the study."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0] if __doc__ else None)
    parser.add_argument("--sets", type=int, default=10_000, help="run sets of each stratum")
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args(arguments)
    strata = list(study(sets=options.sets, seed=options.seed))
    write = sys.stdout.write
    for kind in KINDS:
        for known in (False, True):
            part = [one for one in strata if (one.kind, one.known_scatter) == (kind, known)]
            for value in ("coverage", "width"):
                beside = ", [scatter] given" if known else ""
                write(f"\n{kind}{beside}: {value}\n\n" + "\n".join(_table(part, value)) + "\n")
    overall = np.mean([one.coverage for one in strata])
    worst = min(strata, key=lambda one: one.coverage)
    write(f"\nOverall {100 * overall:.1f} %, worst {worst}\n")
    for same in (True, False):
        for kind in KINDS:
            covered, width = ratio_coverage(
                kind, balls=4, drops=2, pairs=max(options.sets // 10, 50), seed=options.seed,
                same_balls=same,
            )  # fmt: skip
            write(
                f"ratio, {kind}, {'same' if same else 'other'} balls: {covered:.3f} {width:.2f}\n"
            )
    return 0


if __name__ == "__main__":
    sys.exit(main())
