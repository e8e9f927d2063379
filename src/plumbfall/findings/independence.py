"""Whether a certified liquid can check a tube constant: not where the constant rests on it."""

from __future__ import annotations

from collections.abc import Iterable

from plumbfall.bench.records import Reference
from plumbfall.measurement.constants import ConstantInUse
from plumbfall.results import Finding

__all__ = ["reference_not_independent"]


def reference_not_independent(
    constants: Iterable[ConstantInUse], reference: Reference
) -> Finding | None:
    """Find a tube constant in use that rests on a reference, its certificate or its bottle."""
    for constant in constants:
        chosen = constant.chosen
        for known in chosen.certified:
            alike = {
                "reference": known.reference == reference.name,
                "certificate": bool(known.certificate)
                and known.certificate == reference.identity.certificate,
                "bottle": bool(known.identity) and known.identity == reference.identity.identity,
            }
            for what, same in alike.items():
                if same:
                    name = known.certificate or known.identity or reference.name
                    return Finding(
                        code="reference-not-independent",
                        severity="warning",
                        message=f"the constant of tube {chosen.tube} and ball {chosen.ball} rests "
                        f"on the same {what} ({name}): measured and certified value are not "
                        "independent, and the check shows repeatability only",
                        remedy="check with another certified liquid",
                    )
    return None
