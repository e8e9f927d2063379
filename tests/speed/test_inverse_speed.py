"""How fast the force balance is inverted, as ratios within one run.

Target: a million inversions at least 3 times faster than ``scipy.optimize.elementwise.find_root``
on the same law. Both work through the same blocks of drops, as a reduction does. The gate stands
at half the target, so that a noisy machine does not fail it; run with ``-s`` to see the figures.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import elementwise

from plumbfall.measurement.balance import Balance
from plumbfall.measurement.inverse import invert
from plumbfall.physics.drag import Bound, DragLaw
from support.costs import cost

Array = NDArray[np.float64]

DROPS, BLOCK = 1_000_000, 16_384
BORE, DENSITY, SPEED = 0.05, 970.0, 0.01
LAW = DragLaw()


def forces(ratio: Array, log_demand: Array) -> Balance:
    """Return a balance that asks for W / (3 pi rho v^2 d^2) at diameter ratios."""
    diameter, one = ratio * BORE, np.ones(1)
    weight = np.exp(log_demand) * 3 * np.pi * DENSITY * (SPEED * diameter) ** 2
    return Balance(
        temperature=one,
        ball_offset=one,
        tube_offset=one,
        liquid_offset=one,
        cold_diameter=diameter,
        cold_volume=one,
        diameter=diameter,
        volume=one,
        bore=BORE * one,
        distance=one,
        time=one,
        speed=SPEED * one,
        mass=one,
        liquid_density=DENSITY * one,
        net_mass=one,
        weight=weight,
        diameter_ratio=ratio,
    )


class Drops:
    """Invented drops in blocks: diameter ratio, logarithms of Reynolds number and demand."""

    def __init__(self, ratio: Array, log_reynolds: Array) -> None:
        self.ratio, self.log_reynolds = ratio, log_reynolds
        self.blocks = [slice(i, i + BLOCK) for i in range(0, len(ratio), BLOCK)]
        self.log_demand = np.concatenate(
            [
                LAW.at(ratio[block]).evaluate(log_reynolds[block])[0] - log_reynolds[block]
                for block in self.blocks
            ]
        )
        self.forces = [forces(ratio[block], self.log_demand[block]) for block in self.blocks]

    def invert(self, bind: Callable[[slice], tuple[Bound, Array | float]]) -> Iterator[Array]:
        """Yield ln Re of every block by the inverse under test, its law bound block by block."""
        for block, balance in zip(self.blocks, self.forces, strict=True):
            bound, shift = bind(block)
            yield invert(balance, bound, 0.0, shift).log_reynolds

    def find_root(self) -> Iterator[Array]:
        """Yield ln Re of every block by the root-finder of scipy, its law bound block by block.

        The root-finder drops elements as they converge, so that the law is taken at their index.
        """
        top = float(np.log(LAW.max_reynolds))
        for block in self.blocks:
            demand = self.log_demand[block]
            bound = LAW.at(self.ratio[block])
            whole = np.arange(len(demand))

            def missing(x: Array, index: Array, q: Array, bound: Bound = bound) -> Array:
                law = bound if len(index) == len(bound.wall) else bound.take(index)
                return law.evaluate(x)[0] - x - q

            low = np.log(bound.wall) - demand - 1e-9  # as K >= K0
            found = elementwise.find_root(
                missing, (low, np.full(len(demand), top)), args=(whole, demand)
            )
            assert found.success.all()
            yield found.x


def run(blocks: Iterator[Array]) -> None:
    """Work through all blocks, keeping none."""
    for _ in blocks:
        pass


@pytest.fixture(scope="module")
def many() -> Drops:
    rng = np.random.default_rng(20260302)
    return Drops(rng.uniform(0.01, 0.6, DROPS), np.log(10.0) * rng.uniform(-3, 1.9, DROPS))


def test_a_million_inversions_against_a_vectorised_root_finder(many, say):
    def bind(block: slice) -> tuple[Bound, float]:
        return LAW.at(many.ratio[block]), 0.0

    np.testing.assert_allclose(
        np.concatenate(list(many.invert(bind))), many.log_reynolds, atol=1e-12
    )
    ours = cost(lambda: run(many.invert(bind)))
    some = Drops(many.ratio[: 16 * BLOCK], many.log_reynolds[: 16 * BLOCK])
    np.testing.assert_allclose(np.concatenate(list(some.find_root())), some.log_reynolds, atol=1e-9)
    theirs = cost(lambda: run(some.find_root())) * DROPS / len(some.ratio)
    say(
        f"1e6 inversions: {ours:.2f} s with both slopes, root-finder {theirs:.2f} s, "
        f"{theirs / ours:.1f} times faster (target 3); law bound once a drop in both"
    )
    assert theirs / ours >= 1.5


def test_draws_of_one_ball_are_quicker_still(many, say):
    # as draws of one ball in one tube: ratios 3e-6 about 0.04, so that one binding serves all
    rng = np.random.default_rng(7)
    shift = 3e-6 * rng.standard_normal(DROPS).clip(-3, 3)
    near = Drops(0.04 * np.exp(shift), np.log(0.5) + 1e-3 * rng.standard_normal(DROPS))
    one = LAW.at(0.04)

    def bind(block: slice) -> tuple[Bound, Array]:
        return one, shift[block]

    found = np.concatenate(list(near.invert(bind)))
    # what the first order leaves out: about the square of the largest shift, 1e-5
    np.testing.assert_allclose(found, near.log_reynolds, rtol=0, atol=2e-10)
    ours = cost(lambda: run(near.invert(bind)))
    each = cost(lambda: run(many.invert(lambda block: (LAW.at(many.ratio[block]), 0.0))))
    say(f"draws of one ball: {ours:.2f} s for 1e6, {each / ours:.1f} times faster than any balls")
    assert each / ours >= 1.5
