"""The forward fall and the inverse are one law: invented benches with ends, run-in and inertia."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.errors import PhysicsRangeError

G, LIQUID = 9.8123, 970.0


def invented(rng: np.random.Generator) -> dict[str, float]:
    """Return one bench in millimetres, kg/m3 and Pa.s; all of it is drawn at random."""
    bore = rng.uniform(15.0, 80.0)
    radius = bore / 2
    ratio = np.exp(rng.uniform(np.log(0.012), np.log(0.39)))
    surface = radius * rng.uniform(0.9, 4.0) + ratio * radius
    return {
        "bore": bore,
        "diameter": ratio * bore,
        "density": LIQUID * rng.uniform(1.15, 8.5),
        "first": rng.uniform(20.0, 120.0),
        "second": rng.uniform(20.0, 120.0),
        "surface_above": surface,
        "bottom_below": ratio * radius + radius * rng.uniform(0.05, 1.5),
        "release_above": rng.uniform(0.0, 0.8) * (surface - ratio * radius),
        "viscosity": np.exp(rng.uniform(np.log(0.02), np.log(20.0))),
    }


def fall(one: dict[str, float], surface: str) -> float:
    """Return the time from the first to the last of three marks, summed over the intervals."""
    times = pf.physics.fall_time(
        viscosity=one["viscosity"],
        ball_diameter=1e-3 * one["diameter"],
        ball_density=one["density"],
        liquid_density=LIQUID,
        tube_bore=1e-3 * one["bore"],
        marks=1e-3 * np.cumsum([0.0, one["first"], one["second"]]),
        surface_above=1e-3 * one["surface_above"],
        bottom_below=1e-3 * one["bottom_below"],
        release_above=1e-3 * one["release_above"],
        gravity=G,
        surface=surface,
    )
    return float(times.sum())


def reduced(one: dict[str, float], surface: str, time: float):
    def mm(value: float) -> str:
        return f"{float(value)!r} mm"

    bench = {
        "site": {"gravity": f"{G} m/s2"},
        "tube": {
            "A": {
                "bore": mm(one["bore"]),
                "marks": [mm(0.0), mm(one["first"]), mm(one["first"] + one["second"])],
                "surface": surface,
                **{key: mm(one[key]) for key in ("surface_above", "bottom_below", "release_above")},
            }
        },
        "ball": {
            "X": {"diameter": mm(one["diameter"]), "density": f"{float(one['density'])!r} kg/m3"}
        },
        "liquid": {"oil": {"density": f"{LIQUID} kg/m3"}},
    }
    report = pf.reduce(pd.DataFrame({"ball": ["X"], "time [s]": [time]}), bench, draws=0)
    return report[report.names[0]].result


@pytest.mark.parametrize("surface", ["free", "lid"])
def test_forward_and_inverse_agree_on_invented_benches(surface):
    rng = np.random.default_rng(20260302)
    compared, felt = 0, {"ends": 0, "run-in": 0}
    numbers = []
    for _ in range(60):
        one = invented(rng)
        try:
            time = fall(one, surface)
        except PhysicsRangeError:
            continue  # faster than the start's table; refused, as it should be
        result = reduced(one, surface, time)
        assert result.viscosity.value == pytest.approx(one["viscosity"], rel=1e-9), one
        for correction in result.corrections:
            if correction.name in felt:
                felt[correction.name] += abs(correction.factor - 1) > 1e-3
        numbers.append(result.reynolds)
        compared += 1
    assert compared >= 30
    assert felt["ends"] >= 8
    assert felt["run-in"] >= 5
    assert min(numbers) < 0.01
    assert max(numbers) > 10


def test_a_drop_without_a_solution_leaves_the_others_alone():
    bench = {
        "tube": {"A": {"bore": "50 mm", "distance": "200 mm"}},
        "ball": {
            "X": {"diameter": "6 mm", "density": "2500 kg/m3"},
            "light": {"diameter": "6 mm", "density": "900 kg/m3"},
        },
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"ends": "none"},
    }
    sound = pd.DataFrame({"set": "A", "ball": "X", "time [s]": [0.9, 1.2, 3.0]})
    floating = pd.DataFrame({"set": "B", "ball": "light", "time [s]": [3.0]})
    alone = pf.reduce(sound, bench)["A"].result
    together = pf.reduce(pd.concat([sound, floating]), bench)["A"].result
    assert max(drop.reynolds for drop in alone.drops) > 20
    assert [drop.viscosity for drop in together.drops] == [drop.viscosity for drop in alone.drops]
