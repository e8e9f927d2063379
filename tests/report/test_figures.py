from __future__ import annotations

import re
from dataclasses import replace

import matplotlib as mpl
import numpy as np
import pytest
from matplotlib.axes import Axes
from matplotlib.colors import to_hex
from matplotlib.figure import Figure

from plumbfall.errors import InputError
from plumbfall.report import Report
from plumbfall.report.budget_figure import draw_budget
from plumbfall.report.draws_figure import draw_draws
from plumbfall.report.drops_figure import draw_drops
from plumbfall.report.figures import KINDS, page_figure
from plumbfall.report.house_style import COLOURS
from plumbfall.report.intervals_figure import draw_intervals
from plumbfall.report.map_figure import draw_map
from plumbfall.report.residuals_figure import AGAINST, draw_residuals, residuals_vary
from plumbfall.report.sets_figure import draw_sets
from plumbfall.report.svg import inline_svg
from plumbfall.results import Conformity, RunSetResult
from report.invented_report import (
    InventedReduction,
    drop,
    hostile_sets,
    invalid_set,
    three_sets,
    valid_set,
    warned_set,
)


def axes() -> Axes:
    return Figure().add_subplot()


def lines(ax: Axes) -> dict[str, object]:
    return {line.get_label(): line for line in ax.get_lines()}


def bar_names(ax: Axes) -> list[str]:
    return [text.get_text() for text in ax.texts if text.get_position()[0] < 0]


def drawn(kind: str, result: RunSetResult) -> Figure:
    return page_figure(lambda ax: KINDS[kind](result, ax, None))


def test_drops_stand_in_order_in_the_unit_of_the_set() -> None:
    result = valid_set("A")
    ax = draw_drops(result, axes())
    assert ax.get_ylabel() == "Viscosity / mPa·s"
    points = sorted(tuple(point) for group in ax.collections for point in group.get_offsets())
    assert points == [
        (n, pytest.approx(d.viscosity_at_set * 1e3)) for n, d in enumerate(result.drops, 1)
    ]


def test_each_ball_has_a_symbol_of_its_own() -> None:
    ax = draw_drops(valid_set("A"), axes())
    labels = [group.get_label() for group in ax.collections]
    assert labels == ["ball a", "ball b", "ball c", "ball d"]
    shapes = {group.get_paths()[0].vertices.tobytes() for group in ax.collections}
    assert len(shapes) == 4


def test_scatter_and_uncertainty_are_told_apart_without_colour() -> None:
    result = valid_set("A")
    found = lines(draw_drops(result, axes()))
    spread = found["spread of single drops"]
    bounds = found["bounds of the result, 95 %"]
    assert spread.get_linestyle() != bounds.get_linestyle()
    assert bounds.get_ydata()[0] == pytest.approx(result.viscosity.low * 1e3)


def test_drops_not_used_are_crosses_on_the_axis() -> None:
    found = lines(draw_drops(warned_set("A"), axes()))["not used"]
    assert list(found.get_xdata()) == [7, 8]


def test_a_tick_names_the_drop_not_its_place() -> None:
    made = valid_set("A")
    swapped = (*made.drops[:3], replace(made.drops[7]), *made.drops[3:7])
    ax = draw_drops(replace(made, drops=swapped), axes())
    assert ax.xaxis.get_major_formatter()(4) == "8"
    assert ax.xaxis.get_major_formatter()(99) == ""


def test_without_viscosity_fall_times_are_drawn() -> None:
    ax = draw_drops(invalid_set("A"), axes())
    assert ax.get_ylabel() == "Fall time / s"
    assert len([point for group in ax.collections for point in group.get_offsets()]) == 3


@pytest.mark.parametrize(("count", "pixels"), [(2000, False), (2001, True)])
def test_many_points_are_pixels(count: int, pixels: bool) -> None:
    many = tuple(drop(n, 0.85 + 1e-5 * (n % 7), 0.85, ball="a") for n in range(1, count + 1))
    ax = draw_drops(replace(valid_set("A"), drops=many), axes())
    assert [group.get_rasterized() for group in ax.collections] == [pixels]
    svg = inline_svg(ax.figure, "p", "title", "description")
    assert ("data:image/png" in svg) == pixels


