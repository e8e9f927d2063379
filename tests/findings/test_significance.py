"""The level shared by the statistical warnings, and the smallest effect a test could have seen."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from plumbfall.findings.limits import Limits
from plumbfall.findings.significance import (
    TESTS,
    detectable,
    f_p_value,
    level_of_each,
    t_p_value,
)


def test_all_warnings_together_stay_within_one_clean_set_in_twenty():
    limits = Limits()
    # Bonferroni: Grubbs for one and for two outliers, and every test of the table
    assert 2 * limits.outlier_level + len(TESTS) * level_of_each(limits) <= 0.05 + 1e-12


def test_p_values_agree_with_the_reference_library():
    assert t_p_value(t=[-2.5, 2.5], dof=[7, np.inf]) == pytest.approx(
        [2 * stats.t.sf(2.5, 7), 2 * stats.norm.sf(2.5)], rel=1e-9
    )
    assert f_p_value(f=[2.2615, 21.0], dof=[9, 2], dof_within=[40, np.inf]) == pytest.approx(
        [stats.f.sf(2.2615, 9, 40), stats.chi2.sf(42.0, 2)], rel=1e-6
    )


def test_without_degrees_of_freedom_nothing_is_found():
    assert t_p_value(t=[99.0, np.nan], dof=[0, 5]).tolist() == [1.0, 1.0]
    assert f_p_value(f=[99.0, np.nan], dof=[0, 2], dof_within=[5, 5]).tolist() == [1.0, 1.0]
    assert np.isnan(detectable(standard_error=1.0, dof=0, level=0.05))


def test_a_detectable_effect_is_found_as_often_as_it_says():
    # the exact power of a two-sided t-test is that of the noncentral t
    for dof in (5, 8, 20):
        effect = float(detectable(standard_error=1.0, dof=dof, level=0.0025))
        limit = stats.t.isf(0.00125, dof)
        assert stats.nct.sf(limit, dof, effect) == pytest.approx(0.80, abs=1e-4)
