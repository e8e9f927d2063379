"""How often faults are found, and how often good run sets are warned about."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field

import plumbfall as pf
from plumbfall.results import Finding
from support.faults import FAULTS, Fault
from support.planted import clean_benches, many
from support.record_faults import FAULTS_OF_RECORDS

__all__ = ["ALL_FAULTS", "ELSEWHERE", "Quiet", "Study", "clean_sets", "found_share", "long_study"]

ALL_FAULTS: tuple[Fault, ...] = (*FAULTS, *FAULTS_OF_RECORDS)
"""Every planted fault, those within run sets first."""

FAULTY_SETS, FAULTY_SEED = 200, 12
CLEAN_KINDS, CLEAN_SETS, CLEAN_SEED = 100, 20, 14
"""Sizes and seeds of the long study."""

ELSEWHERE = {
    "straggler": "lies between two limits: tests/findings (ten copper wires of 1969)",
    "constant-varies": "is found by `calibrate`: tests/calibration",
    "input-changed": "needs a tube constant: tests/calibration, tests/findings",
    "constant-outside-domain": "needs a tube constant: tests/calibration, tests/findings",
    "linear-not-validated": "needs draws of the inputs: tests/run_sets",
    "reference-not-independent": "is found by `check`: tests/calibration",
}
"""Codes that no invented run set alone can have, and where they are tested."""


@dataclass
class Quiet:
    """Good run sets: how many there were, and which warnings they raised."""

    sets: int = 0
    warned: int = 0
    codes: Counter[str] = field(default_factory=Counter)

    @property
    def share(self) -> float:
        """Part of the run sets that were warned about."""
        return self.warned / self.sets


def found_share(fault: Fault, sets: int, seed: int) -> float:
    """Return the part of run sets with a fault in which its code is found."""
    table, bench = fault.make(sets, seed)
    found = pf.reduce(table, bench, draws=0).reduced.found
    return sum(_has(one, fault.code, fault.severity) for one in found) / len(found)


def clean_sets(kinds: int, sets: int, seed: int) -> Quiet:
    """Return what good run sets of many kinds raise, each on a bench drawn for itself."""
    quiet = Quiet()
    for number, clean in enumerate(clean_benches(kinds, seed)):
        table = many(clean, sets, 1000 * seed + number)
        for found in pf.reduce(table, clean.bench, draws=0).reduced.found:
            codes = {one.code for one in found if one.severity != "note"}
            quiet.sets += 1
            quiet.warned += bool(codes)
            quiet.codes.update(codes)
    return quiet


@dataclass(frozen=True)
class Study:
    """The long study: the rates of every fault, and what good run sets raise."""

    faults: tuple[tuple[Fault, float], ...]
    quiet: Quiet


def long_study() -> Study:
    """Run the study that the document has the figures of; it takes a minute."""
    return Study(
        faults=tuple((fault, found_share(fault, FAULTY_SETS, FAULTY_SEED)) for fault in ALL_FAULTS),
        quiet=clean_sets(CLEAN_KINDS, CLEAN_SETS, CLEAN_SEED),
    )


def _has(findings: Iterable[Finding], code: str, severity: str) -> bool:
    return any((one.code, one.severity) == (code, severity) for one in findings)
