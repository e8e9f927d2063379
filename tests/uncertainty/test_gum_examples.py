"""Worked examples of the GUM through the propagation that the reduction uses.

Source: JCGM 100:2008, annex H. Inputs and printed answers from memory, except the means,
uncertainties and correlations of H.2, which general-purpose libraries quote in public.
"""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.linear import propagate
from plumbfall.uncertainty.type_a import group_scatter, means_of_series


def test_h1_end_gauge_calibration():
    # l = l_s + d - l_s (delta_alpha theta + alpha_s delta_theta); lengths in nm
    length, difference, theta, alpha = 50.000623e6, 215.0, -0.1, 11.5e-6
    # columns: l_s, d, delta_alpha, theta, alpha_s, delta_theta
    sensitivities = np.array([[1.0, 1.0, -length * theta, 0.0, 0.0, -length * alpha]])
    u = np.array([25.0, 9.7, 0.58e-6, 0.41, 1.2e-6, 0.029])
    dof = np.array([18.0, 25.6, 50.0, np.inf, np.inf, 2.0])
    result = propagate(sensitivities=sensitivities, u=u, dof=dof)
    assert length + difference == pytest.approx(50.000838e6, abs=0.5)  # printed 50.000 838 mm
    assert result.u[0] == pytest.approx(32, abs=0.5)  # printed 32 nm
    assert np.floor(result.effective_dof[0]) == 16  # printed 16
    k = coverage_factor(dof=np.floor(result.effective_dof), probability=0.99)
    assert k[0] == pytest.approx(2.92, abs=0.005)  # printed 2.92
    assert k[0] * result.u[0] == pytest.approx(93, abs=0.7)  # printed 93, from u rounded to 32


def test_h2_resistance_and_reactance_with_correlated_means():
    readings = np.array(
        [
            [5.007, 4.994, 5.005, 4.990, 4.999],
            [19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3],
            [1.0456, 1.0438, 1.0468, 1.0428, 1.0433],
        ]
    )
    means = means_of_series(readings)
    voltage, current, phase = means.mean
    assert means.correlation[0, 1:] == pytest.approx([-0.36, 0.86], abs=0.005)  # printed
    assert means.correlation[1, 2] == pytest.approx(-0.65, abs=0.006)  # printed
    impedance = voltage / current
    cos, sin = np.cos(phase), np.sin(phase)
    sensitivities = np.array(
        [
            [cos / current, -impedance * cos / current, -impedance * sin],
            [sin / current, -impedance * sin / current, impedance * cos],
            [1 / current, -impedance / current, 0.0],
        ]
    )
    result = propagate(sensitivities=sensitivities, u=means.u, correlation=means.correlation)
    values = impedance * np.array([cos, sin, 1.0])
    assert values == pytest.approx([127.732, 219.847, 254.260], abs=5e-4)  # printed
    assert result.u == pytest.approx([0.071, 0.295, 0.236], abs=6e-4)  # printed
    covariance = result.covariance()
    correlation = covariance / np.outer(result.u, result.u)
    assert correlation[0, 1:] == pytest.approx([-0.588, -0.485], abs=5e-4)  # printed
    assert correlation[1, 2] == pytest.approx(0.993, abs=6e-4)  # printed
    independent = propagate(sensitivities=sensitivities, u=means.u)
    assert independent.u[0] == pytest.approx(0.195, abs=5e-4)  # 2.7 times too large


# JCGM 100:2008, table G.2, two printed decimals, from memory and recomputed.
TABLE_G2 = {
    1: (1.84, 6.31, 12.71, 13.97, 63.66),
    2: (1.32, 2.92, 4.30, 4.53, 9.92),
    3: (1.20, 2.35, 3.18, 3.31, 5.84),
    5: (1.11, 2.02, 2.57, 2.65, 4.03),
    10: (1.05, 1.81, 2.23, 2.28, 3.17),
    20: (1.03, 1.72, 2.09, 2.13, 2.85),
    50: (1.01, 1.68, 2.01, 2.05, 2.68),
    np.inf: (1.000, 1.645, 1.960, 2.000, 2.576),
}


@pytest.mark.parametrize(("dof", "row"), TABLE_G2.items())
def test_table_g2_of_student_t(dof, row):
    for probability, printed in zip((0.6827, 0.90, 0.95, 0.9545, 0.99), row, strict=True):
        k = coverage_factor(dof=dof, probability=probability)
        assert k == pytest.approx(printed, abs=0.0051)


def test_group_scatter_keeps_its_digits_beside_a_large_offset():
    # NIST StRD NumAcc4: mean 10000000.2, standard deviation 0.1, certified exactly. The one-pass
    # formula returns 0 here.
    values = np.array([10000000.2] + [10000000.1, 10000000.3] * 500)
    groups = group_scatter(values, np.zeros(len(values), dtype=int), 1)
    assert groups.mean[0] == pytest.approx(10000000.2, rel=1e-15)
    assert groups.sd[0] == pytest.approx(0.1, rel=1e-7)
