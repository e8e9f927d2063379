"""The registry of laws: the one place that knows which corrections may be chosen, and their range.

A wall law's range ends at the last tenth of the diameter ratio where its error against the exact
solution is below one eighth; an inertia law's where its author's does, or by the same measure.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

from plumbfall.errors import InputError, nearest_name
from plumbfall.physics import ends, inertia, slopes, together, wall
from plumbfall.physics.drag_map import tube_drag_table
from plumbfall.physics.drag_surface import HIGHEST_REYNOLDS, RATIO_LIMITS
from plumbfall.physics.numeric import Numeric
from plumbfall.physics.ranges import check_range
from plumbfall.physics.start_up import (
    RUN_IN_HIGHEST_REYNOLDS,
    RUN_IN_RATIO_LIMITS,
    run_in_delay,
)

__all__ = ["DEFAULTS", "KINDS", "OWN", "Law", "law", "laws_of"]

KINDS = ("walls", "inertia", "together", "ends", "run-in")
"""Kinds of law, in the order in which they enter the drag."""

DEFAULTS: Mapping[str, str] = MappingProxyType(
    {
        "walls": "exact",
        "inertia": "compact",
        "together": "table",
        "ends": "table",
        "run-in": "table",
    }
)
"""The law of each kind that is used where none is chosen."""

RATIO = "diameter ratio"
REYNOLDS = "Reynolds number"


@dataclass(frozen=True, slots=True, kw_only=True)
class Law:
    """One correction that may be chosen.

    ``function`` is its formula; ``kernel`` gives what the inverse needs of it (see
    :mod:`plumbfall.physics.slopes`). ``low`` to ``high`` is the range of ``variable``; a combining
    rule is limited in the diameter ratio too, by ``ratio_high``. ``error`` states the largest error
    in words, ``source_key`` is the key of ``docs/references.md`` and ``citation`` its short form.
    """

    name: str
    kind: str
    function: Callable[..., Numeric]
    variable: str
    low: float
    high: float
    error: str
    source_key: str
    citation: str
    kernel: Callable[..., Any] | None = None
    ratio_high: float = math.inf

    def check(self, value: Numeric) -> None:
        """Raise :class:`PhysicsRangeError` unless every value is within the law's range."""
        check_range(value, low=self.low, high=self.high, variable=self.variable, where=self.where)

    def check_ratio(self, diameter_ratio: Numeric) -> None:
        """Raise :class:`PhysicsRangeError` beyond the diameter ratio of a combining rule."""
        check_range(diameter_ratio, low=0.0, high=self.ratio_high, variable=RATIO, where=self.where)

    @property
    def where(self) -> str:
        """The law as an error names it."""
        return f"law '{self.name}' ({self.kind}; {self.citation})"


def law(kind: str, name: str) -> Law:
    """Return the law of a kind by its name.

    Raises
    ------
    InputError
        If there is no such law; the remedy names the nearest one.

    Examples
    --------
    >>> law("walls", "bohlin").high
    0.6
    """
    known = laws_of(kind)
    if name in known:
        return known[name]
    near = nearest_name(name, known)
    hint = f"did you mean '{near}'? " if near else ""
    raise InputError(
        f"there is no {kind} law '{name}'",
        key=f"methods.{kind}",
        remedy=f"{hint}known: {', '.join(known)}",
    )


def laws_of(kind: str) -> Mapping[str, Law]:
    """Return the laws of a kind by name, in the order in which they are listed.

    Raises
    ------
    InputError
        If there is no such kind.
    """
    if kind not in _LAWS:
        near = nearest_name(kind, KINDS)
        raise InputError(
            f"there is no kind of law '{kind}'",
            key="methods",
            remedy=f"{f'did you mean {near!r}? ' if near else ''}known: {', '.join(KINDS)}",
        )
    return _LAWS[kind]


OWN = "computed by plumbfall from Navier-Stokes"
_OWN_CREEPING = "computed by plumbfall from Stokes flow"


def _wall(name: str, high: float, error: str, source_key: str, citation: str) -> Law:
    stem = name.replace("-", "_")
    return Law(
        name=name,
        kind="walls",
        function=getattr(wall, f"wall_factor_{stem}"),
        kernel=getattr(slopes, f"wall_pair_{stem}"),
        variable=RATIO,
        low=0.0,
        high=high,
        error=error,
        source_key=source_key,
        citation=citation,
    )


def _inertia(name: str, high: float, error: str, source_key: str, citation: str) -> Law:
    stem = name.replace("-", "_")
    return Law(
        name=name,
        kind="inertia",
        function=getattr(inertia, f"inertia_factor_{stem}"),
        kernel=getattr(slopes, f"inertia_excess_{stem}"),
        variable=REYNOLDS,
        low=0.0,
        high=high,
        error=error,
        source_key=source_key,
        citation=citation,
    )


def _together(name: str, high: float, error: str, source_key: str, citation: str) -> Law:
    return Law(
        name=name,
        kind="together",
        function=getattr(together, f"tube_drag_{name}"),
        kernel=getattr(slopes, f"{name}_excess"),
        variable=REYNOLDS,
        low=0.0,
        high=high,
        ratio_high=0.8,
        error=error,
        source_key=source_key,
        citation=citation,
    )


