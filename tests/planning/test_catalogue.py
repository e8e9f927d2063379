"""The search for the best ball: a hand-worked optimum, and sizes and grades from the standard."""

from __future__ import annotations

import json

import pytest

import plumbfall as pf
from plumbfall.cli.program import main
from plumbfall.errors import InputError
from plumbfall.planning.catalogue import GRADES, SIZES
from support.benches import bench_dict


@pytest.mark.parametrize(
    ("grade", "lot_um", "gauge_um"),
    [("G5", 0.25, 5), ("G10", 0.5, 9), ("G28", 1.4, 12), ("G40", 2, 16), ("G100", 5, 40)],
)
def test_grades_of_iso_3290_1(grade, lot_um, gauge_um):
    # ISO 3290-1: variation of lot diameter and range of preferred gauges, as four public
    # reproductions of its tables agree
    assert GRADES[grade].lot == pytest.approx(1e-6 * lot_um)
    assert GRADES[grade].gauge == pytest.approx(1e-6 * gauge_um)


def test_the_best_diameter_is_where_gauge_and_clock_balance():
    # (2 u_d / d)^2 + (u_b / t)^2 with t = 18 eta L / ((rho_b - rho_f) g d^2) by Stokes' law is
    # least at d^6 = 2 u_d^2 C^2 / u_b^2, C = t d^2: worked by hand for a wide tube
    bench = {
        "site": {"gravity": "9.80665 m/s2"},
        "timer": {"T": {"per_drop": "0 s", "bias": "0.0(1) s", "rate": "0 ppm"}},
        "gauge": {"G": {"correction": "0(20) um"}},
        "tube": {"A": {"bore": "1 m", "distance": "200 mm"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"model_uncertainty": "0.001 %"},
    }
    planned = pf.plan(bench, viscosity=10.0, target="5 %", balls="catalogue")
    (ideal,) = planned.plan.ideal
    constant = 18 * 10.0 * 0.2 / ((ideal.density - 970) * 9.80665)
    best = (2 * 20e-6**2 * constant**2 / 0.1**2) ** (1 / 6)
    assert ideal.clean
    assert ideal.diameter == pytest.approx(best, rel=0.04)


def test_no_ball_that_is_sold_does_better_than_the_ideal_one():
    planned = pf.plan(bench_dict(), viscosity=[0.5, 2.0], target="0.5 %", balls="catalogue")
    (ideal,) = planned.plan.ideal
    best = planned.combinations[:3]
    assert {one.ball for one in best} == {best[0].ball}
    assert all(one.suitable for one in best)
    worst = max(one.relative_expanded_uncertainty for one in best)
    assert ideal.relative_expanded_uncertainty <= worst * 1.001
    assert worst < 1.2 * ideal.relative_expanded_uncertainty
    diameters = {round(float(one.ball.split()[-2]), 3) for one in planned.combinations}
    assert diameters == set(SIZES)


def test_the_command_looks_in_the_catalogue(tmp_path, capsys):
    sheet = tmp_path / "bench.toml"
    sheet.write_text(
        'site.gravity = "9.81 m/s2"\n'
        'timer.T = { kind = "stopwatch" }\n'
        'tube.A = { bore = "50.00(2) mm", distance = "200.00(5) mm", release_above = "70 mm" }\n'
        'liquid.oil = { density = "970.2(2) kg/m3" }\n',
        encoding="utf-8",
    )
    arguments = ["plan", "--bench", str(sheet), "--viscosity", "1 Pa.s", "--target", "1 %",
                 "--balls", "catalogue", "--grade", "G20"]  # fmt: skip
    assert main(arguments) == 0
    text = capsys.readouterr().out
    assert "would do best in tube A" in text
    assert "grade G20" in text
    assert max(map(len, text.splitlines())) <= 80
    assert main([*arguments, "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["ideal"][0]["diameter_m"] > 0
    assert document["grade"] == "G20"
    with pytest.raises(InputError, match="no grade 'G11'"):
        pf.plan(str(sheet), viscosity=1.0, balls="catalogue", grade="G11")
