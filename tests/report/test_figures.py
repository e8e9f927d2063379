from __future__ import annotations

import re
from dataclasses import replace

import matplotlib as mpl
import pytest
from matplotlib.axes import Axes
from matplotlib.colors import to_hex
from matplotlib.figure import Figure

from plumbfall.errors import InputError
from plumbfall.report import Report
from plumbfall.report.budget_figure import draw_budget
from plumbfall.report.drops_figure import draw_drops
from plumbfall.report.figures import page_figure
from plumbfall.report.house_style import COLOURS
from plumbfall.report.svg import inline_svg
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
    drawn = lines(draw_drops(result, axes()))
    spread = drawn["single drops: mean ± 2 standard deviations"]
    bounds = drawn["the result's bounds, 95 %"]
    assert spread.get_linestyle() != bounds.get_linestyle()
    assert bounds.get_ydata()[0] == pytest.approx(result.viscosity.low * 1e3)


def test_drops_not_used_are_crosses_on_the_axis() -> None:
    drawn = lines(draw_drops(warned_set("A"), axes()))["not used"]
    assert list(drawn.get_xdata()) == [7, 8]


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
    assert next(text.get_text() for text in ax.get_yticklabels()) == "timer.watch.per_drop"


def test_a_long_budget_sums_the_rest_by_scope() -> None:
    made = valid_set("A")
    line = made.budget[0]
    many = tuple(
        replace(line, input=f"input {n}", share=1 / 30, scope="ball" if n % 2 else "shared")
        for n in range(30)
    )
    ax = draw_budget(replace(made, budget=many), axes())
    labels = [text.get_text() for text in ax.get_yticklabels()]
    assert labels[-2:] == ["10 more, shared", "10 more, ball"]
    assert sum(bar.get_width() for bar in ax.patches) == pytest.approx(100.0)


@pytest.mark.filterwarnings("error")
def test_names_are_never_formulas() -> None:
    for result in hostile_sets().sets:
        for kind in ("drops", "budget"):
            svg = inline_svg(page_figure(kind, result, None), "p", "t", "d")
            assert "onerror" not in svg
    named = replace(valid_set("A"), drops=tuple(
        replace(d, ball=r"$\nonsense{$ <b> 球") for d in valid_set("A").drops
    ))  # fmt: skip
    svg = inline_svg(page_figure("drops", named, None), "p", "t", "d")
    assert r"$\nonsense{$" in svg
    assert "&lt;b&gt;" in svg


def test_svg_is_the_same_each_time_and_keeps_to_itself() -> None:
    first = inline_svg(page_figure("drops", valid_set("A"), None), "one", "t", "d")
    again = inline_svg(page_figure("drops", valid_set("A"), None), "one", "t", "d")
    other = inline_svg(page_figure("drops", valid_set("A"), None), "two", "t", "d")
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
    assert 'ball x style="fill: red"<' in inline_svg(
        page_figure("drops", made, None), "p", "t", "d"
    )


def test_the_readers_settings_are_left_alone() -> None:
    before = dict(mpl.rcParams)
    with mpl.rc_context({"font.size": 31.0, "text.usetex": False}):
        first = inline_svg(page_figure("budget", valid_set("A"), None), "p", "t", "d")
        assert mpl.rcParams["font.size"] == 31.0
    assert dict(mpl.rcParams) == before
    assert first == inline_svg(page_figure("budget", valid_set("A"), None), "p", "t", "d")


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
            ({"kind": "zzz"}, "write 'drops' or 'budget'"),
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
