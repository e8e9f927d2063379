import math

import numpy as np
import pytest

from plumbfall.flow.creeping_tube import wall_factor
from plumbfall.flow.mesh import MeshSettings, tube_mesh
from plumbfall.flow.navier_stokes import TubeFlow, tube_drag_factors
from plumbfall.flow.quads import lagrange, lobatto_nodes, quad_element


def drag(ratio, *reynolds, **options):
    return tube_drag_factors(diameter_ratio=ratio, reynolds=reynolds, **options)


@pytest.mark.parametrize(
    ("ratio", "factor"),
    [
        (0.01, 1.0214946420),
        (0.1, 1.2632139053),
        (0.3, 2.3700948902),
        (0.5, 5.9473742458),
        (0.8, 74.6699662503),
    ],
)
def test_creeping_flow_is_the_exact_solution(ratio, factor):
    # creeping-flow multipoles and finite-cylinder collocation, other programs than this package
    assert drag(ratio, 0.0, degree=5)[0] == pytest.approx(factor, rel=1e-6)


@pytest.mark.parametrize("ratio", [0.02, 0.23, 0.67])
def test_creeping_flow_agrees_with_the_multipole_solver(ratio):
    exact, _ = wall_factor(diameter_ratio=ratio)
    assert drag(ratio, 0.0, degree=6)[0] == pytest.approx(exact, rel=1e-7)


@pytest.mark.parametrize(
    ("ratio", "factors"),
    [
        (0.1, (1.2703, 1.2895, 1.5517, 1.8444, 2.3087, 3.3264, 4.5826)),
        (0.3, (2.3710, 2.3738, 2.4523, 2.6293, 3.0300, 4.0915, 5.5110)),
        (0.5, (5.9477, 5.9486, 5.9781, 6.0627, 6.3430, 7.5464, 9.6826)),
    ],
)
def test_walls_and_inertia_agree_with_independent_finite_elements(ratio, factors):
    # Navier-Stokes by another finite-element program than this package, relative error 1e-4
    found = drag(ratio, 0.5, 1, 5, 10, 20, 50, 100, degree=6)
    np.testing.assert_allclose(found, factors, rtol=1.2e-4)


def test_wide_tube_is_the_standard_drag_of_a_sphere():
    # Navier-Stokes by another finite-element program than this package, relative error 5e-4
    found = drag(1e-3, 1, 10, 100, degree=4)
    np.testing.assert_allclose(found, (1.1382, 1.7950, 4.535), rtol=5e-4)


def test_small_reynolds_number_in_a_very_wide_tube_is_chester_and_breach():
    # Chester and Breach 1969, J. Fluid Mech. 37, 751; the wall adds 6 ratio^2 / Re = 6e-7 here
    re = 0.1
    log_half = math.log(re / 2)
    series = 1 + 3 / 16 * re + 27 / 640 * re**3 * log_half
    series += 9 / 160 * re**2 * (log_half + np.euler_gamma + 5 / 3 * math.log(2) - 323 / 360)
    found = drag(1e-4, re, degree=4)[0]
    assert found == pytest.approx(series, rel=5e-5)
    # Oseen 1910 stops after the second term; the flow tells the two apart
    assert abs(found / (1 + 3 / 16 * re) - 1) > 1e-3


def test_excess_in_a_tube_starts_with_the_square_of_the_reynolds_number():
    # creeping flow between walls reads the same upstream and downstream, so no odd power can stand
    none, single, double = drag(0.3, 0.0, 0.05, 0.1, degree=4)
    assert (double - none) / (single - none) == pytest.approx(4.0, rel=1e-3)


def test_error_falls_with_the_degree():
    found = [drag(0.2, 30, degree=degree)[0] for degree in (2, 3, 4, 5, 7)]
    errors = abs(np.array(found[:-1]) / found[-1] - 1)
    # odd and even degrees err to different sides, so two degrees are compared
    assert (errors[2:] < errors[:-2] / 15).all()
    assert errors[-1] < 1e-5


def test_error_falls_with_the_size_of_the_elements():
    best = drag(0.2, 30, degree=6)[0]
    errors = [
        abs(drag(0.2, 30, degree=3, settings=MeshSettings(fineness=fine))[0] / best - 1)
        for fine in (1.0, 2.0)
    ]
    assert errors[0] < 1e-3
    assert errors[1] < errors[0] / 8


@pytest.mark.parametrize(("ratio", "reynolds"), [(0.05, 2.0), (0.5, 100.0)])
def test_longer_domain_changes_nothing(ratio, reynolds):
    found = drag(ratio, reynolds, degree=5)[0]
    for settings in (MeshSettings(upstream=6.0), MeshSettings(downstream=16.0)):
        longer = drag(ratio, reynolds, degree=5, settings=settings)[0]
        assert found == pytest.approx(longer, rel=3e-6)


def test_a_flow_carries_on_from_the_last_reynolds_number():
    flow = TubeFlow(diameter_ratio=0.4, degree=4)
    up = [flow.drag_factor(number) for number in (0.0, 20.0, 60.0)]
    assert up == sorted(up)
    assert flow.drag_factor(20.0) == pytest.approx(up[1], rel=1e-10)
    assert flow.drag_factor(0.0) == pytest.approx(up[0], rel=1e-10)


def test_flow_that_newton_cannot_reach_is_an_error(monkeypatch):
    monkeypatch.setattr("plumbfall.flow.navier_stokes._MOST_STEPS", 1)
    with pytest.raises(ArithmeticError, match="Reynolds number"):
        drag(0.4, 50.0, degree=3)


@pytest.mark.parametrize("ratio", [0.003, 0.1, 0.8])
def test_mesh_fills_the_space_between_ball_and_tube(ratio):
    settings = MeshSettings()
    mesh = tube_mesh(diameter_ratio=ratio, settings=settings)
    element = quad_element(8)
    _, rho, jacobian = mesh.map_points(element.points)
    volume = 2 * np.pi * (element.weights * abs(np.linalg.det(jacobian)) * rho).sum()
    radius = 1 / ratio
    tube = np.pi * radius**3 * (settings.upstream + settings.downstream)
    assert volume == pytest.approx(tube - 4 / 3 * np.pi, rel=1e-8)


def test_lobatto_points_are_the_tabulated_ones():
    # Abramowitz and Stegun 1964, table 25.6, n = 5 and 6
    np.testing.assert_allclose(lobatto_nodes(4)[2:], [0, 0.65465367, 1], atol=5e-9)
    np.testing.assert_allclose(lobatto_nodes(5)[3:], [0.28523152, 0.76505532, 1], atol=5e-9)


def test_shape_functions_reproduce_polynomials():
    points = np.linspace(-1, 1, 7)
    value, slope = lagrange(5, points)
    nodal = lobatto_nodes(5) ** 5 - lobatto_nodes(5)
    np.testing.assert_allclose(value @ nodal, points**5 - points, atol=1e-13)
    np.testing.assert_allclose(slope @ nodal, 5 * points**4 - 1, atol=1e-12)
