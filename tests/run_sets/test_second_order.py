"""Second-order terms of run sets: small on a good bench, on a poor one what draws say."""

from __future__ import annotations

import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}


def test_a_good_bench_is_linear():
    report = pf.reduce(drops_table(TIMES), bench_dict(), draws=0)
    terms = report["A"].result.second_order
    largest = [line.input for line in report["A"].result.budget[:3]]
    assert {name for name in largest if not name.endswith("scatter")} <= set(terms.inputs)
    assert abs(terms.change_of_u) < 1e-4
    told = report.to_dict()["run_sets"][0]["linear"]["second_order"]
    assert told["change_of_u"] == terms.change_of_u


def test_a_tilt_is_not_counted_twice():
    bench = bench_dict(tube__A__tilt="0(5) deg")
    terms = pf.reduce(drops_table(TIMES), bench, draws=0)["A"].result.second_order
    assert "tube.A.tilt" not in terms.inputs


def test_a_distance_judged_by_eye_by_hand_and_by_draws():
    """Viscosity goes as 1/distance: of relative u = 0.1 the terms are f''^2/2 + f' f''' =
    2 + 6 = 8 u^4, so u grows by sqrt(1.08) - 1, and the mean by u^2."""
    bench = {
        "site": {"gravity": "9.81 m/s2"},
        "tube": {"A": {"bore": "50 mm", "distance": "20.0(20) mm"}},
        "ball": {"x": {"diameter": "2 mm", "density": "7700 kg/m3"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"drag": "product faxen stokes", "ends": "none", "run_in": "none",
                    "model_uncertainty": "0 %"},
    }  # fmt: skip
    report = pf.reduce(drops_table({"x": [10.0]}), bench, draws=200_000)
    result = report["A"].result
    terms = result.second_order
    # differences over two u see some of the next order too
    assert terms.change_of_u == pytest.approx(1.08**0.5 - 1, rel=0.2)
    assert terms.shift / result.linear.value == pytest.approx(0.01, rel=0.2)
    assert result.monte_carlo.standard_uncertainty / result.linear.u == pytest.approx(
        1 + terms.change_of_u, abs=0.02
    )


def test_an_invalid_set_has_none():
    bench = bench_dict()
    bench["ball"]["B1"] = {"diameter": "2 mm", "density": "900 kg/m3"}
    report = pf.reduce(drops_table({"B1": [15.0]}), bench, draws=0)
    assert report["A"].result.second_order is None
    assert report.to_dict()["run_sets"][0]["linear"] is None
