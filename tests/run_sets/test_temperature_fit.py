"""The temperature slope fitted to the run sets: by hand, against GTC, and by simulation.

The benches and liquids are invented. Inertia and ends are left out, so that a fall time is the
viscosity times a constant of the bench.
"""

from __future__ import annotations

import copy
import json
import math
import pickle
from functools import cache
from typing import Any

import GTC
import numpy as np
import pandas as pd
import pytest

import plumbfall as pf

ZERO = 273.15
ANDRADE = (-20.3, 6050.0)
VOGEL = (-7.0, 1050.0, 150.0)
PLAIN: dict[str, Any] = {
    "bench": {"reference_temperature": "22 degC"},
    "site": {"gravity": "9.81 m/s2"},
    "tube": {"A": {"bore": "50 mm", "distance": "200 mm"}},
    "ball": {"x": {"lot": True, "diameter": "2 mm", "density": "7700 kg/m3"}},
    "thermometer": {"P": {"correction": "0 K"}},
    "liquid": {"oil": {"density": "970 kg/m3"}},
    "methods": {
        "drag": "product faxen stokes",
        "ends": "none",
        "run_in": "none",
        "model_uncertainty": "0 %",
    },
}


def bench(slope: str | None = "andrade", **changes: Any) -> dict[str, Any]:
    made = copy.deepcopy(PLAIN)
    if slope:
        made["methods"]["slope"] = slope
    for path, value in changes.items():
        *parents, last = path.split("__")
        place = made
        for name in parents:
            place = place.setdefault(name, {})
        place[last] = value
    return made


def andrade(celsius: float) -> float:
    return math.exp(ANDRADE[0] + ANDRADE[1] / (celsius + ZERO))


def vogel(celsius: float) -> float:
    return math.exp(VOGEL[0] + VOGEL[1] / (celsius + ZERO - VOGEL[2]))


@cache
def per_second() -> float:
    """Viscosity of a drop of one second."""
    table = pd.DataFrame([{"set": "s", "ball": "x", "time [s]": 10.0, "temperature [degC]": 25.0}])
    return pf.reduce(table, bench(None), draws=0)["s"].result.viscosity.value / 10.0


def drops(sets: dict[str, tuple[float, list[float]]]) -> pd.DataFrame:
    """Rows of sets, each a temperature and its drops' viscosities."""
    return pd.DataFrame(
        [
            {
                "set": name,
                "ball": "x",
                "time [s]": value / per_second(),
                "temperature [degC]": celsius,
            }
            for name, (celsius, values) in sets.items()
            for value in values
        ]
    )


def around(value: float, relative: float, n: int = 5) -> list[float]:
    """Values with exactly this relative standard deviation and mean."""
    shape = np.linspace(-1.0, 1.0, n)
    return list(value * (1 + relative * shape / shape.std(ddof=1)))


def test_two_sets_with_scatter_by_hand():
    """Two points fix Andrade's law; ln(viscosity) between them is a weighted mean of the two."""
    table = drops({"cold": (15.0, around(2.0, 0.01)), "warm": (30.0, around(0.7, 0.02))})
    report = pf.reduce(table, bench(), draws=0)
    x = [1 / (t + ZERO) for t in (15.0, 30.0, 22.0)]
    b = math.log(2.0 / 0.7) / (x[0] - x[1])
    cold = (x[2] - x[1]) / (x[0] - x[1])
    value = math.exp(cold * math.log(2.0) + (1 - cold) * math.log(0.7))
    u = value * math.hypot(cold * 0.01, (1 - cold) * 0.02) / math.sqrt(5)
    u_b = math.hypot(0.01, 0.02) / math.sqrt(5) / (x[0] - x[1])
    (fit,) = report.temperature_fits
    parameters = dict(fit.parameters)
    assert parameters["B"].value == pytest.approx(b, rel=1e-9)
    assert parameters["B"].u == pytest.approx(u_b, rel=1e-6)
    assert fit.dof == 0
    for measured in (
        fit.viscosity_at_reference,
        report["cold"].result.viscosity_at_reference,
        report["warm"].result.viscosity_at_reference,
    ):
        assert measured.value == pytest.approx(value, rel=1e-9)
        assert measured.u == pytest.approx(u, rel=1e-6)
    # Welch and Satterthwaite by hand: two parts of four degrees of freedom each
    parts = [(cold * 0.01) ** 4 / 4, ((1 - cold) * 0.02) ** 4 / 4]
    dof = math.hypot(cold * 0.01, (1 - cold) * 0.02) ** 4 / sum(parts)
    assert fit.viscosity_at_reference.effective_dof == pytest.approx(dof, rel=1e-6)


