"""Tube constants in use: which one each calibrated tube and ball has, and whose errors it shares.

A constant of a file was found with inputs of its own. Where the bench sheet still has such an
input, with the same value, uncertainty and identity, it is the same random variable: what it did
to the constant and what it does to the drops partly cancel. Otherwise it is another variable.
"""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.constant_file import read_constants
from plumbfall.bench.identities import identity_of
from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench, Constant, Tube
from plumbfall.bench.stored_constants import (
    Certified,
    ConstantFile,
    Domain,
    StoredConstant,
    StoredInput,
)
from plumbfall.errors import InputError, Problem
from plumbfall.estimate import Estimate

__all__ = [
    "AT_CALIBRATION",
    "ChosenConstant",
    "ConstantInUse",
    "ConstantsInUse",
    "choose_constants",
    "constant_files",
    "enter_constants",
]

AT_CALIBRATION = " (at calibration)"
"""Added to the name of an input of a constant that the bench sheet has otherwise by now."""

Pair = tuple[str, str]
"""Names of a tube and a ball."""


@dataclass(frozen=True, slots=True)
class ChosenConstant:
    """The constant of one tube and ball.

    ``own`` is the constant with what it shares with no other input; ``stored`` is ``None`` and
    ``inputs`` empty where it was typed by hand.
    """

    tube: str
    ball: str
    key: str
    own: Estimate
    certified: tuple[Certified, ...]
    stored: StoredConstant | None = None
    file: ConstantFile | None = None

    @property
    def inputs(self) -> tuple[StoredInput, ...]:
        """What it was found with."""
        return () if self.stored is None else self.stored.inputs

    @property
    def domain(self) -> Domain:
        """Between what it was found."""
        return Domain() if self.stored is None else self.stored.domain


@dataclass(frozen=True, slots=True)
class ConstantInUse:
    """A constant as the measurement equation has it.

    ``entries`` count into the estimates of the inputs, ``slopes`` are the constant's sensitivities
    to them, both of shape (inputs of the constant,). ``changed`` names those of the bench sheet
    that are not as they were at calibration.
    """

    chosen: ChosenConstant
    entries: NDArray[np.intp]
    slopes: NDArray[np.float64]
    changed: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class ConstantsInUse:
    """The constants of all cells: ``place`` counts into ``used``, -1 for cells without one."""

    used: tuple[ConstantInUse, ...]
    place: NDArray[np.intp]
    own_entry: NDArray[np.intp]
    value: NDArray[np.float64]


def constant_files(bench: Bench) -> dict[str, ConstantFile]:
    """Read every file of constants that the bench sheet names, by the name of its entry.

    Raises
    ------
    InputError
        Where one cannot be read.
    """
    folder = Path(bench.path).parent
    read: dict[Path, ConstantFile] = {}
    found = {}
    for name, constant in bench.constants.items():
        if constant.file is None:
            continue
        path = folder / constant.file
        if path not in read:
            read[path] = read_constants(path, key_path("constant", name, "file"), bench.path)
        found[name] = read[path]
    return found


def choose_constants(bench: Bench, pairs: Iterable[Pair]) -> dict[Pair, ChosenConstant]:
    """Return the constant of every pair of a calibrated tube and a ball.

    Raises
    ------
    InputError
        For pairs that have none, with the pairs that have one.
    """
    found: dict[Pair, ChosenConstant] = {}
    problems = []
    files: dict[str, ConstantFile] = {}
    for tube, ball in pairs:
        entries = _entries_of(bench, bench.tubes[tube])
        if not files and any(entry.file for entry in entries):
            files = constant_files(bench)
        chosen = next(filter(None, (_match(e, tube, ball, files) for e in entries)), None)
        if chosen is not None:
            found[tube, ball] = chosen
        else:
            problems.append(_without(bench, tube, ball, entries, files))
    if problems:
        raise InputError(problems)
    return found


def _entries_of(bench: Bench, tube: Tube) -> list[Constant]:
    """Return the entries of a tube: those it names, else those that name it; a ball's own first."""
    named = [bench.constants[name] for name in tube.constant]
    mine = named or [one for one in bench.constants.values() if one.tube == tube.name]
    return sorted(mine, key=lambda one: one.ball is None)


