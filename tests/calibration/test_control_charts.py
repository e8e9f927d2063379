"""Control charts: constants and worked examples from print, run rules, drift."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from plumbfall.calibration.chart_constants import chart_constants
from plumbfall.calibration.control_charts import (
    cusum,
    drift,
    ewma,
    ewma_limits,
    individuals,
    moving_ranges,
    run_signals,
)
from plumbfall.published.statistics_charts import CUSUM, EWMA, INDIVIDUALS

# factors for samples of 2 to 10, ISO 7870-2 (from memory)
PRINTED = {
    "d2": "1.128 1.693 2.059 2.326 2.534 2.704 2.847 2.970 3.078",
    "d3": "0.853 0.888 0.880 0.864 0.848 0.833 0.820 0.808 0.797",
    "c4": "0.7979 0.8862 0.9213 0.9400 0.9515 0.9594 0.9650 0.9693 0.9727",
    "A2": "1.880 1.023 0.729 0.577 0.483 0.419 0.373 0.337 0.308",
    "A3": "2.659 1.954 1.628 1.427 1.287 1.182 1.099 1.032 0.975",
    "D3": "0 0 0 0 0 0.076 0.136 0.184 0.223",
    "D4": "3.267 2.574 2.282 2.114 2.004 1.924 1.864 1.816 1.777",
    "B3": "0 0 0 0 0.030 0.118 0.185 0.239 0.284",
    "B4": "3.267 2.568 2.266 2.089 1.970 1.882 1.815 1.761 1.716",
}


@pytest.mark.parametrize("name", PRINTED)
def test_constants_for_samples_of_2_to_10(name):
    printed = [float(text) for text in PRINTED[name].split()]
    found = [getattr(chart_constants(n), name) for n in range(2, 11)]
    # printed tables were made from rounded factors: their last digit may be off by one
    assert found == pytest.approx(printed, abs=1e-4 if name == "c4" else 1e-3)


def test_individuals_of_the_handbook():
    # NIST/SEMATECH e-Handbook 6.3.2.2 (from memory); it divides by 1.128 where d2 is 1.12838
    found = individuals(INDIVIDUALS)
    assert found.centre == pytest.approx(50.81, abs=5e-3)
    assert found.mean_range == pytest.approx(1.8778, abs=5e-5)
    assert moving_ranges(INDIVIDUALS).sum() == pytest.approx(9 * found.mean_range)
    rounded = 3 * found.mean_range / 1.128
    assert found.centre + rounded == pytest.approx(55.8041, abs=5.1e-5)
    assert found.centre - rounded == pytest.approx(45.8159, abs=5.1e-5)
    assert found.limits() == pytest.approx((45.8159, 55.8041), abs=1.7e-3)
    assert found.highest_range == pytest.approx(3.267 * found.mean_range, abs=1e-3)


def test_moving_average_of_the_handbook():
    # NIST/SEMATECH e-Handbook 6.3.2.4 (from memory)
    printed = (
        "50.60 49.52 50.56 50.18 50.16 49.21 49.75 49.85 50.26 50.33 "
        "50.11 49.36 49.52 50.05 49.38 49.92 50.73 51.23 51.94 51.99"
    )
    found = ewma(EWMA, weight=0.3, start=50.0)
    assert found == pytest.approx([float(text) for text in printed.split()], abs=5.1e-3)
    low, high = ewma_limits(centre=50.0, sd=2.0539, weight=0.3, count=1000)
    assert (low[-1], high[-1]) == pytest.approx((47.4115, 52.5884), abs=1e-4)
    # the first average is the weight times one value: its limits are those of it
    assert high[0] - 50 == pytest.approx(3 * 2.0539 * 0.3)


def test_cumulative_sums_of_the_handbook():
    # NIST/SEMATECH e-Handbook 6.3.2.3 (from memory): sums from the 13th on, alarm at the 14th
    found = cusum(CUSUM, target=325.0, slack=0.3175)
    printed = [3.01, 4.94, 7.45, 10.63, 11.99, 14.44, 16.00, 19.04]
    assert found.high[12:] == pytest.approx(printed, abs=5.1e-3)
    assert np.flatnonzero(found.alarms(4.1959))[0] == 13


def signals(*away):
    """Return the signals at points so many standard deviations from the centre."""
    return run_signals(np.array(away), centre=0.0, sd=1.0)


def test_run_rules():
    assert signals(0.5, 3.1) == [(), ("beyond-action",)]
    assert signals(2.1, 0.1, 2.2) == [(), (), ("two-of-three-beyond-warning",)]
    assert signals(2.1, 0.1, -2.2) == [(), (), ()]
    assert signals(2.1, 0.1, 0.1, 2.2) == [(), (), (), ()]
    assert signals(*[0.3, 0.5] * 4, 0.1)[-2:] == [(), ("nine-on-one-side",)]
    assert signals(*[0.3, 0.5] * 4, 0.0)[-1] == ()
    assert signals(-1.2, -0.7, -0.1, 0.2, 0.6)[-1] == ()
    assert signals(-1.2, -0.7, -0.1, 0.2, 0.6, 1.1)[-1] == ("six-rising",)
    assert signals(1.2, 0.7, 0.1, -0.2, -0.6, -1.1)[-1] == ("six-falling",)


def test_drift_is_a_line_by_least_squares():
    days = np.array([0.0, 7.0, 13.0, 30.0, 44.0])
    bias = np.array([0.05, 0.11, 0.02, 0.20, 0.19])
    found, line = drift(days, bias), stats.linregress(days, bias)
    assert (found.slope, found.u) == pytest.approx((line.slope, line.stderr), rel=1e-12)
    assert found.p_value == pytest.approx(line.pvalue, rel=1e-9)
    assert found.dof == 3
    assert found.detectable == pytest.approx(
        line.stderr * (stats.t.ppf(0.975, 3) + stats.t.ppf(0.8, 3))
    )
    assert drift([1.0, 1.0, 2.0], [0.0, 1.0, 2.0]) is None
    assert drift([1, 2, 3], [0.1, 0.1, 0.1]).p_value == 1


def test_few_charts_of_a_laboratory_in_control_signal():
    # out of 500 charts of 20 points, by simulation: what docs/calibration.md says of false alarms
    random = np.random.default_rng(20)
    alarms = beyond = 0
    for values in random.standard_normal((500, 20)):
        limits = individuals(values)
        found = run_signals(values, centre=limits.centre, sd=limits.sd)
        alarms += any(found)
        beyond += any("beyond-action" in names for names in found)
    assert 0.08 < alarms / 500 < 0.18
    assert 0.02 < beyond / 500 < 0.08
