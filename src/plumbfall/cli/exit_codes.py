"""Exit codes of the commands (INTERFACE section 4)."""

from __future__ import annotations

__all__ = ["BAD_INPUT", "DONE", "INTERRUPTED", "INVALID", "UNDECIDED"]

DONE, INVALID, BAD_INPUT, UNDECIDED, INTERRUPTED = 0, 1, 2, 3, 130
