"""The inverse of the force balance: against the balance itself, and where there is no root."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import plumbfall as pf
from plumbfall.errors import PhysicsRangeError
from plumbfall.physics.drag import DragLaw
from support.benches import bench_dict, drops_table, exact_time

PLAIN = {
    "tube": {"A": {"bore": "50 mm", "distance": "200 mm"}},
    "ball": {"X": {"diameter": "2 mm", "density": "7700 kg/m3"}},
    "liquid": {"oil": {"density": "970 kg/m3"}},
    "site": {"gravity": "9.81 m/s2"},
}


def reduce_one(time: float, **ball: str) -> object:
    bench = {**PLAIN, "ball": {"X": {**PLAIN["ball"]["X"], **ball}}}
    return pf.reduce(drops_table({"X": [time]}), bench)["A"].result


@settings(max_examples=60, deadline=None)
@given(
    viscosity=st.floats(0.02, 500.0),
    diameter=st.floats(0.5, 20.0),
    density=st.floats(1100.0, 15000.0),
)
def test_a_ball_at_terminal_speed_gives_its_liquid_back(viscosity, diameter, density):
    """Weight less buoyancy equals drag (common practice, no source).

    The fall is found by bisection on the force balance alone, knowing nothing of the inverse.
    """
    try:
        time = exact_time(
            viscosity=viscosity,
            diameter=diameter * 1e-3,
            density=density,
            liquid_density=970.0,
            bore=0.05,
            distance=0.2,
            gravity=9.81,
        )
    except PhysicsRangeError:
        return  # beyond the drag law, where nothing is claimed
    result = reduce_one(time, diameter=f"{diameter!r} mm", density=f"{density!r} kg/m3")
    if result.viscosity is None:
        assert result.findings[0].code == "reynolds-high"
        return
    assert result.viscosity.value == pytest.approx(viscosity, rel=1e-9)


def test_viscosity_follows_from_the_time_between_two_marks():
    """Twice the time is twice the viscosity where inertia is nil (common practice, no source)."""
    slow, slower = reduce_one(100.0), reduce_one(200.0)
    assert slower.viscosity.value / slow.viscosity.value == pytest.approx(2.0, rel=1e-4)


def test_stokes_arithmetic_of_a_textbook_steel_ball():
    """Eta = 2 (rho_b - rho_f) g r^2 / (9 v), typed out by hand: Stokes 1851.

    A 2 mm ball of 7700 kg/m3 in 970 kg/m3, 0.2 m in 10 s:
    2 x 6730 x 9.81 x 1e-6 / (9 x 0.02) = 0.73357 Pa.s.
    """
    assert reduce_one(10.0).stokes_viscosity.value == pytest.approx(0.733570, rel=1e-6)


def test_a_floating_ball_is_refused():
    result = reduce_one(10.0, density="900 kg/m3")
    assert (result.status, result.viscosity) == ("invalid", None)
    assert [f.code for f in result.findings if f.severity == "error"] == ["ball-not-denser"]


def test_a_ball_too_fast_for_any_liquid_is_refused():
    # A 2 mm steel ball cannot pass 0.2 m in 0.03 s: its drag coefficient would be 0.004.
    result = reduce_one(0.03)
    assert (result.status, result.viscosity) == ("invalid", None)
    assert [f.code for f in result.findings if f.severity == "error"] == ["no-solution"]


def test_a_reynolds_number_beyond_the_law_is_refused_with_number_limit_and_law():
    result = reduce_one(0.4)
    assert (result.status, result.viscosity) == ("invalid", None)
    error = next(f for f in result.findings if f.severity == "error")
    assert error.code == "reynolds-high"
    limit = DragLaw().max_reynolds
    assert f"{limit:g}" in error.message
    assert "drag law" in error.message
    number = float(error.message.split("about ")[1].split()[0].rstrip(",;("))
    assert number > limit


def test_the_branch_of_low_reynolds_numbers_is_taken():
    result = reduce_one(1.5)
    assert result.reynolds < DragLaw().max_reynolds
    eta, speed = result.viscosity.value, 0.2 / 1.5
    factor = pf.physics.tube_drag_factor(diameter_ratio=0.04, reynolds=result.reynolds)
    drag = 3 * np.pi * eta * 2e-3 * speed * factor
    weight = (7700 - 970) * 9.81 * np.pi * 8e-9 / 6
    assert drag == pytest.approx(weight, rel=1e-12)


def test_a_diameter_ratio_beyond_the_law_is_refused():
    result = reduce_one(10.0, diameter="46 mm")
    assert (result.status, result.viscosity) == ("invalid", None)
    assert "diameter-ratio-high" in [f.code for f in result.findings]


def test_one_bad_set_leaves_the_others_alone():
    bench = bench_dict()
    good = drops_table({"B1": [15.05, 15.06], "B2": [9.8]}, run_set="good")
    bad = drops_table({"B1": [0.01]}, run_set="bad")
    import pandas as pd

    report = pf.reduce(pd.concat([good, bad]), bench)
    assert report["bad"].result.viscosity is None
    alone = pf.reduce(good, bench)
    assert report["good"].interval == alone["good"].interval
