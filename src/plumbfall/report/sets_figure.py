"""The run sets beside each other, each value with its bounds, and the limits of the product."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from plumbfall.report.ball_symbols import MANY_POINTS
from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name
from plumbfall.report.scales import CELSIUS, pretty_unit, viscosity_scale
from plumbfall.results import Measured, RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["comparable", "draw_sets"]

MOST_NAMED = 6

_STATUS = {
    "valid": ("o", "petrol", "valid"),
    "valid-with-warnings": ("s", "amber", "valid, with warnings"),
}


def draw_sets(results: Sequence[RunSetResult], ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw each run set's viscosity with its bounds, at the reference temperature if all have one.

    Limits of a specification are drawn where all sets share them and stand at their temperature.
    Invalid sets are crosses on the axis.

    Parameters
    ----------
    results : sequence of RunSetResult
        In the order of the report.
    ax : Axes
        Where to draw.
    viscosity_unit : str, optional
        Unit of the viscosity; by the size of the largest if not given.

    Returns
    -------
    Axes
        The same.
    """
    values, where = comparable(results)
    largest = max((abs(value.value) for value in values if value is not None), default=0.0)
    scale = viscosity_scale(largest, viscosity_unit)
    places = range(1, len(results) + 1)
    with house_style():
        for status, (symbol, colour, label) in _STATUS.items():
            shown = [
                (place, value)
                for place, value, result in zip(places, values, results, strict=True)
                if value is not None and result.status == status
            ]
            if not shown:
                continue
            middle = [value.value * scale.factor for _, value in shown]
            spread = [
                [(value.value - value.low) * scale.factor for _, value in shown],
                [(value.high - value.value) * scale.factor for _, value in shown],
            ]
            ax.errorbar(
                [place for place, _ in shown],
                middle,
                yerr=spread,
                fmt=symbol,
                color=COLOURS[colour],
                markersize=5,
                capsize=4 if len(results) <= 40 else 0,
                lw=1.5,
                label=label,
                rasterized=len(shown) > MANY_POINTS,
            )
        absent = [
            place
            for place, value, result in zip(places, values, results, strict=True)
            if value is None or result.status not in _STATUS
        ]
        if absent:
            ax.plot(
                absent,
                [0.03] * len(absent),
                "x",
                color=COLOURS["ink"],
                transform=ax.get_xaxis_transform(),
                label="invalid",
            )
        for number, limit in enumerate(_limits(results, where)):
            ax.axhline(
                limit * scale.factor,
                color=COLOURS["plum"],
                lw=1,
                ls=(0, (6, 2, 1, 2)),
                label="limit of the specification" if number == 0 else None,
            )
        if len(results) <= MOST_NAMED:
            ax.set_xticks(list(places), [short_name(result.name, 14) for result in results])
        else:
            ax.set_xlabel("Run set, in order")
        ax.set_xlim(0.4, len(results) + 0.6)
        ax.locator_params(axis="y", nbins=5)
        at = "" if where is None else f" at {CELSIUS.fixed(where, 2)} {pretty_unit(CELSIUS.unit)}"
        ax.set_ylabel(f"Viscosity{at} / {pretty_unit(scale.unit)}")
        legend_below(ax)
    return ax


def comparable(
    results: Sequence[RunSetResult],
) -> tuple[list[Measured | None], float | None]:
    """Return the value of each set, and the temperature that they share, if they do."""
    known = [result for result in results if result.viscosity is not None]
    at_reference = [result.viscosity_at_reference for result in results]
    if known and all(result.viscosity_at_reference is not None for result in known):
        return at_reference, known[0].reference_temperature
    return [result.viscosity for result in results], None


def _limits(results: Sequence[RunSetResult], where: float | None) -> list[float]:
    """Return the limits that hold for all sets at the temperature that they are drawn for."""
    judged = {
        None if made is None else (made.low, made.high, made.temperature)
        for made in (result.conformity for result in results if result.viscosity is not None)
    }
    if len(judged) != 1 or where is None:
        return []
    (shared,) = judged
    if shared is None or shared[2] != where:
        return []
    return [limit for limit in shared[:2] if limit is not None]
