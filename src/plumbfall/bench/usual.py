"""What a clock of a known kind usually does, with sources; it stands in for keys not given."""

from __future__ import annotations

import math
from collections.abc import Mapping
from types import MappingProxyType
from typing import NamedTuple

__all__ = ["FRAME_INTERVAL", "USUAL", "UsualTimer", "video_scatter"]

FRAME_INTERVAL = 1.0 / 30.0
"""Seconds between two frames of a video when nothing else is known."""


class UsualTimer(NamedTuple):
    """Quantities in the notation of the bench sheet; an empty one has no usual value."""

    per_drop: str
    bias: str
    rate: str
    resolution: str
    sources: Mapping[str, str]

    def source_of(self, keys: tuple[str, ...]) -> str:
        """Return the sources of the named keys, as one sentence part each."""
        return "; ".join(f"{key}: {self.sources[key]}" for key in keys)


_COMMON = "common practice, no source"


def video_scatter(frame_interval: float) -> float:
    """Return the standard deviation of an interval between two events seen on video frames.

    Each event is off by up to half a frame, so the interval's error is triangular with one frame
    as half-width: its standard deviation is a frame over the square root of 6 (GUM 4.3.9).
    """
    return frame_interval / math.sqrt(6.0)


USUAL: Mapping[str, UsualTimer] = MappingProxyType(
    {
        "stopwatch": UsualTimer(
            per_drop="0.10 s",
            bias="0.00(3) s",
            rate="0.00 ± 0.02 %, limits",
            resolution="0.01 s",
            sources={
                "per_drop": "Am. J. Phys. 87, 110 (2019), start and stop by hand",
                "bias": _COMMON,
                "rate": "tolerance of field-standard stopwatches in NIST Handbook 105-5, "
                "as quoted by NIST SOP 24",
                "resolution": _COMMON,
            },
        ),
        "gate": UsualTimer(
            per_drop="0.005 s",
            bias="0.000(1) s",
            rate="0 ± 50 ppm, limits",
            resolution="0.001 s",
            sources={
                "per_drop": f"{_COMMON} (1 ms to 5 ms)",
                "bias": f"{_COMMON} (equal gates cancel)",
                "rate": f"{_COMMON} (quartz)",
                "resolution": _COMMON,
            },
        ),
        "video": UsualTimer(
            per_drop="",
            bias="0.000(5) s",
            rate="0.0 ± 0.1 %, limits",
            resolution="",
            sources={
                "per_drop": "30 frames a second, frame interval over the square root of 6 "
                "(triangular error, GUM 4.3.9); zero where resolution gives the frame interval",
                "bias": _COMMON,
                "rate": "29.97 frames a second read as 30 are 0.1 % off; common practice, no "
                "source",
            },
        ),
    }
)
"""Usual values by kind of timer."""
