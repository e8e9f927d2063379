from __future__ import annotations

import os

import pytest

from plumbfall.bench import read_bench
from plumbfall.errors import InputError


def refusal(source):
    with pytest.raises(InputError) as refused:
        read_bench(source)
    assert all(problem.remedy for problem in refused.value.problems)
    return refused.value


def test_a_missing_file(tmp_path):
    path = tmp_path / "bench.toml"
    assert str(refusal(path)) == (f"{path}: no such file; check the folder and the name")


def test_a_folder(tmp_path):
    assert str(refusal(tmp_path)) == (
        f"{tmp_path}: is a folder, not a bench sheet; give the bench sheet inside it"
    )
    (tmp_path / "bench.toml").write_text("")
    assert refusal(str(tmp_path)).remedy == f"give {tmp_path / 'bench.toml'}"


def test_text_instead_of_a_path():
    assert str(refusal('[tube.A]\nbore = "5 cm"\n')) == (
        "the bench sheet was given as text, not as the name of a file; give the path, or the "
        "parsed sheet as a dict"
    )


@pytest.mark.parametrize("path", ["a\0b", "x" * 5000])
def test_an_impossible_path(path):
    # systems differ in what they say of it: no such file, or a name that cannot be
    assert refusal(path).path == path


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no pipes here")
def test_a_pipe_is_not_waited_for(tmp_path):
    os.mkfifo(tmp_path / "pipe")
    assert refusal(tmp_path / "pipe").first.message == "is not a regular file"


@pytest.mark.parametrize("text", ["", " \n\t\n", "\ufeff"])
def test_an_empty_file(write_sheet, text):
    path = write_sheet(text)
    assert str(refusal(path)) == (
        f"{path}: is empty; describe the equipment in it, or name another bench sheet"
    )


def test_latin_text_has_line_and_column(write_sheet):
    path = write_sheet(b'[tube.A]\nbore = "50.0 \xb1 0.1 mm, k=2"\n')
    assert str(refusal(path)) == (
        f"{path}:2:14: byte 0xb1 is not UTF-8; save the file as UTF-8 (the micro, degree and ± "
        "signs are usual causes)"
    )


@pytest.mark.parametrize("encoding", ["utf-16", "utf-16-be"])
def test_utf_16(write_sheet, encoding):
    mark = b"" if encoding == "utf-16" else b"\xfe\xff"
    path = write_sheet(mark + "[tube.A]\n".encode(encoding))
    assert str(refusal(path)) == f"{path}: is written in UTF-16; save it as UTF-8"


def test_a_workbook(write_sheet):
    assert "workbook" in str(refusal(write_sheet(b"PK\x03\x04" + bytes(100))))


def test_a_large_file_is_not_read(tmp_path):
    path = tmp_path / "bench.toml"
    with path.open("wb") as file:
        file.truncate(17_000_000)
    assert "larger than 16 MB" in str(refusal(path))


@pytest.mark.parametrize(
    ("text", "line", "column", "remedy"),
    [
        (
            "[tube.A]\nbore = 50.00(2) mm\n",
            2,
            13,
            'write quantities, text and names in quotes: bore = "50.00(2) mm"',
        ),
        (
            "[tube.A]\nkind = vertical\n",
            2,
            8,
            'write quantities, text and names in quotes: kind = "vertical"',
        ),
        ("[bench]\ncoverage = 0,95\n", 2, 13, "write a decimal point: coverage = 0.95"),
        ("[bench]\ntitle = “oil”\n", 2, 9, 'use straight quotes: "..."'),
        ('[bench]\ntitle = "oil\n', 2, 13, 'close the quotes: title = "oil"'),
        ("[bench]\ntitle\n", 2, 6, 'write KEY = "value", or # before a remark'),
        ("[bench]\na remark\n", 2, 3, 'write KEY = "value", or # before a remark'),
        (
            '[bench]\ntitle = "a"\ntitle = "b"\n',
            3,
            12,
            "this name is there already: keep one of the two",
        ),
        ("[tube.A]\n[tube.A]\n", 2, 8, "this name is there already: keep one of the two"),
        (
            "[set.batch 118]\n",
            1,
            11,
            'a table is headed [kind.NAME]; a name with blanks is quoted: [set."batch 118"]',
        ),
        (
            '[constant.K]\nfile = "C:\\data\\k.json"\n',
            2,
            12,
            "write a path with / or in single quotes: '...'",
        ),
        (
            '[tube.A]\nmarks = ["0 mm", "1 mm"\n',
            2,
            24,
            "see that quotes, brackets and commas are in pairs on this line or above it",
        ),
    ],
)
def test_text_that_is_no_toml(write_sheet, text, line, column, remedy):
    path = write_sheet(text)
    error = refusal(path)
    assert (error.path, error.line, error.remedy) == (str(path), line, remedy)
    assert error.column == pytest.approx(column, abs=1)  # parsers differ by one at a line's end
    assert error.first.message


@pytest.mark.parametrize(
    "text",
    [
        "a = " + "[" * 5000,
        "a = " + "[" * 200 + "]" * 200,
        ".".join(["a"] * 200) + " = 1",
        "a = " + "1" * 5000,
        "[bench]\ncoverage = 0x" + "f" * 9000,
        "[bench]\ncoverage = 1e999999",
    ],
    ids=["brackets", "lists", "keys", "digits", "hexadecimal", "power"],
)
def test_absurd_files_are_refused(write_sheet, text):
    path = write_sheet(text)
    assert refusal(path).path == str(path)


def test_problems_have_the_line_of_their_key_and_its_order(write_sheet):
    path = write_sheet(
        "\n".join(
            [
                '[set."batch 118"]',
                'tube = "B"',
                "[scatter]  # dof is missing",
                'relative = "0.3 %"',
                "[tube]",
                'A.bore = "50 kg"',
                '"A".marks = [',
                '  "0 mm",',
                '  "20",',
                "]",
                "[bench]",
                'title = """',
                "coverage = 3",
                '"""',
                "coverage = 95",
                "[[reference.R.viscosity]]",
                'temperature = "20 degC"',
                'value = "1 Pa.s"',
                "[[reference.R.viscosity]]",
                'temperature = "25 degC"',
                'value = "1 s"',
                "[liquid]",
                'oil = { density = "970 kg/m3", densty = "1" }',
            ]
        )
    )
    error = refusal(path)
    assert [(problem.line, problem.key) for problem in error.problems] == [
        (2, 'set."batch 118".tube'),
        (3, "scatter.dof"),
        (6, "tube.A.bore"),
        (7, "tube.A.marks[1]"),
        (15, "bench.coverage"),
        (21, "reference.R.viscosity[1].value"),
        (23, "liquid.oil.densty"),
    ]
    assert str(error).startswith(f"{path}:2: set.\"batch 118\".tube: there is no tube 'B'")


def test_the_message_of_the_sheet_stands_whole_behind_its_place(write_sheet):
    path = write_sheet('[tube.A]\nbore = "50.0 ± 0.1 mm"\ndistance = "20.0(1) cm"\n')
    assert str(refusal(path)) == (
        f"{path}:2: tube.A.bore: '50.0 ± 0.1 mm' does not say what ± means; certificate: add "
        "', k=2'; tolerance: add ', limits'; standard uncertainty: write '50.0(1) mm'"
    )