def test_a_thermometers_error_moves_the_whole_law():
    """By hand: an error d makes each ln(viscosity) wrong by -slope d; the law follows."""
    table = drops({"cold": (15.0, [2.0] * 5), "warm": (30.0, [0.7] * 5)})
    report = pf.reduce(table, bench(thermometer__P__correction="0.00(5) K"), draws=0)
    t = [15.0 + ZERO, 30.0 + ZERO, 22.0 + ZERO]
    b = math.log(2.0 / 0.7) / (1 / t[0] - 1 / t[1])
    cold = (1 / t[2] - 1 / t[1]) / (1 / t[0] - 1 / t[1])
    relative = 0.05 * (cold * b / t[0] ** 2 + (1 - cold) * b / t[1] ** 2)
    own = report["cold"].result.viscosity
    assert own.u / own.value == pytest.approx(0.05 * b / t[0] ** 2, rel=1e-6)
    at = report["cold"].result.viscosity_at_reference
    assert at.u / at.value == pytest.approx(relative, rel=1e-6)
    # one error for both, so that the two sets' own values are fully correlated
    assert report.correlation()[0, 1] == pytest.approx(1.0, abs=1e-9)


def test_drops_are_brought_to_their_sets_temperature_by_the_fitted_slope():
    """Drops 1 K apart that follow Andrade's law leave no scatter but the law's bend."""
    sets = {"a": 15.0, "b": 25.0, "c": 40.0}
    table = pd.concat(
        [
            drops({name: (celsius + off, [andrade(celsius + off)])})
            for name, celsius in sets.items()
            for off in (-0.5, 0.0, 0.5)
        ]
    )
    report = pf.reduce(table, bench(), draws=0)
    parameters = dict(report.temperature_fits[0].parameters)
    assert parameters["B"].value == pytest.approx(ANDRADE[1], rel=1e-4)
    for name, celsius in sets.items():
        # the bend over 0.5 K: half the second derivative of ln(viscosity), 2 B/T^3, some 1e-4
        assert report[name].result.viscosity.value == pytest.approx(andrade(celsius), rel=1e-4)
    unfitted = pf.reduce(table, bench(None), draws=0)
    scatter = {
        which: next(line.u for line in made["a"].result.budget if "scatter" in line.input)
        for which, made in (("with", report), ("without", unfitted))
    }
    assert scatter["with"] < scatter["without"] / 50


def test_vogels_law_is_found_again():
    sets = {f"s{t}": (float(t), around(vogel(t), 1e-5)) for t in (10, 20, 30, 45, 60)}
    report = pf.reduce(drops(sets), bench("vogel"), draws=0)
    (fit,) = report.temperature_fits
    values = [parameter.value for _, parameter in fit.parameters]
    # known to some tenths of a percent from scatter of 1e-5, as B and T0 nearly trade places
    assert values == pytest.approx(VOGEL, rel=2e-3)
    assert [name for name, _ in fit.parameters] == ["A", "B", "T0"]
    for name, temperature in zip(fit.sets, fit.temperatures, strict=True):
        slope = -VOGEL[1] / (temperature - VOGEL[2]) ** 2
        assert fit.slopes[fit.sets.index(name)] == pytest.approx(slope, rel=1e-3)
    at = report["s45"].result.viscosity_at_reference
    assert at.value == pytest.approx(vogel(22.0), rel=2e-5)


def whole_bench() -> dict[str, Any]:
    return bench(
        tube__A__distance="200.0(4) mm",
        liquid__oil__density="970(3) kg/m3",
        thermometer__P__correction="0.00(5) K",
        methods__model_uncertainty="0.1 %",
    )


def five_sets(seed: int = 0) -> pd.DataFrame:
    rng = np.random.default_rng(seed)
    return drops(
        {
            f"s{t}": (float(t), list(andrade(t) * np.exp(0.003 * rng.standard_normal(6))))
            for t in (15, 20, 25, 32, 40)
        }
    )


