"""The ends of the tube: how much longer the fall between the marks takes because of them.

Near an end the drag is (1 + E) times that far away, E dying off within a bore radius or two. The
ball's time between the marks is the integral of dz/v along its path, so that what counts is the
mean of E over the path, and the speed far from the ends is v = L (1 + mean E) / t.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.records import Tube
from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Cells
from plumbfall.physics.ends import end_factor_classical
from plumbfall.physics.exact_ends import END_EXCESS_REACH
from plumbfall.physics.path import path_excess

__all__ = ["Ends", "path_ends"]


@dataclass(frozen=True, slots=True)
class Ends:
    """Mean effect of both ends on each cell's path, arrays of shape (cells,).

    ``factor`` is 1 + mean E. The others are derivatives of its logarithm: with respect to
    ln(diameter ratio) at a given bore, to ln(bore) at a given ratio, and to the distances of the
    first mark from the surface and of the last from the bottom [1/m]; ``length_share`` is
    d ln(length x factor)/d ln(length). ``unknown`` marks cells whose excess cannot be had.
    """

    factor: Numbers
    by_ratio: Numbers
    by_bore: Numbers
    by_surface: Numbers
    by_bottom: Numbers
    length_share: Numbers
    unknown: np.ndarray


def path_ends(
    inputs: Inputs, cells: Cells, tubes: Sequence[Tube], method: str = "table"
) -> Ends | None:
    """Return the effect of the tube's ends; ``None`` where there is none.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    cells : Cells
        Which tube and marks each cell has.
    tubes : sequence of Tube
        The bench's tubes, as the cells count them.
    method : {"table", "classical", "none"}
        The computed excess, the factor of 1907, or nothing.

    Notes
    -----
    Distances that the bench sheet does not give are taken as out of reach, which a finding says.
    """
    if method == "none":
        return None
    if method == "classical":
        return _classical(inputs)
    roles = inputs.roles
    radius = roles["bore"].value / 2
    ratio = (roles["diameter"].value + roles["gauge"].value) / roles["bore"].value
    length = roles["to_mark"].value - roles["from_mark"].value
    first, last = roles["first_mark"].value, roles["last_mark"].value
    above = roles["from_mark"].value - first
    below = (last - first) - (roles["to_mark"].value - first)
    surface = _distance(inputs, "surface_above") + above
    bottom = _distance(inputs, "bottom_below") + below
    if not ((np.minimum(surface, bottom) < END_EXCESS_REACH * radius) & (ratio < 1)).any():
        return None
    lids = np.array([tube.surface == "lid" for tube in tubes])[cells.tube]
    lower = path_excess(ratio, bottom, length, radius, "solid")
    free = path_excess(ratio, np.where(lids, np.inf, surface), length, radius, "free")
    lid = path_excess(ratio, np.where(lids, surface, np.inf), length, radius, "solid")
    mean = lower.mean + free.mean + lid.mean
    unknown = np.isnan(mean)
    factor = np.where(unknown, 1.0, 1 + mean)

    def known(values: Numbers) -> Numbers:
        return np.where(unknown, 0.0, values) / factor

    far = lower.at_far_mark + free.at_far_mark + lid.at_far_mark
    return Ends(
        factor=factor,
        by_ratio=known(lower.by_ratio + free.by_ratio + lid.by_ratio),
        by_bore=known(lower.by_bore + free.by_bore + lid.by_bore),
        by_surface=known(free.by_distance + lid.by_distance),
        by_bottom=known(lower.by_distance),
        length_share=np.where(unknown, 1.0, (1 + far) / factor),
        unknown=unknown,
    )


def _classical(inputs: Inputs) -> Ends:
    """Return the end factor of 1907, one number for the whole path."""
    roles = inputs.roles
    span = roles["last_mark"].value - roles["first_mark"].value
    height = _distance(inputs, "surface_above") + span
    height = height + _distance(inputs, "bottom_below")
    radius = (roles["diameter"].value + roles["gauge"].value) / 2
    factor = np.asarray(end_factor_classical(height_ratio=height / radius))
    share = (factor - 1) / factor
    length = roles["to_mark"].value - roles["from_mark"].value
    return Ends(
        factor=factor,
        by_ratio=share,
        by_bore=share,
        by_surface=-share / height,
        by_bottom=-share / height,
        length_share=1 - share * length / height,
        unknown=np.isinf(height),
    )


def _distance(inputs: Inputs, role: str) -> Numbers:
    column = inputs.roles[role]
    return np.where(column.entry >= 0, column.value, np.inf)
