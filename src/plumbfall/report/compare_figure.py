"""The ratio of two run sets with its bounds, the margin and what repeatability explains."""

from __future__ import annotations

from typing import TYPE_CHECKING

from plumbfall.calibration.compare import Comparison
from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_comparison"]


def draw_comparison(result: Comparison, ax: Axes) -> Axes:
    """Draw how far the ratio is off 1, in percent, with its coverage interval."""
    ratio = result.ratio
    with house_style():
        if result.margin is not None:
            ax.axvspan(
                -100 * result.margin, 100 * result.margin, color=COLOURS["rule"], lw=0,
                label="margin of equality",
            )  # fmt: skip
        if result.precision is not None:
            for side in (-1, 1):
                ax.axvline(
                    100 * side * result.precision.critical,
                    color=COLOURS["amber"],
                    ls="--",
                    lw=1,
                    label="critical difference" if side > 0 else None,
                )
        ax.axvline(0.0, color=COLOURS["muted"], lw=0.8)
        off = 100 * (ratio.value - 1)
        ax.errorbar(
            off,
            0.0,
            xerr=[[off - 100 * (ratio.low - 1)], [100 * (ratio.high - 1) - off]],
            fmt="o",
            capsize=4,
            color=COLOURS["petrol"],
            label="ratio with its bounds",
        )
        names = " / ".join(short_name(name, 20) for name in result.sets)
        ax.set_yticks([0.0], [names], parse_math=False)
        ax.set_ylim(-1.0, 1.0)
        ax.set_xlabel("Ratio less 1 / %")
        legend_below(ax)
    return ax