def test_values_at_the_reference_against_gtc():
    """GTC propagates the same sets' covariance through its own least squares, its own algebra."""
    report = pf.reduce(five_sets(), whole_bench(), draws=0)
    (fit,) = report.temperature_fits
    values = np.array([view.result.viscosity.value for view in report])
    covariance = report.covariance()
    errors = [GTC.ureal(0.0, 1.0) for _ in values]
    numbers = [
        float(value) + sum(float(part) * error for part, error in zip(row, errors, strict=True))
        for value, row in zip(values, np.linalg.cholesky(covariance), strict=True)
    ]
    logs = [GTC.log(number) for number in numbers]
    t = np.array(fit.temperatures)
    # weights: the sets' covariance with their scatter pooled, as the documents say
    own = np.array(
        [next(line.u for line in view.result.budget if "scatter" in line.input) for view in report]
    )
    pooled = np.diag(np.full(5, np.mean((own / values) ** 2)) - (own / values) ** 2)
    weight = np.linalg.inv(covariance / np.outer(values, values) + pooled)
    design = np.stack([np.ones(5), 1 / t], axis=1)
    estimator = np.linalg.inv(design.T @ weight @ design) @ design.T @ weight
    a, b = (
        sum(float(factor) * log for factor, log in zip(row, logs, strict=True)) for row in estimator
    )
    for (_, ours), theirs in zip(fit.parameters, (a, b), strict=True):
        assert ours.value == pytest.approx(GTC.value(theirs), rel=1e-8)
        assert ours.u == pytest.approx(GTC.uncertainty(theirs), rel=1e-6)
    reference = 22.0 + ZERO
    curve = GTC.exp(a + b / reference)
    assert fit.viscosity_at_reference.value == pytest.approx(GTC.value(curve), rel=1e-8)
    assert fit.viscosity_at_reference.u == pytest.approx(GTC.uncertainty(curve), rel=1e-6)
    at_reference = [
        GTC.exp(log + b * (1 / reference - 1 / temperature))
        for log, temperature in zip(logs, t, strict=True)
    ]
    for view, theirs in zip(report, at_reference, strict=True):
        ours = view.result.viscosity_at_reference
        assert ours.value == pytest.approx(GTC.value(theirs), rel=1e-8)
        assert ours.u == pytest.approx(GTC.uncertainty(theirs), rel=1e-6)
    together = report.covariance("viscosity_at_reference")
    for i in range(5):
        for j in range(i):
            theirs = GTC.get_covariance(at_reference[i], at_reference[j])
            assert together[i, j] == pytest.approx(theirs, rel=1e-6)


@pytest.mark.parametrize(
    ("law", "temperatures", "n_drops"),
    [("andrade", (15.0, 30.0), 5), ("andrade", (15.0, 20.0, 25.0, 32.0, 40.0), 3),
     ("vogel", (10.0, 20.0, 30.0, 45.0, 60.0), 6)],
)  # fmt: skip
def test_bounds_at_the_reference_cover(law, temperatures, n_drops):
    """95 % bounds of 200 liquids cover the truth as often as binomial chance allows."""
    rng = np.random.default_rng(11)
    liquids, u_t = 200, 0.03
    made = bench(law)
    made["thermometer"], made["liquid"], made["set"] = {}, {}, {}
    truth = andrade if law == "andrade" else vogel
    sets = {}
    for i in range(liquids):
        made["liquid"][f"L{i}"] = {"density": "970 kg/m3"}
        made["thermometer"][f"P{i}"] = {"correction": {"value": 0, "unit": "K", "u": u_t}}
        off = u_t * rng.standard_normal()
        for t in temperatures:
            name = f"{i} at {t}"
            made["set"][name] = {"liquid": f"L{i}", "thermometer": f"P{i}"}
            noise = np.exp(0.003 * rng.standard_normal(n_drops))
            sets[name] = (t, list(truth(t + off) * noise))
    report = pf.reduce(drops(sets), made, draws=0)
    true = truth(22.0)
    curve = [fit.viscosity_at_reference for fit in report.temperature_fits]
    covered = np.mean([at.low < true < at.high for at in curve])
    # two standard deviations of 200 trials are 3 %; with few drops the bounds are cautious
    assert 0.915 <= covered <= 0.995
    table = report.table()
    assert len(table) == liquids * len(temperatures)
    if curve[0].effective_dof and report.temperature_fits[0].dof:
        false = np.mean([fit.p_value < 0.05 for fit in report.temperature_fits])
        assert false <= 0.085


def test_too_few_temperatures_are_refused_with_a_remedy():
    table = drops({"a": (25.0, around(1.0, 0.01)), "b": (25.05, around(1.0, 0.01))})
    with pytest.raises(pf.InputError, match=r"at 2 temperatures at least: liquid oil has 1 "):
        pf.reduce(table, bench(), draws=0)
    table = drops({"a": (25.0, around(1.0, 0.01)), "b": (35.0, around(0.6, 0.01))})
    with pytest.raises(pf.InputError, match="at 3 temperatures at least"):
        pf.reduce(table, bench("vogel"), draws=0)


