"""Draws from the distributions an estimate may have (JCGM 101:2008, 6.4).

What is drawn follows from the estimate alone:

============  ==========================  ======================================================
distribution  infinite dof                finite dof
============  ==========================  ======================================================
exact         the value                   the value
normal        normal                      scaled and shifted t: a certificate with its degrees of
                                          freedom (6.4.9.7)
t             normal                      scaled and shifted t, u being s/sqrt(n) (6.4.9.2)
rectangular   rectangular                 curvilinear trapezoid: bounds known inexactly (6.4.3)
triangular    triangular                  the same of a triangle
arcsine       arcsine                     the same of an arcsine
============  ==========================  ======================================================

Bounds of half-width w with finite dof have an inexactness d = w/sqrt(2 dof): the half-width is
rectangular within w - d and w + d. So the worked example in 9.5 takes its degrees of freedom, 50
as d = 0.1 w and 2 as d = 0.5 w. For triangle and arcsine it is the same reasoning, our own.
"""

from __future__ import annotations

import hashlib
import math
from dataclasses import dataclass

import numpy as np
from numpy.random import PCG64, Generator, SeedSequence
from numpy.typing import NDArray

from plumbfall.errors import Problem, nearest_name
from plumbfall.estimate import DISTRIBUTIONS, Estimate

__all__ = ["HALF_WIDTH", "LEAST_DOF_OF_BOUNDS", "Stream", "open_stream", "problems_of", "tail_dof"]

Numbers = NDArray[np.float64]

HALF_WIDTH = {
    "rectangular": math.sqrt(3.0),
    "triangular": math.sqrt(6.0),
    "arcsine": math.sqrt(2.0),
}
"""Half-width over standard uncertainty (JCGM 101:2008, 6.4.2.3, 6.4.5.3, 6.4.6.3)."""

LEAST_DOF_OF_BOUNDS = 0.5
"""Below it bounds would be more inexact than they are wide."""


def tail_dof(estimate: Estimate) -> float:
    """Degrees of freedom of the t distribution that is drawn; infinite for any other shape.

    Moments of an order not below it do not exist: no mean at 1 or less, no variance at 2 or less.
    """
    heavy = estimate.distribution in ("normal", "t") and not estimate.exact
    return estimate.dof if heavy else math.inf


def problems_of(estimate: Estimate) -> list[Problem]:
    """Say why an estimate cannot be drawn; empty where it can."""
    found: list[tuple[str, str]] = []
    if estimate.distribution not in DISTRIBUTIONS:
        near = nearest_name(estimate.distribution, DISTRIBUTIONS)
        known = f"use one of {', '.join(DISTRIBUTIONS)}"
        found.append(
            (
                f"distribution '{estimate.distribution}' is not known",
                f"did you mean '{near}'?" if near else known,
            )
        )
    if not math.isfinite(estimate.value):
        found.append((f"its value is {estimate.value}", "give a finite number"))
    if not 0.0 <= estimate.u < math.inf:
        found.append(
            (f"its standard uncertainty is {estimate.u}", "give a finite number, not below zero")
        )
    elif estimate.u > 0.0 and estimate.distribution == "exact":
        found.append(
            (
                f"it is exact and has a standard uncertainty of {estimate.u:g}",
                "name its distribution, such as normal",
            )
        )
    if not estimate.dof > 0.0:
        found.append((f"its degrees of freedom are {estimate.dof}", "give a number above zero"))
    elif estimate.distribution in HALF_WIDTH and estimate.dof < LEAST_DOF_OF_BOUNDS:
        found.append(
            (
                f"bounds with {estimate.dof:g} degrees of freedom are more inexact than wide",
                f"give at least {LEAST_DOF_OF_BOUNDS:g}",
            )
        )
    return [Problem(message, remedy, key=estimate.name) for message, remedy in found]


@dataclass(frozen=True, slots=True)
class Stream:
    """One input's draws, in order.

    They are taken one after the other from a generator of the input's own, so that they do not
    depend on how many are asked for at once, nor on which other inputs there are.
    """

    estimate: Estimate
    generator: Generator

    def standardised(self, out: Numbers) -> None:
        """Fill with the next deviates in units of the estimate's u, shape (draws,)."""
        shape, dof = self.estimate.distribution, self.estimate.dof
        if shape in HALF_WIDTH:
            self._bounded(out)
        elif math.isfinite(dof):
            out[:] = self.generator.standard_t(dof, len(out))
        else:
            self.generator.standard_normal(out=out)

    def fill(self, out: Numbers) -> None:
        """Fill with the next draws, shape (draws,)."""
        if self.estimate.exact:
            out[:] = self.estimate.value
            return
        self.standardised(out)
        out *= self.estimate.u
        out += self.estimate.value

    def _bounded(self, out: Numbers) -> None:
        """Fill by the inverse of the distribution function, or as a sum of two for triangles.

        References: JCGM 101:2008, 6.4.2.4, 6.4.3.4, 6.4.5.4 and 6.4.6.4.
        """
        shape = self.estimate.distribution
        inexact = 1.0 / math.sqrt(2.0 * self.estimate.dof)
        needed = 1 + (shape == "triangular")
        # a row is one draw's own, so that draws follow each other whatever the length of `out`
        uniform = self.generator.random((len(out), needed + (inexact > 0.0)))
        if shape == "triangular":
            np.add(uniform[:, 0], uniform[:, 1], out=out)
            out -= 1.0
        elif shape == "arcsine":
            np.multiply(uniform[:, 0], math.pi, out=out)
            np.cos(out, out=out)
        else:
            np.multiply(uniform[:, 0], 2.0, out=out)
            out -= 1.0
        if inexact > 0.0:
            out *= 1.0 - inexact + 2.0 * inexact * uniform[:, -1]
        out *= HALF_WIDTH[shape]


def open_stream(estimate: Estimate, *, seed: int, place: int) -> Stream:
    """Start an input's draws from the beginning.

    Parameters
    ----------
    estimate : Estimate
        The input. Its name decides the stream, so that one name is one random variable wherever
        it is used; a nameless input has the stream of its ``place``.
    seed : int
        Not below zero.
    place : int
        Position among the inputs.

    Returns
    -------
    Stream
        Over ``Generator(PCG64(SeedSequence(seed, spawn_key=key)))``; the key is (0, place), or 1
        and the first 128 bits of the name's SHA-256 in four words.
    """
    key: tuple[int, ...] = (0, place)
    if estimate.name:
        digest = hashlib.sha256(estimate.name.encode()).digest()
        key = (1, *(int.from_bytes(digest[i : i + 4], "little") for i in range(0, 16, 4)))
    return Stream(estimate, Generator(PCG64(SeedSequence(seed, spawn_key=key))))