_OSEEN = "Oseen 1910, Ark. Mat. Astron. Fys. 6, no. 29"
_ABRAHAM = "Abraham 1970, Phys. Fluids 13, 2194"
_FAXEN = "Faxén 1922/23, Ark. Mat. Astron. Fys. 17, no. 27"
_ALL = (
    _wall("exact", 0.95, "1e-9 to ratio 0.8, 1e-6 to 0.95", "Plumbfall", _OWN_CREEPING),
    _wall("ladenburg", 0.2, "12 % at 0.2", "Ladenburg1907", "Ladenburg 1907, Ann. Phys. 328, 447"),
    _wall("faxen", 0.5, "6.4 % at 0.5, 1.4 % at 0.4", "Faxen1922", _FAXEN),
    _wall("faxen-cubic", 0.4, "4.7 % at 0.4, 0.8 % at 0.3", "Faxen1922", _FAXEN),
    _wall("faxen-linear", 0.2, "2.8 % at 0.2, 0.3 % at 0.1", "Faxen1922", _FAXEN),
    _wall("francis", 0.7, "9.1 % at 0.5", "Francis1933", "Francis 1933, Physics 4, 403"),
    _wall(
        "haberman-sayre",
        0.6,
        "4.5 % at 0.6, 0.02 % to 0.3",
        "HabermanSayre1958",
        "Haberman and Sayre 1958, David Taylor Model Basin report 1143",
    ),
    _wall(
        "bohlin",
        0.6,
        "0.41 % at 0.5, 0.003 % to 0.2",
        "Bohlin1960",
        "Bohlin 1960, Trans. R. Inst. Technol. Stockholm 155",
    ),
    _inertia("compact", 100.0, "0.10 %", "Plumbfall", OWN),
    _inertia(
        "stokes", 1.0, "12 % at 1", "Stokes1851", "Stokes 1851, Trans. Camb. Philos. Soc. 9, 8"
    ),
    _inertia(
        "oseen",
        2.0,
        "11 % at 2, 1.6 % at 0.5",
        "Oseen1910",
        _OSEEN,
    ),
    _inertia(
        "schiller-naumann",
        800.0,
        "4.0 % to 100",
        "SchillerNaumann1933",
        "Schiller and Naumann 1933, Z. Ver. Dtsch. Ing. 77, 318",
    ),
    _inertia(
        "clift-grace-weber",
        1.2e4,
        "1.5 % to 100",
        "Clift1978",
        "Clift, Grace and Weber 1978, Bubbles, Drops and Particles, table 5.2",
    ),
    _inertia(
        "brown-lawler",
        2.0e5,
        "4.9 % to 100",
        "BrownLawler2003",
        "Brown and Lawler 2003, J. Environ. Eng. 129, 222",
    ),
    _inertia("abraham", 5000.0, "8.3 % to 100", "Abraham1970", _ABRAHAM),
    Law(
        name="table",
        kind="together",
        function=tube_drag_table,
        variable=REYNOLDS,
        low=0.0,
        high=HIGHEST_REYNOLDS,
        ratio_high=RATIO_LIMITS[1],
        error="0.005 % (0.015 % below ratio 0.01); walls and inertia are both in it",
        source_key="Plumbfall",
        citation=OWN,
    ),
    _together("screened", 10.0, "0.76 % to 5, 1.8 % to 10", "Plumbfall", OWN),
    _together(
        "additive",
        100.0,
        "9 % at ratio 0.1, Reynolds number 1; 20 % at ratio 0.3, 10",
        "FayonHappel1960",
        "Fayon and Happel 1960, AIChE J. 6, 55",
    ),
    _together(
        "product",
        100.0,
        "12 % at ratio 0.1, Reynolds number 1; 62 % at ratio 0.3, 10",
        "CommonPractice",
        "common practice, no source",
    ),
    Law(
        name="table",
        kind="run-in",
        function=run_in_delay,
        variable=REYNOLDS,
        low=0.0,
        high=RUN_IN_HIGHEST_REYNOLDS,
        ratio_high=RUN_IN_RATIO_LIMITS[1],
        error="15 % of the bias, or 1.5e-4 of the transit; ratio 0.01 to 0.4, density 1.1 to 15",
        source_key="Plumbfall",
        citation=OWN,
    ),
    Law(
        name="table",
        kind="ends",
        function=ends.end_excess,
        variable="distance of the ball from an end over the bore radius",
        low=0.0,
        high=math.inf,
        error="1e-4 of the drag; ratio to 0.8, gap at least 0.01 ball radii, Reynolds number 0",
        source_key="Plumbfall",
        citation=_OWN_CREEPING,
    ),
    Law(
        name="none",
        kind="ends",
        function=ends.end_factor_none,
        variable="distance of the ball from an end over the bore radius",
        low=1.0,
        high=math.inf,
        error="0.12 % at ratio 0.1, 0.6 % at 0.3, 1.9 % at most; at 1.5 bore radii 0.001, 0.006 "
        "and 0.024 %",
        source_key="Plumbfall",
        citation=_OWN_CREEPING,
    ),
    Law(
        name="classical",
        kind="ends",
        function=ends.end_factor_classical,
        variable="liquid height over the ball's radius",
        low=1.0,
        high=math.inf,
        error="1.65 % too high at ratio 0.05, height of 10 bore radii; 3.3 % at 0.1",
        source_key="Ladenburg1907",
        citation="Ladenburg 1907, Ann. Phys. 328, 447",
    ),
)
_LAWS: Mapping[str, Mapping[str, Law]] = MappingProxyType(
    {kind: MappingProxyType({e.name: e for e in _ALL if e.kind == kind}) for kind in KINDS}
)
