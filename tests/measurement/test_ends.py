"""The ends' effect on the time between marks, and what happens where it cannot be had."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

import plumbfall as pf
from support.benches import bench_dict, drops_table


def result(**changes):
    return pf.reduce(drops_table({"B4": [4.0, 4.0]}), bench_dict(**changes))["A"].result


def end_factor(**changes):
    (ends,) = (c for c in result(**changes).corrections if c.name == "ends")
    return ends.factor


# Transit bias in a tube of six bore radii of liquid, first mark 4.5 radii above the bottom, ball a
# tenth of the bore: the project's formula book, section 4, by an independent finite-tube solver.
@pytest.mark.parametrize(
    ("clearance", "percent", "tolerance"),
    [(0.5, 0.19, 0.005), (0.75, 0.029, 0.0005), (1.0, 0.004, 0.0005), (1.5, 0.0, 0.0005)],
)
def test_transit_bias_of_a_mark_near_the_bottom(clearance, percent, tolerance):
    factor = end_factor(
        ball__B4={"diameter": "5.0 mm", "density": "7.7 g/cm3"},
        tube__A__marks=["0 mm", f"{25 * (4.5 - clearance)} mm"],
        tube__A__bottom_below=f"{25 * clearance} mm",
        tube__A__surface_above=f"{25 * 1.5} mm",
        tube__A__release_above="10 mm",
        liquid__oil__viscosity_slope=None,
        tube__A__expansion=None,
    )
    assert 100 * (factor - 1) == pytest.approx(percent, abs=tolerance)


def test_the_factor_is_the_mean_of_the_excess_over_the_path():
    near = {
        "tube__A__bottom_below": "10 mm",
        "ball__B4": {"diameter": "4 mm", "density": "7.7 g/cm3"},
    }
    ratio = 4.0 / 50.0

    def excess(place: float) -> float:
        return float(pf.physics.end_excess(diameter_ratio=ratio, distance=place / 0.025))

    whole, _ = quad(excess, 0.010, 0.210, points=[0.02, 0.03, 0.05, 0.075], limit=200)
    factor = end_factor(tube__A__marks=["0 mm", "200 mm"], **near)
    assert factor - 1 == pytest.approx(whole / 0.2, rel=1e-6)


def test_a_lid_is_felt_as_a_bottom_is():
    top = {"tube__A__surface_above": "15 mm", "tube__A__release_above": "10 mm"}
    free, lid = end_factor(**top), end_factor(tube__A__surface="lid", **top)
    bottom = end_factor(tube__A__bottom_below="15 mm")
    assert lid == pytest.approx(bottom, rel=1e-12)
    assert 1 < free < lid


def test_far_ends_are_not_felt():
    assert end_factor() == 1.0


def test_viscosity_falls_by_the_factor():
    near = result(tube__A__bottom_below="12 mm")
    factor = next(c for c in near.corrections if c.name == "ends").factor
    plain = result(tube__A__bottom_below="12 mm", methods={"ends": "none"})
    expected = plain.viscosity.value / factor
    assert near.viscosity.value == pytest.approx(expected, rel=2e-5)  # Re moves a little too
    assert near.stokes_viscosity.value == pytest.approx(plain.stokes_viscosity.value, rel=1e-12)


def test_classical_end_factor_of_1907():
    factor = end_factor(methods={"ends": "classical"})
    height = 80 + 200 + 80
    assert factor == pytest.approx(1 + 3.3 * 2.0e-3 / (height * 1e-3), rel=1e-4)


def test_corrections_multiply_to_stokes_over_the_viscosity():
    near = result(tube__A__bottom_below="12 mm", tube__A__release_offset="3 mm")
    product = np.prod([correction.factor for correction in near.corrections])
    assert near.stokes_viscosity.value / near.viscosity.value == pytest.approx(product, rel=1e-9)
    drop = near.drops[0]
    assert drop.end > 1