def test_budget_bars_are_shares_told_apart_by_hatch() -> None:
    ax = draw_budget(valid_set("A"), axes())
    bars = {(bar.get_hatch(), to_hex(bar.get_facecolor())) for bar in ax.patches}
    assert bars == {
        ("", COLOURS["petrol"]),
        ("///", COLOURS["amber"]),
        ("xxx", COLOURS["plum"]),
    }
    assert sum(bar.get_width() for bar in ax.patches) == pytest.approx(100.0)
    assert bar_names(ax)[0] == "timer.watch.per_drop"


def test_a_long_budget_sums_the_rest_by_scope() -> None:
    made = valid_set("A")
    line = made.budget[0]
    many = tuple(
        replace(line, input=f"input {n}", share=1 / 30, scope="ball" if n % 2 else "shared")
        for n in range(30)
    )
    ax = draw_budget(replace(made, budget=many), axes())
    labels = bar_names(ax)
    assert labels[-2:] == ["10 more, shared", "10 more, ball"]
    assert sum(bar.get_width() for bar in ax.patches) == pytest.approx(100.0)


@pytest.mark.filterwarnings("error")
def test_names_are_never_formulas() -> None:
    for result in hostile_sets().sets:
        for kind in KINDS:
            svg = inline_svg(drawn(kind, result), "p", "t", "d")
            assert "onerror" not in svg
    named = replace(valid_set("A"), drops=tuple(
        replace(d, ball=r"$\nonsense{$ <b> 球") for d in valid_set("A").drops
    ))  # fmt: skip
    svg = inline_svg(drawn("drops", named), "p", "t", "d")
    assert r"$\nonsense{$" in svg
    assert "&lt;b&gt;" in svg


def test_svg_is_the_same_each_time_and_keeps_to_itself() -> None:
    first = inline_svg(drawn("drops", valid_set("A")), "one", "t", "d")
    again = inline_svg(drawn("drops", valid_set("A")), "one", "t", "d")
    other = inline_svg(drawn("drops", valid_set("A")), "two", "t", "d")
    assert first == again
    assert not set(re.findall(r'id="([^"]*)"', first)) & set(re.findall(r'id="([^"]*)"', other))
    assert "<style" not in first
    assert " style=" not in first
    assert "dc:date" not in first
    assert ">Drop, in order</text>" in first


def test_text_that_looks_like_markup_is_left_alone() -> None:
    made = replace(valid_set("A"), drops=tuple(
        replace(d, ball='x style="fill: red"') for d in valid_set("A").drops
    ))  # fmt: skip
    assert "ball x style=&quot;fill: red&quot;<" in inline_svg(drawn("drops", made), "p", "t", "d")


def test_the_readers_settings_are_left_alone() -> None:
    before = dict(mpl.rcParams)
    with mpl.rc_context({"font.size": 31.0, "text.usetex": False}):
        first = inline_svg(drawn("budget", valid_set("A")), "p", "t", "d")
        assert mpl.rcParams["font.size"] == 31.0
    assert dict(mpl.rcParams) == before
    assert first == inline_svg(drawn("budget", valid_set("A")), "p", "t", "d")


