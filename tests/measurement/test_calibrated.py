"""Drops in calibrated tubes: viscosity = K (ball density - liquid density) time.

The equation is that of the inclined-tube method (ISO 12058-1, from memory); the sensitivities it
has to have are worked out by hand in METROLOGY's way: dln(viscosity)/dln(ball density) is
ball density over the difference of the densities.
"""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.reduction.drops import reduce_drops
from support.perturbed import perturbed

INCLINED = {
    "timer": {"T1": {"per_drop": "0.05 s", "bias": "0.10(3) s", "rate": "40(20) ppm"}},
    "thermometer": {"P1": {"correction": "0.02(3) K", "per_reading": "0.01 K"}},
    "gauge": {"G1": {"correction": "0.2(5) um"}},
    "balance": {"W1": {"correction": "0.02(5) mg"}},
    "tube": {"incl": {"kind": "calibrated", "constant": ["KA", "KB"]}},
    "ball": {
        "A": {"diameter": "15.600(1) mm", "density": "2.2300(8) g/cm3", "expansion": "3.3(2)e-6/K"},
        "B": {"diameter": "15.000(1) mm", "mass": "13.616(1) g", "gauge": "G1", "balance": "W1",
              "expansion": "10.4(4)e-6 /K"},
    },
    "liquid": {
        "oil": {
            "density": "870.0(3) kg/m3",
            "density_temperature": "20 degC",
            "expansion": "7.0(3)e-4 /K",
            "viscosity_slope": "-5.0(3) %/K",
        }
    },
    "constant": {
        "KA": {"ball": "A", "value": "0.0070(1) mPa.s.cm3/(g.s)"},
        "KB": {"ball": "B", "value": { "value": 1.2e-7, "unit": "m2/s2", "u": 1e-10 }},
    },
}  # fmt: skip

DROPS = pd.DataFrame(
    {
        "set": ["one"] * 3 + ["two"] * 4,
        "ball": ["A"] * 3 + ["B"] * 2 + ["A"] * 2,
        "time [s]": [61.2, 61.4, 61.1, 44.1, 44.3, 700.0, 701.0],
        "temperature [degC]": [25.0, 25.3, 24.9, 25.1, 25.0, 25.2, 24.8],
    }
)


def bench(**sections) -> dict:
    return {**INCLINED, **sections}


def reduced(table=DROPS, sheet=None):
    read = pf.read_bench(sheet or INCLINED)
    return reduce_drops(pf.read_timings(table, read), read)


def test_the_viscosity_is_the_constant_times_the_densities_apart_times_the_time():
    plain = bench(
        timer={"T1": {"per_drop": "0.05 s"}},
        thermometer={},
        liquid={"oil": {"density": "870 kg/m3"}},
        ball={"A": {"diameter": "15.6 mm", "density": "2230 kg/m3"}},
        constant={"K": {"value": "0.007 mPa.s.cm3/(g.s)"}},
        tube={"incl": {"kind": "calibrated", "constant": "K"}},
    )
    table = pd.DataFrame({"time [s]": [60.0], "temperature [degC]": [20.0]})
    result = pf.reduce(table, plain).to_dict()["run_sets"][0]
    # 0.007 mPa.s.cm3/(g.s) x 1.36 g/cm3 x 60 s, by hand
    assert result["viscosity"]["value"] == pytest.approx(0.5712e-3, rel=1e-12)
    for unknown in ("reynolds", "diameter_ratio", "shear_rate_1_s", "shear_stress_Pa"):
        assert result[unknown] is None
    assert result["stokes_viscosity"] is None
    assert result["corrections"] == []
    assert result["balls"][0]["reynolds"] is None
    codes = {finding["code"] for finding in result["findings"]}
    assert not codes & {"geometry-unknown", "default-gravity", "end-near", "reynolds-high"}


def test_every_sensitivity_agrees_with_differences():
    read = pf.read_bench(INCLINED)
    timings = pf.read_timings(DROPS, read)
    sets = reduce_drops(timings, read).sets
    at = sets.columns.set_temperature

    def viscosities(step: float, name: str) -> np.ndarray:
        again = reduce_drops(timings, perturbed(read, name, step)).sets
        slope = again.inputs.roles["slope"].value[0]
        return again.scatter.mean * np.exp(-slope * (again.columns.set_temperature - at))

    checked = 0
    for column, estimate in enumerate(sets.inputs.estimates):
        if estimate.name == "methods.model_uncertainty":
            assert not sets.jacobian.matrix[:, [column]].toarray().any()
            continue
        step = max(abs(estimate.value) * 1e-5, estimate.u * 1e-3)
        up, down = viscosities(step, estimate.name), viscosities(-step, estimate.name)
        analytic = np.zeros(2)
        for role, sums in sets.sums.first.items():
            here = sets.inputs.roles[role].entry == column
            np.add.at(analytic, sets.selection.cells.run_set[here], sums[here])
        differences = (up - down) / (2 * step)
        # a sensitivity of nothing, as that to a diameter beside a density, is rounding alone
        scale = np.abs(differences) + 1e-4 * sets.scatter.mean / max(abs(estimate.value), step)
        np.testing.assert_allclose(
            analytic / scale, differences / scale, rtol=2e-6, atol=2e-6, err_msg=estimate.name
        )
        checked += 1
    assert checked == 16