def _match(
    entry: Constant, tube: str, ball: str, files: Mapping[str, ConstantFile]
) -> ChosenConstant | None:
    if entry.ball not in (None, ball):
        return None
    if entry.value is not None:
        certificate = entry.identity.certificate
        certified = (Certified("", certificate),) if certificate else ()
        return ChosenConstant(tube, ball, key_path("constant", entry.name), entry.value, certified)
    file = files[entry.name]
    for stored in file.constants:
        if (stored.tube, stored.ball) == (tube, ball):
            own = Estimate(
                stored.value,
                stored.own_u,
                "exact" if not stored.own_u else "t" if math.isfinite(stored.own_dof) else "normal",
                stored.own_dof,
                key_path("constant", entry.name, ball),
                "m2/s2",
            )
            return ChosenConstant(
                tube,
                ball,
                key_path("constant", entry.name),
                own,
                stored.certified,
                stored,
                file,
            )
    return None


def _without(
    bench: Bench,
    tube: str,
    ball: str,
    entries: list[Constant],
    files: Mapping[str, ConstantFile],
) -> Problem:
    known = [
        f"tube '{stored.tube}' with ball '{stored.ball}'"
        for entry in entries
        if entry.name in files
        for stored in files[entry.name].constants
    ]
    known += [f"ball '{entry.ball}'" for entry in entries if entry.value and entry.ball]
    remedy = "calibrate it: plumbfall calibrate TIMINGS --reference R --out constant.json"
    if not entries:
        remedy += f', then add constant = "NAME" and [constant.NAME] with file to [tube.{tube}]'
    elif known:
        remedy += f" (there are constants for {', '.join(dict.fromkeys(known))})"
    return Problem(
        f"there is no constant for the calibrated tube '{tube}' with ball '{ball}'",
        remedy,
        path=bench.path,
        key=key_path("tube", tube),
    )


def enter_constants(
    bench: Bench,
    pairs: Mapping[int, Pair],
    place: NDArray[np.intp],
    register: Callable[[Estimate], int],
    known: Mapping[str, Estimate],
) -> ConstantsInUse:
    """Enter constants and what they were found with among the inputs.

    Parameters
    ----------
    bench : Bench
        The bench sheet.
    pairs : mapping of int to (tube, ball)
        What each place stands for.
    place : array of int, shape (cells,)
        Each cell's place, -1 without a constant.
    register : callable
        Adds an estimate and returns its place; one of a known name is the known one.
    known : mapping of str to Estimate
        Inputs in use by name.
    """
    chosen = choose_constants(bench, pairs.values())
    sheet = {**bench.quantities(), **known}
    apart: dict[tuple[str, float, float, str], str] = {}
    used = []
    n_places = len(pairs)
    value, own = np.ones(n_places + 1), np.full(n_places + 1, -1, dtype=np.intp)
    for at, pair in pairs.items():
        constant = chosen[pair]
        value[at], own[at] = constant.own.value, register(constant.own)
        entries, changed = [], []
        for stored in constant.inputs:
            name = stored.estimate.name
            if (now := sheet.get(name)) is not None and _same(bench, stored, now):
                entries.append(register(now))
                continue
            if now is not None:
                changed.append(name)
            entries.append(register(_apart(stored, name in sheet, apart)))
        used.append(
            ConstantInUse(
                constant,
                np.array(entries, dtype=np.intp),
                np.array([one.sensitivity for one in constant.inputs]),
                tuple(changed),
            )
        )
    return ConstantsInUse(tuple(used), place, own[place], value[place])


def _same(bench: Bench, stored: StoredInput, now: Estimate) -> bool:
    """Whether an input is one variable in both files: equal key path, value, u and identity."""
    return (
        now.value == stored.estimate.value
        and now.u == stored.estimate.u
        and identity_of(bench, now.name) == stored.identity
    )


def _apart(
    stored: StoredInput, otherwise: bool, apart: dict[tuple[str, float, float, str], str]
) -> Estimate:
    """Return an input that the bench sheet has not, or otherwise, under a name of its own.

    Constants of several files that were found with one and the same input share it.
    """
    estimate = stored.estimate
    key = (estimate.name, estimate.value, estimate.u, stored.identity)
    if key not in apart:
        name = estimate.name + (AT_CALIBRATION if otherwise else "")
        others = sum(one == name or one.startswith(f"{name} #") for one in apart.values())
        apart[key] = f"{name} #{others + 1}" if others else name
    return dataclasses.replace(estimate, name=apart[key])
