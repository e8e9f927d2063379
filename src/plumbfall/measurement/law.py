"""The drag law that the bench sheet chooses, and what is known of its error."""

from __future__ import annotations

import math
from dataclasses import replace

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.measurement.inputs import MODEL_INPUT
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.laws import laws_of

__all__ = ["LEFT_OUT", "drag_law", "model_estimate"]

LEFT_OUT = 5e-4
"""What every drag law leaves out, as a half-width relative to the drag.

A declared allowance for tubes not quite round and straight, balls that turn or drift, liquid not
quite at rest (common practice, no source). It is part of ``methods.model_uncertainty``, which the
bench sheet may set.
"""

PARTS = ("together", "walls", "inertia")


def drag_law(bench: Bench) -> DragLaw:
    """Return the drag law of ``[methods]``.

    ``drag`` is one or several names of laws, such as ``"product faxen schiller-naumann"``: each
    word takes its part (the rule, the walls, the inertia). Nothing named is the computed table;
    walls or inertia named without a rule are joined by the screened one.

    Raises
    ------
    InputError
        For a word that names no law, and for two words of one part.
    """
    chosen: dict[str, str] = {}
    for word in (bench.methods.drag or "").split():
        part = next((part for part in PARTS if word in laws_of(part)), None)
        if part is None:
            known = "; ".join(f"{part}: {', '.join(laws_of(part))}" for part in PARTS)
            raise InputError(
                f"'{word}' is no drag law", path=bench.path, key="methods.drag", remedy=known
            )
        if part in chosen:
            raise InputError(
                f"'{chosen[part]}' and '{word}' are both laws for {part}",
                path=bench.path,
                key="methods.drag",
                remedy="name one of them",
            )
        chosen[part] = word
    try:
        return DragLaw(**chosen)
    except InputError as error:  # what may not be joined: the law does not know the bench sheet
        raise InputError(replace(problem, path=bench.path) for problem in error.problems) from None


def model_estimate(bench: Bench) -> Estimate:
    """Return the drag law's factor 1 with its uncertainty.

    Declared, it is a relative standard uncertainty for every drop; otherwise it is rectangular
    within the law's own bound at each drop, so that here the half-width is 1 of that bound.
    """
    declared = bench.methods.model_uncertainty
    if declared is not None:
        return Estimate(1.0, declared.value, "normal", math.inf, MODEL_INPUT, "1", declared.text)
    return Estimate(1.0, 1 / math.sqrt(3), "rectangular", math.inf, MODEL_INPUT, "1")