class TestPlot:
    def test_a_figure_with_a_panel_for_each_set(self) -> None:
        figure = Report(three_sets()).plot()
        assert isinstance(figure, Figure)
        assert [ax.get_title(loc="left") for ax in figure.axes] == [
            "batch 118", "batch 119", "batch 120",
        ]  # fmt: skip

    def test_into_axes_that_are_given(self) -> None:
        ax = axes()
        report = Report(three_sets())
        assert report.plot("budget", run_set="batch 118", ax=ax) is ax
        assert len(ax.patches) == 7
        assert report["batch 118"].plot("drops", ax=axes()).collections

    def test_it_saves_in_every_usual_form(self, tmp_path) -> None:
        figure = Report(three_sets()).plot(run_set="batch 119")
        for form in ("png", "svg", "pdf"):
            figure.savefig(tmp_path / f"drops.{form}")
            assert (tmp_path / f"drops.{form}").stat().st_size > 1000

    @pytest.mark.parametrize(
        ("arguments", "message"),
        [
            ({"kind": "drop"}, "no figure of kind 'drop'; did you mean 'drops'"),
            (
                {"kind": "zzz"},
                "write one of 'drops', 'budget', 'draws', 'intervals', 'residuals', 'sets', 'map'",
            ),
            ({"run_set": "batch 18"}, "did you mean 'batch 118'"),
            ({"ax": Figure().add_subplot()}, "one place for several run sets; say which"),
        ],
    )
    def test_what_cannot_be_drawn_is_refused(self, arguments: dict, message: str) -> None:
        with pytest.raises(InputError, match=message):
            Report(three_sets()).plot(**arguments)

    def test_too_many_sets_for_one_figure(self) -> None:
        many = InventedReduction(tuple(valid_set(f"set {n}") for n in range(13)))
        with pytest.raises(InputError, match="13 run sets do not fit into one figure; say which"):
            Report(many).plot()


