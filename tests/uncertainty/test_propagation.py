"""What the propagation must do whatever the inputs are."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import sparse

from plumbfall.uncertainty.coverage import coverage_factor, effective_dof
from plumbfall.uncertainty.linear import propagate


def test_shared_input_gives_the_covariance_of_two_outputs():
    # GUM F.1.2.3: cov(x1, x2) = sum of the products of the sensitivities and the variance.
    result = propagate(
        sensitivities=np.array([[2.0, 1.0, 0.0], [3.0, 0.0, 1.0]]), u=np.array([0.5, 0.1, 0.2])
    )
    assert result.covariance()[0, 1] == pytest.approx(2 * 3 * 0.25)
    assert result.u**2 == pytest.approx(np.diag(result.covariance()))


def test_the_same_as_the_uncertainties_library():
    from uncertainties import covariance_matrix, ufloat

    a, b, c = ufloat(2.0, 0.1), ufloat(3.0, 0.2), ufloat(5.0, 0.05)
    theirs = covariance_matrix([a * b, b / c, a - c])
    sensitivities = np.array([[3.0, 2.0, 0.0], [0.0, 1 / 5, -3 / 25], [1.0, 0.0, -1.0]])
    ours = propagate(sensitivities=sensitivities, u=np.array([0.1, 0.2, 0.05]))
    np.testing.assert_allclose(ours.covariance(), theirs, rtol=1e-12, atol=1e-15)


def test_the_same_degrees_of_freedom_as_gtc():
    from GTC import dof, ureal
    from GTC import uncertainty as u_of

    x, y, z = ureal(1.0, 0.3, 4), ureal(2.0, 0.2, 7), ureal(3.0, 0.1)
    product = x * y * z
    ours = propagate(
        sensitivities=np.array([[6.0, 3.0, 2.0]]),
        u=np.array([0.3, 0.2, 0.1]),
        dof=np.array([4.0, 7.0, np.inf]),
    )
    assert ours.u[0] == pytest.approx(u_of(product), rel=1e-12)
    assert ours.effective_dof[0] == pytest.approx(dof(product), rel=1e-12)


def test_one_output_gives_its_inputs_back():
    result = propagate(sensitivities=np.array([[0.0, -2.0], [1.0, 0.0]]), u=np.array([1.0, 0.5]))
    inputs, contributions = result.row(0)
    assert dict(zip(inputs.tolist(), contributions.tolist(), strict=True))[1] == -1.0
    assert result.covariance(slice(1, 2)) == pytest.approx(np.array([[1.0]]))


def test_no_finite_degrees_of_freedom_is_infinite():
    assert effective_dof(u=1.0, contributions_fourth=0.0) == np.inf
    assert coverage_factor(dof=np.inf, probability=0.95) == pytest.approx(1.959964, abs=1e-6)


@given(st.floats(1, 1e4), st.floats(0.5, 0.999))
def test_k_falls_with_dof_and_grows_with_probability(dof, probability):
    k = coverage_factor(dof=dof, probability=probability)
    assert coverage_factor(dof=dof * 1.5, probability=probability) < k
    assert coverage_factor(dof=dof, probability=(1 + probability) / 2) > k
    assert k >= coverage_factor(dof=np.inf, probability=probability)


def test_sparse_and_dense_agree():
    dense = np.array([[1.0, 0.0, 3.0], [0.0, 2.0, 0.0]])
    u = np.array([1.0, 2.0, 3.0])
    a = propagate(sensitivities=dense, u=u)
    b = propagate(sensitivities=sparse.csr_array(dense), u=u)
    assert a.u == pytest.approx(b.u)
