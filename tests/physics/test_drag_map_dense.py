"""The default drag law looked at closely: it rises, is smooth, and its slopes are its own."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import cumulative_simpson

from plumbfall.physics import inertia_factor, tube_drag_factor, wall_factor
from plumbfall.physics.drag_map import DragMap
from plumbfall.physics.drag_surface import unbounded_excess

RATIOS = np.unique(
    np.concatenate(
        ([0.0], np.geomspace(1e-6, 0.01, 150), np.linspace(0.01, 0.8, 400), [0.0099999, 0.0100001])
    )
)
REYNOLDS = np.unique(
    np.concatenate(([0.0], np.geomspace(1e-6, 1.0, 120), np.linspace(1.0, 100.0, 200)))
)


@pytest.fixture(scope="module")
def grid():
    """ln K and its local powers w and s, ratios along the last axis."""
    with np.errstate(divide="ignore"):
        x = np.log(REYNOLDS)[:, None]
    return DragMap().at(RATIOS).expand(x)


def test_it_rises_in_both_arguments_over_the_whole_range(grid):
    log_factor, by_ratio, by_reynolds = grid
    assert np.isfinite(log_factor).all()
    assert np.isfinite(by_ratio).all()
    assert np.isfinite(by_reynolds).all()
    assert (np.diff(log_factor, axis=1) > 0).all()
    assert (by_ratio >= 0).all()
    assert (by_ratio[:, 1:] > 0).all()
    assert (by_reynolds < 1).all()
    tabled = RATIOS >= 0.01
    assert (np.diff(log_factor, axis=0)[:, tabled] >= 0).all()
    assert (by_reynolds[:, tabled] >= 0).all()
    # In wider tubes the terms in Re itself cancel but for some 1e-4 of them, the square of the
    # ratio, so that below Reynolds numbers of 1e-4 the rise is from K0 less some 1e-11.
    assert np.diff(log_factor, axis=0).min() > -3e-11
    assert by_reynolds.min() > -3e-11
    assert (by_reynolds[REYNOLDS > 1e-4] > 0).all()


def test_it_is_above_either_cause_alone(grid):
    log_walls = np.log(wall_factor(diameter_ratio=RATIOS))
    assert (grid[0] - log_walls)[:, RATIOS >= 0.01].min() > -1e-14
    assert (grid[0] - log_walls).min() > -5e-11  # as above
    log_alone = unbounded_excess(np.log(REYNOLDS[1:]))[0][:, None]
    assert (grid[0][1:] - log_alone).min() > -1e-14


def test_slopes_add_up_to_the_value():
    ratios = np.geomspace(1e-3, 0.8, 1501)
    for reynolds in (1e-3, 0.3, 7.0, 100.0):
        log_factor, slope, _ = DragMap().at(ratios).expand(np.log(reynolds))
        whole = cumulative_simpson(slope, x=np.log(ratios), initial=0.0)
        np.testing.assert_allclose(whole, log_factor - log_factor[0], rtol=0, atol=2e-6)
    numbers = np.geomspace(1e-4, 100.0, 1501)
    for ratio in (0.0, 0.004, 0.03, 0.3, 0.8):
        log_factor, _, slope = DragMap().at(ratio).expand(np.log(numbers))
        whole = cumulative_simpson(slope, x=np.log(numbers), initial=0.0)
        np.testing.assert_allclose(whole, log_factor - log_factor[0], rtol=0, atol=2e-6)


def test_slopes_have_no_steps():
    # a step in a slope would show as a difference that halving the distance does not halve
    def largest(count: int) -> tuple[float, float]:
        x = np.log(np.geomspace(1e-3, 100.0, 7))[:, None]
        _, by_ratio, by_reynolds = DragMap().at(np.geomspace(0.01, 0.8, count)).expand(x)
        fine = np.log(np.geomspace(1e-3, 100.0, count))[:, None]
        _, _, along = DragMap().at(np.geomspace(0.01, 0.8, 7)).expand(fine)
        across = max(abs(np.diff(by_ratio, axis=1)).max(), abs(np.diff(by_reynolds, axis=1)).max())
        return across, abs(np.diff(along, axis=0)).max()

    coarse, fine = largest(2001), largest(4001)
    for one, other in zip(coarse, fine, strict=True):
        assert other < 0.55 * one


def test_wide_tubes_tend_to_no_tube():
    # Faxén 1922 and its screening: what a wide wall adds is of the first order in the ratio
    reynolds = np.array([0.0, 0.01, 0.3, 5.0, 100.0])
    none = tube_drag_factor(diameter_ratio=0.0, reynolds=reynolds)
    for ratio in (1e-3, 1e-4, 1e-5):
        added = tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds) - none
        assert (added >= 0).all()
        assert (added <= 2.2 * ratio).all()
        assert added[0] == pytest.approx(2.10444 * ratio, rel=2.2 * ratio + 2e-6)
    assert none == pytest.approx(inertia_factor(reynolds=reynolds), rel=1e-3)


def test_the_expansion_is_the_value_and_the_slopes():
    drag, x = DragMap().at(np.array([0.004, 0.05, 0.6])), np.log(3.0)
    log_factor, by_ratio, by_reynolds = drag.expand(x)
    np.testing.assert_allclose(log_factor, drag.evaluate(x)[0], rtol=1e-15)
    np.testing.assert_array_equal(drag.slopes(x), (by_ratio, by_reynolds))