def test_pyplot_is_not_imported() -> None:
    import subprocess
    import sys

    code = (
        "import sys, plumbfall.report; before = 'matplotlib' in sys.modules; "
        "import plumbfall.report.figures as f; f.new_figure(); "
        "sys.exit(before or 'matplotlib.pyplot' in sys.modules)"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


class TestDraws:
    def test_bins_are_shares_of_all_draws(self) -> None:
        ax = draw_draws(warned_set("A"), axes())
        (steps,) = ax.patches
        values, edges, _ = steps.get_data()
        counts = warned_set("A").monte_carlo.histogram.counts
        assert values == pytest.approx([count / 2000 for count in counts])  # percent of 200,000
        assert (edges[0], edges[-1]) == pytest.approx((1.154, 1.255))

    def test_both_bounds_are_told_apart_without_colour(self) -> None:
        found = lines(draw_draws(warned_set("A"), axes()))
        drawn_bounds, linear = found["Monte Carlo bounds, 95 %"], found["linear bounds, 95 %"]
        assert list(drawn_bounds.get_xdata()) == pytest.approx([1.1793, 1.2301])
        assert list(linear.get_xdata()) == pytest.approx([1.1775, 1.2267])
        assert drawn_bounds.get_linestyle() != linear.get_linestyle()

    def test_without_draws_it_says_so(self) -> None:
        ax = draw_draws(valid_set("A"), axes())
        assert [text.get_text() for text in ax.texts] == ["no draws to show"]


class TestResiduals:
    @pytest.mark.parametrize("against", list(AGAINST))
    def test_each_drop_stands_where_it_was(self, against: str) -> None:
        varied = tuple(
            replace(d, diameter_ratio=0.03 + 0.01 * d.drop, reynolds=0.1 * d.drop)
            for d in valid_set("A").drops
        )
        ax = draw_residuals(replace(valid_set("A"), drops=varied), axes(), against)
        found = sorted(tuple(point) for group in ax.collections for point in group.get_offsets())
        across = {
            "temperature": lambda d: d.temperature - 273.15,
            "diameter_ratio": lambda d: d.diameter_ratio,
            "reynolds": lambda d: d.reynolds,
        }[against]
        expected = sorted((across(d), 100 * d.residual) for d in varied)
        assert [value for point in found for value in point] == pytest.approx(
            [value for point in expected for value in point]
        )

    def test_what_does_not_vary_is_not_drawn(self) -> None:
        assert residuals_vary(valid_set("A"), "temperature")
        assert not residuals_vary(valid_set("A"), "reynolds")
        assert not residuals_vary(valid_set("A"), "diameter_ratio")

    def test_panels_side_by_side_or_one_alone(self) -> None:
        report = Report(three_sets())
        assert len(report["batch 118"].plot("residuals").axes) == 3
        assert len(report["batch 118"].plot("residuals", against="reynolds").axes) == 1
        ax = axes()
        assert report["batch 118"].plot("residuals", ax=ax, against="temperature") is ax
        with pytest.raises(InputError, match=r'several panels; say which with against="temper'):
            report["batch 118"].plot("residuals", ax=ax)
        with pytest.raises(InputError, match="did you mean 'reynolds'"):
            report["batch 118"].plot("residuals", against="reynold")


def test_intervals_show_each_speed_over_the_drops_own() -> None:
    ax = draw_intervals(warned_set("A"), axes())
    heights = sorted(point[1] for group in ax.collections for point in group.get_offsets())
    expected = [ratio for d in warned_set("A").drops for ratio in d.interval_ratios]
    assert heights == pytest.approx(sorted(expected))
    assert [text.get_text() for text in ax.get_xticklabels()] == ["1 to 2", "2 to 3"]
    means = [line.get_ydata()[0] for line in ax.get_lines() if line.get_linewidth() == 2]
    assert means == pytest.approx([0.9935, 1.0065])


class TestSets:
    def test_values_stand_with_their_bounds(self) -> None:
        ax = draw_sets(three_sets().sets, axes())
        assert ax.get_ylabel() == "Viscosity / Pa·s"  # 119 was measured at no reference temperature
        drawn_bars = {
            round(segment[0, 0]): tuple(segment[:, 1])
            for group in ax.collections
            for segment in group.get_segments()
        }
        assert drawn_bars[1] == pytest.approx((0.8471, 0.8555), abs=1e-4)
        assert drawn_bars[2] == pytest.approx((1.1793, 1.2301))
        assert list(lines(ax)["invalid"].get_xdata()) == [3]
        assert [text.get_text() for text in ax.get_xticklabels()] == [
            "batch 118", "batch 119", "batch 120",
        ]  # fmt: skip

    def test_limits_are_drawn_where_they_hold_for_all(self) -> None:
        judged = Conformity(0.9, "a rule", "undecided", "as written", 0.8, None, 298.15)
        inside = replace(valid_set("A"), conformity=judged)
        limit = lines(draw_sets([inside, inside], axes()))["limit of the specification"]
        assert limit.get_ydata()[0] == pytest.approx(800.0)
        elsewhere = replace(inside, conformity=replace(judged, temperature=293.15))
        for sets in ([inside, valid_set("B")], [inside, elsewhere], [elsewhere, elsewhere]):
            assert "limit of the specification" not in lines(draw_sets(sets, axes()))

    def test_very_many_sets_are_pixels(self) -> None:
        many = [valid_set("A")] * 2001
        ax = draw_sets(many, axes())
        assert all(group.get_rasterized() for group in ax.collections)


class TestMap:
    def test_lines_are_those_of_the_exact_wall_factor(self) -> None:
        # Haberman and Sayre 1958, table of wall factors for a sphere on the axis of a long tube,
        # Reynolds number 0: 1.263 at diameter ratio 0.1 (from memory)
        ax = draw_map((), axes())
        (lines_drawn,) = [one for one in ax.collections if hasattr(one, "levels")]
        at = {
            level: path.vertices
            for level, path in zip(lines_drawn.levels, lines_drawn.get_paths(), strict=True)
        }
        below = at[1.2][np.argmin(at[1.2][:, 0]), 1]
        above = at[1.3][np.argmin(at[1.3][:, 0]), 1]
        assert below < 0.1 < above
        share = (1.263 - 1.2) / (1.3 - 1.2)
        assert below + share * (above - below) == pytest.approx(0.1, rel=0.01)

    def test_sets_stand_at_their_largest_ball_and_reynolds_number(self) -> None:
        sets = [valid_set("A"), replace(valid_set("B"), reynolds=4.0), invalid_set("C")]
        ax = draw_map(sets, axes())
        points = [tuple(p) for group in ax.collections[1:] for p in group.get_offsets()]
        assert points == [(0.036, 0.04), (4.0, 0.04)]
        _, labels = ax.get_legend_handles_labels()
        assert labels == ["A", "B"]

    def test_many_sets_share_one_symbol(self) -> None:
        ax = draw_map([valid_set(f"set {n}") for n in range(40)], axes())
        assert ax.get_legend_handles_labels()[1] == ["40 run sets"]

    def test_all_sets_in_one_place(self) -> None:
        ax = axes()
        assert Report(three_sets()).plot("map", ax=ax) is ax
        assert isinstance(Report(three_sets()).plot("map"), Figure)
