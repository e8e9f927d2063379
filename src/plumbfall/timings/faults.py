"""What is wrong with a cell."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Fault"]


@dataclass(frozen=True, slots=True)
class Fault:
    """What is wrong with a cell, and what to do about it."""

    message: str
    remedy: str
