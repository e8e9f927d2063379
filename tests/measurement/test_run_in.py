"""The run-in taken off the timing: against the forward fall, and where it is not known."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.flow.start_inertial import InertialStart
from plumbfall.measurement.run_in import start_beyond_table

BENCH = {
    "site": {"gravity": "9.81 m/s2"},
    "tube": {
        "A": {
            "bore": "40 mm",
            "marks": ["0 mm", "50 mm"],
            "surface_above": "100 mm",
            "bottom_below": "100 mm",
            "release_above": "10 mm",
        }
    },
    "ball": {"X": {"diameter": "3 mm", "density": "7800 kg/m3"}},
    "liquid": {"oil": {"density": "970 kg/m3"}},
}


def bench(**changes: object) -> dict:
    tube = {"A": {**BENCH["tube"]["A"], **changes.pop("tube", {})}}
    return {**BENCH, "tube": tube, **changes}


def reduced(time: float, **changes: object):
    report = pf.reduce(pd.DataFrame({"ball": ["X"], "time [s]": [time]}), bench(**changes))
    return report[report.names[0]].result


def fall(viscosity: float, release: float) -> float:
    (time,) = pf.physics.fall_time(
        viscosity=viscosity, ball_diameter=3e-3, ball_density=7800.0, liquid_density=970.0,
        tube_bore=0.04, marks=[0, 0.05], surface_above=0.1, bottom_below=0.1,
        release_above=release, gravity=9.81,
    )  # fmt: skip
    return float(time)


@pytest.mark.parametrize("release", [0.0, 0.002, 0.010, 0.050])
@pytest.mark.parametrize("viscosity", [0.08, 0.15, 1.0])
def test_forward_and_inverse_agree_with_a_run_in(viscosity, release):
    result = reduced(fall(viscosity, release), tube={"release_above": f"{1000 * release} mm"})
    assert result.viscosity.value == pytest.approx(viscosity, rel=1e-9)


def test_the_bias_is_that_of_the_formula_book():
    """A 50 mm timing, steel of 3 mm in 0.1 Pa.s at ratio .075, 10 mm below the release: 1.04 %.

    The project's formula book, section 5, by an independent Navier-Stokes start; its liquid's
    density is not printed; with 1200 kg/m3 the Reynolds number is 7.1 where it has 6.8. Stated
    error 15 %.
    """
    liquid = {"liquid": {"oil": {"density": "1200 kg/m3"}}}
    (time,) = pf.physics.fall_time(
        viscosity=0.1, ball_diameter=3e-3, ball_density=7800.0, liquid_density=1200.0,
        tube_bore=0.04, marks=[0, 0.05], release_above=0.010, gravity=9.81,
    )  # fmt: skip
    result = reduced(float(time), **liquid)
    run_in = next(c.factor for c in result.corrections if c.name == "run-in")
    assert result.reynolds == pytest.approx(6.8, abs=0.3)
    assert run_in - 1 == pytest.approx(0.0104, rel=0.15)


def test_its_own_error_is_in_the_bounds():
    short = reduced(fall(0.1, 0.005), tube={"release_above": "5 mm"})
    far = reduced(fall(0.1, 0.080), tube={"release_above": "80 mm"})
    model = [
        next(line for line in r.budget if line.input == "methods.model_uncertainty").u
        for r in (short, far)
    ]
    run_in = next(c.factor for c in short.corrections if c.name == "run-in") - 1
    assert model[0] > 0.15 * run_in / 3**0.5
    assert model[1] < 4e-4


def test_no_run_in_is_taken_off_where_none_is_wanted_or_none_is_given():
    time = fall(0.1, 0.005)
    none = reduced(time, tube={"release_above": "5 mm"}, methods={"run_in": "none"})
    blank = reduced(time, tube={"release_above": None})
    assert none.viscosity.value == blank.viscosity.value > 0.1
    assert "geometry-unknown" in [f.code for f in blank.findings]


def test_a_start_beyond_the_table_is_said_and_not_corrected():
    # the ball fills half the bore, and is let go close above the first mark
    wide = {"ball": {"X": {"diameter": "20 mm", "density": "1200 kg/m3"}}}
    result = reduced(0.6, tube={"release_above": "2 mm"}, **wide)
    run_in = next(c.factor for c in result.corrections if c.name == "run-in")
    (finding,) = (f for f in result.findings if f.code == "run-in-short")
    assert run_in == 1.0
    assert "is not known here" in finding.message


def test_beyond_the_table_the_bounds_hold_what_is_left_in():
    # Reynolds number near 50, let go 12 and 50 ball diameters above the first mark
    near, far = (
        reduced(0.12, tube={"release_above": f"{y} mm", "surface_above": "400 mm"})
        for y in (36, 150)
    )
    assert near.reynolds == far.reynolds > 31
    (finding,) = (f for f in near.findings if f.code == "run-in-short")
    assert "only the bounds allow for" in finding.message
    assert finding.effect > 0.01
    assert not {"run-in-short", "reynolds-high"} & {f.code for f in far.findings}
    assert "reynolds-high" not in [f.code for f in near.findings]  # the drag itself is well known
    short, none = (
        next(line for line in r.budget if line.input == "methods.model_uncertainty").u
        for r in (near, far)
    )
    assert short > finding.effect / 2 > 4e-4 > none


@pytest.mark.parametrize(
    ("ratio", "reynolds", "density_ratio"),
    [(0.1, 100.0, 8.0), (0.05, 60.0, 2.0), (0.45, 60.0, 8.0), (0.1, 20.0, 20.0)],
)
def test_most_a_start_beyond_the_table_may_come_to(ratio, reynolds, density_ratio):
    run = InertialStart(diameter_ratio=ratio, reynolds=reynolds, degree=3).run(
        density_ratio=density_ratio, missing=1e-4
    )
    fallen = np.append(reynolds / 2 * (run.time - run.lost), 1e9)
    first, one = np.array([2.0, 10.0, 20.0, 30.0]), np.ones(4)  # ball radii
    computed = np.diff(
        np.interp([first, first + 40.0], fallen, np.append(run.lost, run.lost_in_all)), axis=0
    )[0]
    ball = {
        "ball_diameter": 2 * one,
        "tube_bore": 2 * one / ratio,
        "fall_speed": reynolds / 2 * one,
        "liquid_density": one,
        "ball_density": density_ratio * one,
    }
    most = start_beyond_table(first, first + 40.0, ball, reynolds * one)
    assert (most > computed).all()
    assert (most < 2.5 * computed + 1e-3 * 40 / (reynolds / 2)).all()


@pytest.mark.parametrize("release", ["0 mm", "0.0(5) mm"])
def test_a_release_at_the_first_mark_has_an_uncertainty(release):
    """The delay's slope is infinite there; the budget must not be lost with it."""
    result = reduced(fall(0.1, 0.0), tube={"release_above": release})
    assert 0 < result.viscosity.u < result.viscosity.value
    assert sum(line.share for line in result.budget) == pytest.approx(1.0)
    named = "tube.A.release_above" in [line.input for line in result.budget]
    assert named == (release != "0 mm")
