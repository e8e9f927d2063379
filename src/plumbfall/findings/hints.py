"""What may have gone wrong in writing a time down."""

from __future__ import annotations

import numpy as np

from plumbfall.findings.data import RunData

__all__ = ["transposed"]

NEAR = 2.0
"""A mended time must bring its drop within so many standard deviations of the others."""


def transposed(data: RunData, drop: int) -> str:
    """Say whether two digits changed about would bring an outlying time back among the others.

    Parameters
    ----------
    data : RunData
        What was reduced.
    drop : int
        The place of the outlying drop among the used ones.

    Returns
    -------
    str
        A sentence to append to a message, or nothing.
    """
    time = float(data.selection.time[drop])
    text = f"{time:.6f}".rstrip("0")
    run_set = data.selection.run_set[drop]
    others = np.flatnonzero(data.selection.run_set == run_set)
    others = others[others != drop]
    value = data.errors.value
    scatter = value[others].std(ddof=1) if len(others) > 1 else 0.0
    for place in range(len(text) - 1):
        swap = place + 1 if text[place + 1] != "." else place + 2
        if text[place] == "." or swap >= len(text) or text[place] == text[swap]:
            continue
        digits = list(text)
        digits[place], digits[swap] = digits[swap], digits[place]
        mended = float("".join(digits))
        if mended <= 0:
            continue
        moved = value[drop] + np.log(mended / time)
        if abs(moved - value[others].mean()) < NEAR * scatter:
            return f"; with two digits changed about it would read {float(mended):g} s and belong"
    return ""
