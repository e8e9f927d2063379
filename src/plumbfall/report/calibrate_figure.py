"""What each calibration set says of a tube constant, along the fall time."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from plumbfall.calibration.constant import TubeConstant
from plumbfall.errors import InputError, nearest_name
from plumbfall.report.figures import new_figure
from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["draw_constants"]


def draw_constants(
    constants: Sequence[TubeConstant], name: str | None, ax: Axes | None
) -> Figure | Axes:
    """Draw one constant, or all of them one below the other.

    Raises
    ------
    InputError
        If the constant is unknown, or one place is given for several, or there is none.
    """
    known = [constant.stored.name for constant in constants]
    if name is not None and name not in known:
        near = nearest_name(name, known)
        raise InputError(
            f"there is no constant {name!r}",
            remedy=f"did you mean {near!r}?" if near else f"known: {', '.join(known)}",
        )
    chosen = [one for one in constants if name in (None, one.stored.name)]
    if not chosen:
        raise InputError("there is no constant to draw", remedy="see the findings")
    if ax is not None:
        if len(chosen) > 1:
            raise InputError("one place for several constants", remedy="say which with constant=")
        return _draw(chosen[0], ax)
    figure = new_figure(len(chosen))
    for index, constant in enumerate(chosen):
        with house_style():
            panel = figure.add_subplot(len(chosen), 1, index + 1)
        _draw(constant, panel)
        panel.set_title(short_name(constant.stored.name, 60), loc="left", parse_math=False)
    return figure


def _draw(constant: TubeConstant, ax: Axes) -> Axes:
    value, u = constant.stored.value, constant.stored.u
    with house_style():
        ax.axhspan(
            -200 * u / value, 200 * u / value, color=COLOURS["rule"],
            label="the constant, within 2 standard uncertainties",
        )  # fmt: skip
        ax.axhline(0.0, color=COLOURS["petrol"], linewidth=1.0)
        sets = constant.sets
        ax.errorbar(
            [one.time for one in sets],
            [100 * one.residual for one in sets],
            yerr=[200 * one.u / one.value for one in sets],
            fmt="o",
            color=COLOURS["ink"],
            elinewidth=0.9,
            capsize=2.5,
            markersize=4.5,
            label="each set, with 2 of its own",
        )
        ax.set_xlabel("mean fall time / s")
        ax.set_ylabel("constant less the joint one / %")
        legend_below(ax)
    return ax
