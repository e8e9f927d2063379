"""The forward fall: against Stokes by hand, against a root-finder, and against the inverse."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq

import plumbfall as pf
from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.fall import fall_time, terminal_speed

STEEL = {"ball_diameter": 2e-3, "ball_density": 7700.0, "liquid_density": 970.0, "gravity": 9.81}


def test_a_small_ball_in_a_wide_tube_falls_as_stokes_says():
    """Stokes 1851 by hand: v = 2 (7700 - 970) 9.81 (1e-4)^2 / (9 x 1) = 1.46714e-4 m/s."""
    small = {**STEEL, "ball_diameter": 2e-4}
    (time,) = fall_time(viscosity=1.0, tube_bore=1e6, marks=[0, 0.1], **small)
    assert 0.1 / time == pytest.approx(1.46714e-4, rel=1e-5)


@pytest.mark.parametrize("viscosity", [0.05, 0.3, 2.0, 50.0])
def test_terminal_speed_is_that_of_a_root_finder(viscosity):
    weight = (7700 - 970) * 9.81 * np.pi * 8e-9 / 6

    def surplus(log_speed: float) -> float:
        speed = np.exp(log_speed)
        factor = pf.physics.tube_drag_factor(
            diameter_ratio=0.04, reynolds=970 * speed * 2e-3 / viscosity
        )
        return float(np.log(3 * np.pi * viscosity * 2e-3 * speed * factor / weight))

    high = np.log(0.999 * DragLaw().max_reynolds * viscosity / (970 * 2e-3))
    theirs = np.exp(brentq(surplus, np.log(1e-9), high, xtol=1e-14))
    ours = terminal_speed(
        viscosity=viscosity, weight=weight, ball_diameter=2e-3, liquid_density=970, tube_bore=0.05
    )
    assert ours == pytest.approx(theirs, rel=1e-12)


def test_ends_lengthen_the_time_by_the_integral_along_the_path():
    geometry = {"surface_above": 0.015, "bottom_below": 0.010}
    times = fall_time(viscosity=1.0, tube_bore=0.05, marks=[0, 0.1, 0.2], **geometry, **STEEL)
    plain = fall_time(viscosity=1.0, tube_bore=0.05, marks=[0, 0.1, 0.2], **STEEL)

    def excess(place: float) -> float:
        top = pf.physics.end_excess(
            diameter_ratio=0.04, distance=(place + 0.015) / 0.025, end="surface"
        )
        bottom = pf.physics.end_excess(diameter_ratio=0.04, distance=(0.21 - place) / 0.025)
        return float(top + bottom)

    for n, (a, b) in enumerate([(0.0, 0.1), (0.1, 0.2)]):
        added, _ = quad(excess, a, b, points=[0.03, 0.06, 0.14, 0.17], limit=300)
        assert times[n] / plain[n] - 1 == pytest.approx(added / 0.1, rel=1e-7)


@pytest.mark.parametrize(
    ("viscosity", "diameter"),
    [(0.03, 1.0), (0.06, 1.0), (0.5, 1.0), (0.5, 4.0), (5.0, 4.0), (5.0, 15.0), (100.0, 15.0)],
)
def test_forward_and_inverse_agree(viscosity, diameter):
    bench = {
        "site": {"gravity": "9.81 m/s2"},
        "tube": {
            "A": {"bore": "50 mm", "marks": ["0 mm", "150 mm"], "surface_above": "60 mm",
                  "bottom_below": "20 mm"}
        },
        "ball": {"X": {"diameter": f"{diameter} mm", "density": "2500 kg/m3"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
    }  # fmt: skip
    (time,) = fall_time(
        viscosity=viscosity,
        ball_diameter=diameter * 1e-3,
        ball_density=2500.0,
        liquid_density=970.0,
        tube_bore=0.05,
        marks=[0, 0.15],
        surface_above=0.06,
        bottom_below=0.02,
        gravity=9.81,
    )
    report = pf.reduce(pd.DataFrame({"ball": ["X"], "time [s]": [time]}), bench)
    assert report[report.names[0]].result.viscosity.value == pytest.approx(viscosity, rel=1e-9)


def test_arrays_broadcast_with_marks_last():
    times = fall_time(viscosity=[1.0, 2.0, 4.0], tube_bore=0.05, marks=[0, 0.1, 0.2], **STEEL)
    assert times.shape == (3, 2)
    assert np.all(np.diff(times[:, 0]) > 0)


def test_what_cannot_be_answered_is_refused():
    with pytest.raises(PhysicsRangeError, match="does not sink"):
        fall_time(viscosity=1.0, tube_bore=0.05, marks=[0, 0.1], **{**STEEL, "ball_density": 900.0})
    with pytest.raises(PhysicsRangeError, match="Reynolds number above"):
        fall_time(viscosity=1e-3, tube_bore=0.05, marks=[0, 0.1], **STEEL)
    with pytest.raises(InputError, match="marks are not a list of at least two increasing"):
        fall_time(viscosity=1.0, tube_bore=0.05, marks=[0.1, 0.0], **STEEL)
    with pytest.raises(InputError, match="no surface 'open'"):
        fall_time(viscosity=1.0, tube_bore=0.05, marks=[0, 0.1], surface="open", **STEEL)
