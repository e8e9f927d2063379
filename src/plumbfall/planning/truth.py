"""What is true of a bench, drawn: one value of every entry, and of what each drop has to itself."""

from __future__ import annotations

import hashlib
from dataclasses import replace

import numpy as np
from numpy.random import PCG64, Generator, SeedSequence

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.physics.gravity import normal_gravity
from plumbfall.uncertainty.joint_draws import JointDraws

__all__ = ["draw_entries", "drops_generator", "with_entries"]

PURPOSE = "simulate"
"""Keeps these draws apart from those of Monte Carlo, which has streams of the same names."""


def draw_entries(inputs: Inputs, seed: int, sets: int) -> Numbers:
    """Draw every entry of the bench in use, shape (inputs, sets).

    An entry's draws follow from its key path and the seed alone, so that run sets of one seed
    share what is true of what they share.
    """
    drawn = np.empty((len(inputs.estimates), sets))
    JointDraws(inputs.estimates, seed=_mixed(seed)).fill(drawn)
    return drawn


def drops_generator(seed: int, run_set: str) -> Generator:
    """Return the source of what each drop of a run set has to itself."""
    return Generator(PCG64(SeedSequence(_mixed(seed, run_set))))


def with_entries(inputs: Inputs, drawn: Numbers) -> Inputs:
    """Return the inputs with the entries as drawn, shape (cells x sets,), a cell's sets together.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell, as the bench sheet gives them.
    drawn : array, shape (inputs, sets)
        True values of the entries.
    """
    n, sets = len(inputs.weighed), drawn.shape[1]
    repeated = inputs.take(np.repeat(np.arange(n), sets))
    roles = {}
    for role, column in inputs.roles.items():
        grid = np.where((column.entry >= 0)[:, None], drawn[column.entry], column.value[:, None])
        roles[role] = Column(grid.ravel(), repeated.roles[role].entry)
    if inputs.roles["latitude"].present:
        latitude, elevation = (
            drawn[inputs.roles[role].entry[0]]
            if inputs.roles[role].present
            else np.full(sets, inputs.roles[role].value[0])
            for role in ("latitude", "elevation")
        )
        gravity = np.asarray(normal_gravity(latitude=latitude, elevation=elevation))
        roles["gravity"] = Column(np.tile(gravity, n), repeated.roles["gravity"].entry)
    for place, constant in enumerate(inputs.constants):
        # a tube constant was found with inputs of its own, whose errors it carries
        nominal = np.array([inputs.estimates[entry].value for entry in constant.entries])
        shift = constant.slopes @ (drawn[constant.entries] - nominal[:, None])
        here = np.repeat(inputs.constant_of == place, sets)
        column = roles["constant"]
        value = np.where(here, column.value + np.tile(shift, n), column.value)
        roles["constant"] = Column(value, column.entry)
    return replace(repeated, roles=roles)


def _mixed(seed: int, *words: str) -> int:
    """Return a seed of its own for a purpose and further words."""
    digest = hashlib.sha256("\n".join([PURPOSE, str(seed), *words]).encode()).digest()
    return int.from_bytes(digest[:16], "little")
