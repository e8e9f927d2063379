import json
import os

import numpy as np
import pytest

from plumbfall.flow import tables
from plumbfall.flow.__main__ import main
from plumbfall.flow.tables import NodeCheck, Table, builders, read_table, write_table

SOLVED_HERE = ("wall_factor", "off_axis_coefficient", "end_excess")
SHIPPED = sorted(path.stem for path in tables.tables_directory().glob("*.json"))


@pytest.fixture
def table():
    return Table(
        name="sample",
        about={"quantity": "ηK", "solver": "s", "settings": "t", "estimated_error": 1e-6},
        arrays={"a": np.array([0.1, 1 / 3]), "b": np.array([[1.0, np.nan], [2e-300, -3.0]])},
    )


def test_table_comes_back_to_the_last_bit(table, tmp_path):
    path = write_table(table, tmp_path)
    back = read_table("sample", tmp_path)
    assert dict(back.about) == dict(table.about)
    for name, values in table.arrays.items():
        np.testing.assert_array_equal(back.arrays[name], values)
    assert [entry.name for entry in tmp_path.iterdir()] == ["sample.json"]
    json.loads(path.read_text(encoding="utf-8"), parse_constant=pytest.fail)  # strict JSON


def test_failed_write_leaves_the_old_file_and_nothing_else(table, tmp_path, monkeypatch):
    write_table(table, tmp_path)
    before = (tmp_path / "sample.json").read_bytes()

    def fail(*_):
        raise OSError("disk full")

    monkeypatch.setattr(os, "replace", fail)
    with pytest.raises(OSError, match="disk full"):
        write_table(Table(name="sample", about={}, arrays={}), tmp_path)
    assert (tmp_path / "sample.json").read_bytes() == before
    assert len(list(tmp_path.iterdir())) == 1


def test_file_of_another_format_is_refused(tmp_path):
    (tmp_path / "other.json").write_text('{"format": "something/1"}', encoding="utf-8")
    with pytest.raises(ValueError, match=r"other\.json.*something/1"):
        read_table("other", tmp_path)


def test_node_check_is_relative_unless_absolute():
    assert NodeCheck("n", 100.0, 100.1, 1.1e-3).passed
    assert not NodeCheck("n", 100.0, 100.1, 1.1e-3, absolute=True).passed


def test_every_builder_says_what_it_makes():
    names = [builder.name for builder in builders()]
    assert len(set(names)) == len(names)
    assert set(SOLVED_HERE) <= set(names)
    for builder in builders():
        assert builder.title
        assert builder.steps > 0


@pytest.mark.parametrize("name", SHIPPED)
def test_shipped_table_says_what_made_it(name):
    shipped = read_table(name, tables.tables_directory())
    assert {"quantity", "solver", "settings"} <= set(shipped.about)
    assert shipped.about["solver"].startswith("plumbfall.flow.")
    estimated = next(key for key in shipped.about if key.startswith("estimated"))
    assert 0 < shipped.about[estimated] < 0.2
    assert all(np.isfinite(values).all() for values in shipped.arrays.values())


def test_shipped_tables_are_those_that_are_built_and_no_other():
    assert sorted(builder.name for builder in builders()) == SHIPPED


def test_shipped_tables_are_small():
    sizes = [path.stat().st_size for path in tables.tables_directory().glob("*.json")]
    assert sum(sizes) < 1_000_000


def test_build_then_check_then_tamper(tmp_path, capsys):
    options = ["--only", "off_axis_coefficient", "--directory", str(tmp_path)]
    assert main(options) == 0
    assert main([*options, "--check"]) == 0
    path = tmp_path / "off_axis_coefficient.json"
    made = read_table("off_axis_coefficient", tmp_path)
    arrays = dict(made.arrays)
    arrays["coefficient"] = arrays["coefficient"] * (1 + 1e-6)
    write_table(Table(name=made.name, about=made.about, arrays=arrays), tmp_path)
    capsys.readouterr()
    assert main([*options, "--check"]) == 1
    assert "DIFFERS" in capsys.readouterr().out
    assert path.exists()


def test_rebuilt_table_is_the_shipped_one(tmp_path):
    assert main(["--only", "off_axis_coefficient", "--directory", str(tmp_path)]) == 0
    made = read_table("off_axis_coefficient", tmp_path)
    shipped = read_table("off_axis_coefficient", tables.tables_directory())
    assert dict(made.about) == dict(shipped.about)
    np.testing.assert_allclose(
        made.arrays["coefficient"], shipped.arrays["coefficient"], rtol=1e-10
    )


def test_list_names_the_tables(capsys):
    assert main(["--list"]) == 0
    listed = capsys.readouterr().out
    assert all(name in listed for name in SOLVED_HERE)


def test_unknown_table_is_refused_with_the_known_ones(capsys):
    with pytest.raises(SystemExit) as stop:
        main(["--only", "wall_factr"])
    assert stop.value.code == 2
    assert "wall_factor" in capsys.readouterr().err


@pytest.mark.parametrize(
    ("options", "remedy"),
    [(["--directory", "nowhere"], "make it"), (["--check", "--directory", "."], "without --check")],
)
def test_missing_directory_or_table_is_said_with_a_remedy(
    options, remedy, tmp_path, monkeypatch, capsys
):
    monkeypatch.chdir(tmp_path)
    with pytest.raises(SystemExit) as stop:
        main(["--only", "wall_factor", *options])
    assert stop.value.code == 2
    assert remedy in capsys.readouterr().err


@pytest.mark.slow
@pytest.mark.parametrize("name", SOLVED_HERE)
def test_shipped_table_passes_its_check(name):
    assert main(["--check", "--only", name]) == 0


def test_quick_leaves_the_slow_tables_out(monkeypatch, tmp_path):
    built = []

    def work(chosen, directory, _console):
        built.append([builder.name for builder in chosen])
        assert directory == tmp_path
        return 0

    monkeypatch.setattr("plumbfall.flow.__main__._build", work)
    assert main(["--directory", str(tmp_path)]) == 0
    assert main(["--quick", "--directory", str(tmp_path)]) == 0
    everything, quick = built
    slow = {builder.name for builder in builders() if builder.slow}
    assert slow == {"start_up"}
    assert sorted(everything) == SHIPPED
    assert set(everything) - set(quick) == slow