def test_at_one_temperature_a_slope_of_the_sheet_serves():
    """A check liquid measured alone on a bench whose other liquids are fitted."""
    table = drops({"a": (25.0, around(1.0, 0.01))})
    sloped = {"density": "970 kg/m3", "viscosity_slope": "-2.0(2) %/K"}
    report = pf.reduce(table, bench(liquid__oil=sloped), draws=0)
    assert report.temperature_fits == ()
    ratio = report["a"].viscosity_at_reference / report["a"].viscosity
    assert ratio.n == pytest.approx(math.exp(0.02 * 3), rel=1e-9)
    assert ratio.s / ratio.n == pytest.approx(0.002 * 3, rel=1e-9)


def test_in_a_calibrated_tube_the_slope_is_fitted_too():
    """By hand: viscosity is K (ball less liquid) t, so ratios of times are ratios of viscosity."""
    sheet = {
        "bench": {"reference_temperature": "22 degC"},
        "thermometer": {"P": {"correction": "0.00(5) K"}},
        "tube": {"A": {"kind": "calibrated", "constant": "K"}},
        "ball": {"x": {"diameter": "2 mm", "density": "7700 kg/m3"}},
        "constant": {"K": {"tube": "A", "ball": "x", "value": "0.0100(1) mPa.s.cm3/(g.s)"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"slope": "andrade"},
    }
    table = drops({f"s{t}": (t, around(andrade(t), 1e-3)) for t in (15.0, 20.0, 30.0, 40.0)})
    report = pf.reduce(table, sheet, draws=0)
    (fit,) = report.temperature_fits
    # around() keeps the mean; its logarithm is off by half the variance, the same for all sets
    assert dict(fit.parameters)["B"].value == pytest.approx(ANDRADE[1], rel=1e-6)
    at = report["s15.0"].result.viscosity_at_reference
    slope = ANDRADE[1] / (22.0 + ZERO) ** 2
    shared = math.hypot(0.01, 0.05 * slope)
    # scatter of 0.1 % in twenty drops comes to it, and the law's slope is not quite constant
    assert at.u / at.value == pytest.approx(shared, rel=0.02)


def test_values_that_bend_the_wrong_way_are_refused():
    values = {
        f"s{t}": (float(t), around(math.exp(-0.002 * t**1.5), 1e-4)) for t in (10, 25, 40, 60)
    }
    with pytest.raises(pf.InputError, match="Vogel's law cannot be fitted") as caught:
        pf.reduce(drops(values), bench("vogel"), draws=0)
    assert "andrade" in str(caught.value)


def test_a_liquid_at_one_temperature_keeps_its_own_slope_or_says_that_it_has_none():
    table = drops(
        {name: (t, around(andrade(t), 0.003)) for name, t in
         (("a", 15.0), ("b", 30.0), ("c", 25.0), ("d", 25.0))}
    )  # fmt: skip
    sheet = bench(
        liquid__known={"density": "970 kg/m3", "viscosity_slope": "-2.0(2) %/K"},
        liquid__other={"density": "970 kg/m3"},
        set={
            "a": {"liquid": "oil"}, "b": {"liquid": "oil"},
            "c": {"liquid": "known"}, "d": {"liquid": "other"},
        },
    )  # fmt: skip
    report = pf.reduce(table, sheet, draws=0)
    assert [fit.liquid for fit in report.temperature_fits] == ["oil"]
    at = report["c"].result.viscosity_at_reference
    assert at.value / report["c"].result.viscosity.value == pytest.approx(math.exp(0.06), rel=1e-9)
    assert report["d"].result.viscosity_at_reference is None
    (finding,) = [f for f in report["d"].findings if f.code == "slope-unknown"]
    assert "cannot be fitted" in finding.message


def test_sets_that_do_not_follow_the_law_are_found():
    sets = {f"s{t}": (float(t), around(vogel(t), 2e-4, 8)) for t in (10, 20, 30, 45, 60)}
    report = pf.reduce(drops(sets), bench(), draws=0)
    (fit,) = report.temperature_fits
    assert fit.p_value < 1e-3
    (finding,) = [f for f in report["s10"].findings if f.code == "slope-unknown"]
    assert "do not follow Andrade's law" in finding.message
    assert 'slope = "vogel"' in finding.remedy
    bent = pf.reduce(drops(sets), bench("vogel"), draws=0)
    assert not [f for f in bent["s10"].findings if f.code == "slope-unknown"]


def test_a_reference_far_outside_is_warned_of():
    table = drops({f"s{t}": (float(t), around(andrade(t), 0.003)) for t in (15, 20, 30)})
    report = pf.reduce(table, bench(bench__reference_temperature="45 degC"), draws=0)
    (finding,) = [f for f in report["s15"].findings if f.code == "slope-unknown"]
    assert finding.statistic == pytest.approx(15.0)


def test_an_invalid_set_is_left_out_of_the_fit():
    """A ball typed with its radius makes its set invalid, and 4 times too thin."""
    sets = {f"s{t}": (float(t), around(andrade(t), 0.003)) for t in (15, 20, 30, 40)}
    good = pf.reduce(drops(sets), bench(), draws=0)
    table = drops({**sets, "bad": (25.0, around(andrade(25.0), 0.003))})
    light = {"lot": True, "diameter": "1 mm", "mass": "32.25 mg"}
    table.loc[table["set"] == "bad", "ball"] = "radius"
    mixed = pf.reduce(table, bench(ball__radius=light), draws=0)
    assert mixed["bad"].status == "invalid"
    (fit,) = mixed.temperature_fits
    assert fit.sets == ("s15", "s20", "s30", "s40")
    ours = [parameter.value for _, parameter in fit.parameters]
    assert ours == pytest.approx([p.value for _, p in good.temperature_fits[0].parameters])


def test_the_fit_is_reported_everywhere(tmp_path):
    report = pf.reduce(five_sets(), whole_bench(), draws=0)
    document = json.loads(report.to_json())
    found = document["temperature_fit"]
    assert found["law"] == "andrade"
    (oil,) = found["liquids"]
    assert [p["name"] for p in oil["parameters"]] == ["A", "B"]
    assert oil["dof"] == 3
    assert oil["parameters"][1]["unit"] == "K"
    u = oil["parameters"][1]["standard_uncertainty"]
    assert oil["covariance"][1][1] == pytest.approx(u**2)
    assert len(oil["run_sets"]) == 5
    page = report.to_html()
    assert "Temperature slope of liquid oil, fitted to 5 run sets" in page
    again = pickle.loads(pickle.dumps(report))
    assert again.to_json() == report.to_json()


def test_without_a_fit_nothing_is_said_of_one():
    report = pf.reduce(five_sets(), bench(None), draws=0)
    assert report.temperature_fits == ()
    assert report.to_dict()["temperature_fit"] is None
    assert "fitted" not in report.to_html()


def test_monte_carlo_stands_beside_a_fit():
    report = pf.reduce(five_sets(), whole_bench(), draws=5000)
    result = report["s25"].result
    assert result.monte_carlo.validated_linear in (True, False)
    assert result.viscosity_at_reference.method == "linear"


def test_the_same_balls_at_every_temperature_leave_bounds_that_cover():
    """Three balls of 0.5 % own error, dropped twice at five temperatures; 100 liquids, 95 %.

    The balls' errors are alike in all sets, which the scatter of three shows badly: as weights
    that covariance would make bounds that cover two thirds.
    """
    rng = np.random.default_rng(5)
    made = bench(bench__reference_temperature="22 degC")
    made["ball"], made["liquid"], made["set"], rows = {}, {}, {}, []
    for i in range(100):
        made["liquid"][f"L{i}"] = {"density": "970 kg/m3"}
        errors = 0.005 * rng.standard_normal(3)
        for b in range(3):
            made["ball"][f"{i}.{b}"] = {"diameter": "2 mm", "density": "7700 kg/m3"}
        for t in (15.0, 20.0, 25.0, 32.0, 40.0):
            made["set"][f"{i} at {t}"] = {"liquid": f"L{i}"}
            for b in (0, 0, 1, 1, 2, 2):
                value = andrade(t) * math.exp(errors[b] + 0.002 * rng.standard_normal())
                rows.append((f"{i} at {t}", f"{i}.{b}", value / per_second(), t))
    table = pd.DataFrame(rows, columns=["set", "ball", "time [s]", "temperature [degC]"])
    report = pf.reduce(table, made, draws=0)
    true = andrade(22.0)
    curve = [fit.viscosity_at_reference for fit in report.temperature_fits]
    assert np.mean([at.low < true < at.high for at in curve]) >= 0.90  # two and a half of 100's
    at = report.reduced.sets.outputs.of("viscosity_at_reference")
    assert np.isfinite(at.factor).all()
    assert np.mean((at.low < true) & (true < at.high)) >= 0.90
    assert np.mean([fit.p_value < 0.05 for fit in report.temperature_fits]) <= 0.10
