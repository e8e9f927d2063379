import numpy as np
import pytest

from plumbfall.flow.end_modes import EndModes, end_mode_roots
from plumbfall.flow.multipoles import multipole_velocities
from plumbfall.flow.reflection import EXTRA_ORDERS, reflected, slope_along
from plumbfall.flow.tube_wall import TubeWall

RADIUS, HEIGHT, COUNT = 0.4, 0.7, 6
ORDERS = np.arange(COUNT + EXTRA_ORDERS)
RHO = np.linspace(0.05, 1.0, 7)


def multipoles_with_images(z, end):
    """Velocities of multipoles at HEIGHT above the plane z = 0 and of their images."""
    z = np.full_like(RHO, z)
    own = multipole_velocities(orders=ORDERS[:COUNT], radius=RADIUS, rho=RHO, z=z - HEIGHT)
    mirrored = multipole_velocities(orders=ORDERS, radius=RADIUS, rho=RHO, z=z + HEIGHT)
    images = reflected(*mirrored, height_over_radius=HEIGHT / RADIUS, end=end)
    return [one + other for one, other in zip(own, images, strict=True)]


def test_solid_plane_is_at_rest():
    for velocity in multipoles_with_images(0.0, "solid"):
        np.testing.assert_allclose(velocity, 0.0, atol=1e-13)


def test_free_surface_is_not_crossed_and_bears_no_shear():
    step = 1e-5
    above, below = (multipoles_with_images(z, "free") for z in (step, -step))
    at = multipoles_with_images(0.0, "free")
    for upper, lower, here in zip(above, below, at, strict=True):
        np.testing.assert_allclose(here[0], 0.0, atol=1e-14)
        np.testing.assert_allclose((upper[1] - lower[1]) / (2 * step), 0.0, atol=1e-8)


def test_slope_along_the_axis_is_a_difference():
    step, z = 1e-5, np.full_like(RHO, 0.5)
    above, here, below = (
        multipole_velocities(orders=ORDERS, radius=RADIUS, rho=RHO, z=z + shift)
        for shift in (step, 0.0, -step)
    )
    for slope, upper, lower in zip(slope_along(*here, radius=RADIUS), above, below, strict=True):
        np.testing.assert_allclose(
            slope, (upper - lower)[:, :-1] / (2 * step), rtol=1e-6, atol=1e-7
        )


@pytest.mark.parametrize("z", [-0.8, 0.0, 0.3, 1.7])
def test_bore_is_at_rest_under_a_multipole_and_its_answer(z):
    bore = np.array([1.0])
    wall = TubeWall(orders=ORDERS, radius=RADIUS, rho=bore)
    own = multipole_velocities(orders=ORDERS, radius=RADIUS, rho=bore, z=np.array([z]))
    for velocity, answer in zip(own, wall.velocities(z=np.array([z])), strict=True):
        np.testing.assert_allclose(velocity + answer, 0.0, atol=1e-13)


def test_first_end_mode_decays_at_the_known_rate():
    # from memory of Fitz-Gerald 1972, J. Fluid Mech. 51, 463: 4.46630 + 1.46747 i
    assert end_mode_roots(1)[0] == pytest.approx(4.46630 + 1.46747j, abs=1e-5)


def test_end_modes_are_distinct_and_at_rest_on_the_bore():
    roots = end_mode_roots(60)
    np.testing.assert_allclose(np.diff(roots.real), np.pi, atol=0.1)
    modes = EndModes(roots=roots, rho=np.array([1.0]))
    np.testing.assert_allclose(modes.velocities(distance=np.zeros(1)), 0.0, atol=1e-11)


def divergence(velocities, rho, step):
    """Divergence from a function of rho and z; central differences."""
    radial = (
        (rho + step) * velocities(rho + step, 0.0)[1]
        - (rho - step) * velocities(rho - step, 0.0)[1]
    ) / (2 * step * rho)
    axial = (velocities(rho, step)[0] - velocities(rho, -step)[0]) / (2 * step)
    return radial + axial


def test_no_liquid_is_lost_in_modes_or_answers():
    rho, step = np.linspace(0.2, 0.9, 5), 1e-5
    roots = end_mode_roots(3)

    def mode(at, z):
        return EndModes(roots=roots, rho=at).velocities(distance=np.full_like(at, 0.1 + z))

    def answer(at, z):
        wall = TubeWall(orders=ORDERS, radius=RADIUS, rho=at)
        return np.concatenate(wall.velocities(z=np.full_like(at, 0.2 + z)), axis=1)

    for velocities in (mode, answer):
        np.testing.assert_allclose(divergence(velocities, rho, step), 0.0, atol=2e-7)