def test_the_density_of_the_ball_counts_by_its_part_of_the_densities_apart():
    """METROLOGY 3.5: the elasticity is 2230/(2230 - 866.5) for glass in this oil at 25 degC."""
    result = pf.reduce(DROPS, INCLINED)["one"].result
    line = next(line for line in result.budget if line.input == "ball.A.density")
    oil = 870.0 / (1 + 7e-4 * (result.temperature.value - 293.15))
    elasticity = line.sensitivity * 2230.0 / result.viscosity.value
    assert elasticity == pytest.approx(2230.0 / (2230.0 - oil), rel=1e-4)


def test_draws_agree_with_the_linear_bounds():
    sheet = bench(scatter={"relative": "0.2 %", "dof": 200})
    steady = DROPS.iloc[:5].assign(**{"temperature [degC]": 25.0})  # within the known scatter
    report = pf.reduce(steady, sheet, draws=100_000, seed=4)
    for run_set in report:
        drawn, linear = run_set.result.monte_carlo, run_set.result.linear
        error = 5 * math.sqrt(0.025 * 0.975) / 0.0584 / math.sqrt(100_000) * linear.u
        assert (drawn.low, drawn.high) == pytest.approx((linear.low, linear.high), abs=error)


def test_a_tube_with_geometry_and_a_calibrated_one_stand_side_by_side():
    sheet = bench(
        tube={
            **INCLINED["tube"],
            "wide": {"bore": "100.00(2) mm", "distance": "400.0(1) mm"},
        },
        set={"one": {"tube": "incl"}, "two": {"tube": "incl"}, "three": {"tube": "wide"}},
    )
    third = pd.DataFrame(
        {"set": ["three"] * 2, "ball": ["A"] * 2, "time [s]": [0.9, 0.91],
         "temperature [degC]": [25.0] * 2}
    )  # fmt: skip
    together = reduced(pd.concat([DROPS.iloc[:4], third, DROPS.iloc[4:]]), sheet)
    alone = reduced()
    for name in ("one", "two"):
        there, here = together.run_set(name), alone.run_set(name)
        assert there.viscosity.value == pytest.approx(here.viscosity.value, rel=1e-12)
        assert there.viscosity.u == pytest.approx(here.viscosity.u, rel=1e-12)
    wide = together.run_set("three")
    assert wide.reynolds > 0
    assert "tube.wide.bore" in {line.input for line in wide.budget}


def test_a_ball_that_floats_and_a_time_too_short_have_no_viscosity():
    heavy = bench(liquid={"oil": {"density": "2.25 g/cm3"}})
    assert pf.reduce(DROPS.iloc[:2], heavy)["one"].status == "invalid"
    slow = bench(timer={"T1": {"per_drop": "0.1 s", "bias": "70.0(1) s"}})
    codes = {finding.code for finding in pf.reduce(DROPS.iloc[:2], slow)["one"].result.findings}
    assert "no-solution" in codes


def says(table, sheet) -> str:
    with pytest.raises(pf.InputError) as error:
        pf.reduce(table, sheet)
    return str(error.value)


def test_what_a_constant_cannot_stand_for_is_refused():
    marks = pd.DataFrame(
        {"ball": ["A", "A"], "mark 1 [s]": [0.0, 0.0], "mark 2 [s]": [30.0, 30.1],
         "mark 3 [s]": [60.0, np.nan], "temperature [degC]": [25.0, 25.0]}
    )  # fmt: skip
    assert "not timed from the first to the last mark" in says(marks, INCLINED)
    mixed = bench(tube={**INCLINED["tube"], "wide": {"bore": "100 mm", "distance": "400 mm"}})
    table = DROPS.iloc[:2].assign(tube=["incl", "wide"])
    assert "tube of the other kind" in says(table, mixed)
    only_b = bench(tube={"incl": {"kind": "calibrated", "constant": "KB"}})
    text = says(DROPS.iloc[:2], only_b)
    assert "no constant for the calibrated tube 'incl' with ball 'A'" in text
    assert "plumbfall calibrate" in text
