"""Comparisons: shared errors cancel, tests of difference and equality, repeatability."""

from __future__ import annotations

import json
import math

import GTC
import numpy as np
import pandas as pd
import pytest
from scipy import stats

import plumbfall as pf
from plumbfall.cli.program import main
from support.benches import bench_dict, drops_table

FIRST = {"B1": [14.09, 14.12, 14.07, 14.10, 14.09]}
SECOND = {"B1": [14.21, 14.23, 14.19, 14.20, 14.21]}


def table(first=FIRST, second=SECOND, warmer=0.0):
    return pd.concat(
        [
            drops_table(first, run_set="A"),
            drops_table(second, run_set="B", temperature=25.0 + warmer),
        ]
    )


def compared(drops=None, bench=None, **options):
    drops = table() if drops is None else drops
    return pf.compare(drops, bench or bench_dict(), sets=("A", "B"), **options)


def test_ratio_is_the_first_over_the_second_with_the_covariance_of_the_report():
    report = pf.reduce(table(), bench_dict(), draws=0)
    result = compared().result
    a, b = report["A"].viscosity, report["B"].viscosity  # correlated ufloats
    assert result.ratio.value == pytest.approx(a.n / b.n)
    assert result.ratio.u == pytest.approx((a / b).std_dev, rel=1e-6)
    assert result.difference.u == pytest.approx((a - b).std_dev, rel=1e-6)
    assert result.correlation == pytest.approx(report.correlation()[0, 1], rel=1e-9)
    # apart, as if nothing were shared, the ratio would be far less sure
    apart = math.hypot(a.std_dev / a.n, b.std_dev / b.n)
    assert result.ratio.u / result.ratio.value < 0.75 * apart


def test_a_shared_error_cancels_as_gtc_says():
    # METROLOGY: shared 0.6 %, 0.25 % each of its own: 0.92 % apart, 0.35 % together
    shared = GTC.ureal(1.0, 0.006)
    ratio = GTC.ureal(1.0, 0.0025) * shared / (GTC.ureal(1.0, 0.0025) * shared)
    assert GTC.uncertainty(ratio) == pytest.approx(0.0035, abs=5e-5)
    # drops that scatter by so much, and a gravity so badly known, are that case on our bench
    random = np.random.default_rng(3).standard_normal((2, 10))
    random = (random - random.mean(axis=1)[:, None]) / random.std(axis=1, ddof=1)[:, None]
    times = [{"B1": (14.1 * (1 + 0.0025 * math.sqrt(10) * row)).tolist()} for row in random]
    bench = bench_dict(
        site__gravity={"value": 9.8123, "unit": "m/s2", "u": 0.006 * 9.8123},
        methods__model_uncertainty="0.0001 %",
    )
    for name in ("timer", "gauge", "thermometer"):
        for entry in bench[name].values():
            entry.update({key: "0.0 " + str(text).split()[-1] for key, text in entry.items()
                          if key in ("bias", "rate", "correction")})  # fmt: skip
    result = compared(table(*times), bench).result
    assert result.ratio.u == pytest.approx(0.0035, rel=0.03)


def test_identical_sets_do_not_differ_and_clear_differences_are_shown():
    same = compared(table(FIRST, FIRST), margin="1 %")
    assert (same.different, same.equivalent) == (False, True)
    assert same.result.p_value == pytest.approx(1.0)
    apart = compared(margin="0.1 %")
    assert (apart.different, apart.equivalent) == (True, False)
    assert "difference of -0.8" in apart.text()


def test_p_values_are_students():
    result = compared(margin="1 %").result
    dof = result.difference.effective_dof
    t = result.difference.value / result.difference.u
    assert result.p_value == pytest.approx(2 * stats.t.sf(abs(t), dof), rel=1e-9)
    low = (result.ratio.value - 0.99) / result.ratio.u
    high = (1.01 - result.ratio.value) / result.ratio.u
    tails = [stats.t.sf(one, result.ratio.effective_dof) for one in (low, high)]
    assert result.equivalence_p_value == pytest.approx(max(tails), rel=1e-9)


