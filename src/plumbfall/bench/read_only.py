"""Mappings that cannot be changed, yet can be copied and pickled with the records they are in."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TypeVar

__all__ = ["ReadOnly"]

Value = TypeVar("Value")


class ReadOnly(Mapping[str, Value]):
    """The entries of a mapping, in its order; later changes of that mapping do not show.

    The standard library's read-only view of a dict can be neither pickled nor copied deeply,
    and a bench sheet is handed to other processes.
    """

    __slots__ = ("_entries",)

    def __init__(self, entries: Mapping[str, Value] | None = None) -> None:
        self._entries = dict(entries or {})

    def __getitem__(self, name: str) -> Value:
        return self._entries[name]

    def __iter__(self) -> Iterator[str]:
        return iter(self._entries)

    def __len__(self) -> int:
        return len(self._entries)

    def __contains__(self, name: object) -> bool:
        return name in self._entries

    def __repr__(self) -> str:
        return f"ReadOnly({self._entries!r})"
