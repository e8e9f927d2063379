"""Key paths of the bench sheet, written as they would be typed in TOML."""

from __future__ import annotations

import json
import re

__all__ = ["key_path"]

_BARE = re.compile(r"[A-Za-z0-9_-]+")


def key_path(*parts: str | int) -> str:
    """Return the path of nested keys; a name that is not a bare key is quoted.

    >>> key_path("tube", "A", "marks", 1)
    'tube.A.marks[1]'
    >>> key_path("set", "batch 118", "temperature")
    'set."batch 118".temperature'
    """
    path = ""
    for part in parts:
        if isinstance(part, int):
            path += f"[{part}]"
            continue
        bare = _BARE.fullmatch(part) is not None
        path += ("." if path else "") + (part if bare else json.dumps(part, ensure_ascii=False))
    return path
