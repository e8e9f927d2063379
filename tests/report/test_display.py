"""What a notebook shows of every public object, and what the tab key offers."""

from __future__ import annotations

import pandas as pd
import pytest
from matplotlib.figure import Figure

import plumbfall as pf
from plumbfall.report import Report
from report.invented_report import hostile_sets
from report.test_page import Page

FOLDER = "sample_runs"


@pytest.fixture(scope="module")
def objects(request: pytest.FixtureRequest) -> dict[str, object]:
    root = request.config.rootpath / FOLDER
    bench = pf.read_bench(root / "three_batches" / "bench.toml")
    timings = pf.read_timings(root / "three_batches" / "drops.csv", bench)
    report = pf.reduce(timings, bench, draws=0)
    oil = root / "certified_oil_check" / "drops.csv"
    return {
        "bench": bench,
        "estimate": bench.liquids["varnish"].density,
        "timings": timings,
        "report": report,
        "run set": report["batch 231"],
        "check": pf.check(oil, reference="bottle-3"),
        "constants": pf.calibrate(oil, reference="bottle-3"),
        "comparison": pf.compare(
            root / "resin_batches_compared" / "drops.csv", sets=["batch 122", "batch 121"]
        ),
        "chart": pf.chart(root / "check_history" / "history.csv"),
        "plan": pf.plan(root / "three_batches" / "bench.toml", viscosity="1 Pa.s"),
    }


def test_every_public_object_shows_itself(objects: dict[str, object]) -> None:
    for name, one in objects.items():
        shown = Page(one._repr_html_())
        assert shown.open == [], name
        assert shown.shown, name
        assert len(repr(one).splitlines()) == 1 or name == "estimate", name


def test_a_bench_shows_what_was_written_and_what_was_read(objects: dict[str, object]) -> None:
    shown = Page(objects["bench"]._repr_html_()).shown
    assert "Hull varnish, three batches before release (invented data)" in shown
    assert "liquid.varnish.density 962.4(4) kg/m3 962.4 0.4 kg/m3 normal" in shown
    assert "specification" not in repr(objects["estimate"])


def test_timings_show_their_rows_and_what_was_repaired(objects: dict[str, object]) -> None:
    assert repr(objects["timings"]) == (
        "<timings: 24 rows in 3 run sets: 23 used, 1 void, 0 excluded>"
    )
    shown = Page(objects["timings"]._repr_html_()).shown
    assert "mark 2 is empty" in shown
    assert "gate 2 did not trigger" in shown


def test_every_figure_shows_itself_without_a_setting(objects: dict[str, object]) -> None:
    drawings = {
        "run set": lambda: objects["run set"].plot(),
        "all sets": lambda: objects["report"].plot("sets"),
        "map": lambda: objects["report"].plot("map"),
        **{name: objects[name].plot for name in ("check", "comparison", "chart", "plan")},
    }
    for name, draw in drawings.items():
        figure = draw()
        assert isinstance(figure, Figure), name
        assert figure._repr_png_().startswith(b"\x89PNG"), name


def test_names_are_shown_as_text() -> None:
    report = Report(hostile_sets())
    for one in (report, *report, report.bench, report.timings):
        assert "<script" not in one._repr_html_()
        assert "<img" not in one._repr_html_()
    table = pd.DataFrame({"set": "<b>x</b>", "time [s]": [12.0], "note": "<script>x</script>"})
    assert "<script" not in pf.read_timings(table)._repr_html_()


def test_the_tab_key_offers_the_story() -> None:
    offered = dir(pf)
    assert {"read_bench", "read_timings", "inspect", "reduce"} - set(offered) == {"inspect"}
    assert {"calibrate", "check", "compare", "chart", "plan", "simulate", "physics"} <= set(offered)
    assert not [name for name in offered if name.startswith("_") and name != "__version__"]
    laws = dir(pf.physics)
    assert {"stokes_viscosity", "wall_factor", "tube_drag_factor", "fall_time"} <= set(laws)
    assert not [name for name in laws if name.startswith("_")]
