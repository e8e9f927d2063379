"""A figure that a notebook shows by itself, without pyplot and without any setting."""

from __future__ import annotations

import io

from matplotlib.figure import Figure

__all__ = ["DrawnFigure"]

RESOLUTION = 110  # dots an inch


class DrawnFigure(Figure):
    """A matplotlib Figure outside pyplot; the last line of a cell shows it."""

    def _repr_png_(self) -> bytes:
        buffer = io.BytesIO()
        self.savefig(buffer, format="png", dpi=RESOLUTION, facecolor="white")
        return buffer.getvalue()
