"""The drawings of a page: which there are, what is said below them, what a screen reader says."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from plumbfall.report.budget_figure import label_width
from plumbfall.report.figures import KINDS, page_figure
from plumbfall.report.intervals_figure import interval_count
from plumbfall.report.map_figure import draw_map, on_map
from plumbfall.report.residuals_figure import AGAINST, draw_residuals, residuals_vary
from plumbfall.report.sets_figure import draw_sets
from plumbfall.report.svg import inline_svg
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["Picture", "map_picture", "pictures", "residual_pictures", "sets_picture"]


@dataclass(frozen=True, slots=True)
class Picture:
    """A drawing as markup, with what is said below it."""

    svg: Any
    caption: str


def pictures(result: RunSetResult, index: int, viscosity_unit: str | None) -> list[Picture]:
    """Return the drawings of a run set as far as there is something to draw."""
    drawn = []

    def add(kind: str, caption: str, where: str, **size: float) -> None:
        def draw_into(ax: Axes) -> object:
            return KINDS[kind](result, ax, viscosity_unit)

        title = f"{kind.capitalize()} of run set {result.name[:60]}"
        drawn.append(_picture(draw_into, f"s{index}-{kind}", title, caption, where, **size))

    if result.drops:
        what = "Drops in order, each at the set's temperature, with the spread of single drops "
        what += "(dashed: mean ± 2 standard deviations) and the bounds of the result (solid)."
        if result.viscosity is None:
            what = "Drops in order; the set has no viscosity to show bounds of."
        add("drops", what, "table of drops")
    if result.budget:
        what = "What the uncertainty is made of. More drops shrink only what belongs to one drop, "
        what += "more balls also what belongs to one ball."
        add("budget", what, "table of the uncertainty budget", left=label_width(result))
    if result.monte_carlo is not None and result.monte_carlo.histogram is not None:
        what = "How often the draws gave which viscosity, with the bounds of Monte Carlo (solid) "
        what += "and those of linear propagation (dashed)."
        add("draws", what, "table of linear against Monte Carlo")
    if interval_count(result) > 1:
        what = "Mean speed between successive marks over the drop's. A ball at its final speed in "
        what += "an even liquid shows 1 everywhere, within the timing."
        add("intervals", what, "table of clock readings")
    return drawn


def residual_pictures(result: RunSetResult, index: int) -> list[Picture]:
    """Return residuals against each of what the drops differ in; no slope should show in any."""
    drawn = []
    for against in AGAINST:
        if not residuals_vary(result, against):
            continue

        def draw_into(ax: Axes, against: str = against) -> object:
            return draw_residuals(result, ax, against, legend=False)

        name = against.replace("_", " ").replace("reynolds", "Reynolds number")
        drawn.append(
            _picture(
                draw_into,
                f"s{index}-{against}",
                f"Residuals of run set {result.name[:60]} against {name}",
                f"Residuals against {name}; symbols as for the drops in order.",
                "table of drops",
            )
        )
    return drawn


def map_picture(results: Sequence[RunSetResult]) -> Picture | None:
    """Return where the sets lie on the map of the drag factor; ``None`` where none has a place."""
    if not any(on_map(result) for result in results):
        return None

    def draw_into(ax: Axes) -> object:
        return draw_map(results, ax)

    what = "Lines of equal drag factor in the computed table of walls and inertia together, and "
    what += "each run set at its largest ball and Reynolds number. Where lines run level only the "
    what += "walls count; where they bend the inertia does too."
    return _picture(
        draw_into, "map", "Run sets on the map of the drag factor", what, "results in figures"
    )


def sets_picture(results: Sequence[RunSetResult], viscosity_unit: str | None) -> Picture:
    """Return the run sets beside each other."""

    def draw_into(ax: Axes) -> object:
        return draw_sets(results, ax, viscosity_unit)

    what = "Viscosity of each run set with its bounds. Errors that the sets share, such as the "
    what += "bore's, move all of them together."
    return _picture(draw_into, "sets", "Run sets beside each other", what, "overview")


def _picture(
    draw_into: Callable[[Axes], object],
    name: str,
    title: str,
    caption: str,
    where: str,
    **size: float,
) -> Picture:
    import markupsafe

    figure = page_figure(draw_into, **size)
    described = f"{caption} The numbers are in the {where}."
    svg = inline_svg(figure, name, title, described)
    return Picture(markupsafe.Markup(svg), caption)  # inline_svg escapes what it is given
