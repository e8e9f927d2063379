"""Beyond a table: a named law with its own error, or a refusal; never a number in silence."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.errors import PhysicsRangeError
from plumbfall.physics import (
    end_excess,
    fall_time,
    run_in_delay,
    run_in_delay_and_slope,
    terminal_speed,
    tube_drag_factor,
    wall_factor,
)
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.exact import creeping_wall_factor, off_axis_coefficient
from plumbfall.physics.exact_ends import end_excess_table

STEEL = {"ball_diameter": 2e-3, "ball_density": 7700.0, "liquid_density": 970.0, "gravity": 9.81}
MARKS = {"marks": [0.0, 0.1], "tube_bore": 0.05}
START = {
    "depth": 0.01,
    "ball_diameter": 2e-3,
    "tube_bore": 0.05,
    "fall_speed": 0.01,
    "liquid_density": 970.0,
    "viscosity": 1.0,
    "ball_density": 7700.0,
}


@pytest.mark.parametrize(
    ("function", "given", "names"),
    [
        (wall_factor, {"diameter_ratio": 0.951}, "diameter ratio 0.951 is beyond 0.95"),
        (tube_drag_factor, {"diameter_ratio": 0.81, "reynolds": 1.0}, "0.81 is beyond 0.8"),
        (tube_drag_factor, {"diameter_ratio": 0.1, "reynolds": 101.0}, "101 is beyond 100"),
        (end_excess, {"diameter_ratio": 0.009, "distance": 0.5}, "0.01 to 0.8"),
        (end_excess, {"diameter_ratio": 0.81, "distance": 1.5}, "0.01 to 0.8"),
        (end_excess, {"diameter_ratio": 0.1, "distance": 0.1005}, "0.01 ball radii"),
        (end_excess, {"diameter_ratio": 0.1, "distance": np.nan}, "outside"),
        (fall_time, {**STEEL, **MARKS, "viscosity": 1e-3}, "Reynolds number above 100"),
        (fall_time, {**STEEL, **MARKS, "viscosity": 1.0, "tube_bore": 2.4e-3}, "beyond 0.8"),
        (fall_time, {**STEEL, **MARKS, "viscosity": 1.0, "bottom_below": 1.001e-3}, "not known"),
        (
            fall_time,
            {**STEEL, **MARKS, "viscosity": 1.0, "tube_bore": 4e-3, "release_above": 1e-3},
            "run-in is known for diameter ratios 0.01 to 0.4",
        ),
        (
            terminal_speed,
            {"viscosity": 1e-3, "weight": 2.8e-4, "ball_diameter": 2e-3, "liquid_density": 970.0,
             "tube_bore": 0.05},
            "Reynolds number above 100",
        ),
    ],
)  # fmt: skip
def test_public_functions_refuse_with_the_limit(function, given, names):
    with pytest.raises(PhysicsRangeError, match=names):
        function(**given)


@pytest.mark.parametrize("function", [run_in_delay, run_in_delay_and_slope])
@pytest.mark.parametrize(
    "beyond",
    [{"tube_bore": 4.9e-3}, {"tube_bore": 0.21}, {"fall_speed": 16.0}, {"ball_density": 1060.0},
     {"ball_density": 14600.0}],
)  # fmt: skip
def test_starts_beyond_the_table_are_not_numbers(function, beyond):
    assert np.isfinite(function(**START)).all()
    assert np.isnan(function(**{**START, **beyond})).all()


def test_look_ups_beyond_their_limits_are_not_numbers():
    assert np.isnan(creeping_wall_factor(np.array([-1e-9, 0.9501]))).all()
    assert np.isnan(off_axis_coefficient(np.array([-1e-9, 0.9001]))).all()
    assert np.isnan(end_excess_table(np.array([0.0099, 0.801]), 0.9, "solid")).all()
    top = np.log(100.0) + 1e-9
    assert np.isnan(DragLaw().at(0.1).expand(top)).all()


# --- the same through a reduction ---------------------------------------------------------------


def reduced(time: float, ball: dict | None = None, **tube: str):
    bench = {
        "site": {"gravity": "9.81 m/s2"},
        "tube": {
            "A": {
                "bore": "50 mm",
                "marks": ["0 mm", "100 mm"],
                "surface_above": "80 mm",
                "bottom_below": "80 mm",
                "release_above": "70 mm",
                **tube,
            }
        },
        "ball": {"X": {"diameter": "2 mm", "density": "7700 kg/m3", **(ball or {})}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
    }
    report = pf.reduce(pd.DataFrame({"ball": ["X"], "time [s]": [time]}), bench, draws=0)
    return report[report.names[0]].result


def finding(result, code: str):
    (found,) = (one for one in result.findings if one.code == code)
    return found


@pytest.mark.parametrize(
    ("time", "ball", "code"),
    [
        (10.0, {"diameter": "40.1 mm"}, "diameter-ratio-high"),
        (0.2, {}, "reynolds-high"),
        (0.01, {}, "no-solution"),
    ],
)
def test_beyond_the_drag_law_there_is_no_viscosity(time, ball, code):
    result = reduced(time, ball)
    assert result.viscosity is None
    assert finding(result, code).severity == "error"


def test_just_within_the_drag_law_there_is_one():
    assert reduced(10.0, {"diameter": "39.9 mm"}).viscosity is not None


def test_a_mark_too_near_the_bottom_is_said_and_not_corrected():
    result = reduced(10.0, bottom_below="1.005 mm")
    ends = next(one for one in result.corrections if one.name == "ends")
    assert ends.factor == 1.0
    assert "by an unknown amount" in finding(result, "end-near").message


def test_a_release_too_near_the_wall_is_said_and_not_corrected():
    result = reduced(10.0, release_offset="23.5 mm")
    factors = {one.name: one.factor for one in result.corrections}
    assert factors.get("off-axis", 1.0) == 1.0
    assert finding(result, "off-axis-suspected").severity == "warning"
