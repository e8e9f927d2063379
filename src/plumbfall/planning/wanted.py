"""What is asked of a plan."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["DROPS", "LONGEST", "MOST_DROPS", "Wanted"]

DROPS, MOST_DROPS = 8, 20
"""Drops that are planned, and the most that anybody makes (common practice, no source)."""

LONGEST = 3600.0
"""Longest fall time that is planned [s] (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class Wanted:
    """What is asked of a plan: viscosities [Pa.s], target and coverage as ratios, times in s."""

    viscosities: tuple[float, ...]
    target: float | None
    coverage: float
    drops: int = DROPS
    most_drops: int = MOST_DROPS
    longest: float = LONGEST