def test_repeatability_limit_and_critical_difference():
    # ISO 5725-6: 2.77 s, and s x 1.96 x sqrt(2/5)
    precision = compared().result.precision
    relative = [np.std(one["B1"], ddof=1) / np.mean(one["B1"]) for one in (FIRST, SECOND)]
    sd = math.sqrt(sum(x**2 for x in relative) / 2)
    assert precision.sd == pytest.approx(sd, rel=0.01)
    assert precision.dof == 8
    assert precision.limit == pytest.approx(1.959964 * math.sqrt(2) * precision.sd, rel=1e-6)
    assert precision.critical == pytest.approx(1.959964 * math.sqrt(2 / 5) * precision.sd, rel=1e-6)


def test_sets_that_scatter_unevenly_are_told_by_cochran():
    # two variances of five values each: ISO 5725-2, table 4 (from memory) has 0.959 at 1 %
    precision = compared().result.precision
    assert precision.cochran_limit == pytest.approx(0.959, abs=1e-3)
    assert not precision.uneven
    wild = {"B1": [14.21, 15.23, 13.19, 14.60, 13.71]}
    uneven = compared(table(FIRST, wild))
    assert uneven.result.precision.uneven
    assert "Cochran" in uneven.text()


def test_known_repeatability_of_the_bench_prevails():
    bench = bench_dict(scatter={"relative": "0.30 %", "dof": 24})
    precision = compared(bench=bench).result.precision
    assert (precision.sd, precision.dof) == (pytest.approx(0.003), 24)


def test_values_at_the_reference_temperature_are_compared_where_there_are_any():
    # 2 K warmer is some 4 % thinner, which is no difference of the liquids
    thinner = {name: [time * math.exp(-0.02 * 2) for time in row] for name, row in FIRST.items()}
    warm = table(FIRST, thinner, warmer=2.0)
    apart = compared(warm)
    assert not apart.result.one_temperature
    assert "different temperatures" in " ".join(apart.text().split())
    at_25 = compared(warm, bench_dict(bench__reference_temperature="25 degC"))
    assert at_25.result.quantity == "viscosity_at_reference"
    assert at_25.ratio == pytest.approx(1.0, abs=5e-3)
    assert at_25.result.temperatures == (298.15, 298.15)


def test_what_cannot_be_compared_is_refused():
    with pytest.raises(pf.InputError, match="two are compared"):
        pf.compare(table(), bench_dict(), sets=("A", "A"))
    with pytest.raises(pf.InputError, match="there is no run set 'C'"):
        pf.compare(table(), bench_dict(), sets=("A", "C"))
    with pytest.raises(pf.InputError, match=r"is invalid \(ball-not-denser"):
        compared(bench=bench_dict(liquid__oil__density="7.9 g/cm3"))


def test_a_report_in_hand_is_compared_as_it_is():
    report = pf.reduce(table(), bench_dict())
    assert pf.compare(report, sets=("A", "B")).ratio == pytest.approx(compared().ratio)


def test_document_table_text_drawing_and_fragment():
    report = compared(margin="1 %")
    document = json.loads(report.to_json())
    assert document["schema"] == "plumbfall/comparison/1"
    assert document["sets"] == ["A", "B"]
    assert {"value", "standard_uncertainty", "low", "high"} <= set(document["ratio"])
    assert {"ratio", "difference", "correlation"} <= set(document)
    assert report.table()["quantity"].tolist() == ["ratio", "difference"]
    assert report.text().startswith("A / B  0.99")
    assert max(map(len, report.text().splitlines())) <= 80
    assert len(report.plot().axes) == 1
    assert "<svg" in report._repr_html_()


def test_the_command(tmp_path, capsys):
    from pathlib import Path

    sample = Path(__file__).parents[2] / "sample_runs" / "varnish_warm" / "drops.tsv"
    assert main(["compare", str(sample), "--sets", "monday", "tuesday", "--margin", "2 %"]) == 0
    assert capsys.readouterr().out.startswith("monday / tuesday  ")
    assert main(["compare", str(sample), "--sets", "monday", "friday"]) == 2
    assert "there is no run set 'friday'" in capsys.readouterr().err
