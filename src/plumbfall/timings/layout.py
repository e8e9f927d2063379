"""How a file is laid out: which column holds what, and how it writes its times."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from fractions import Fraction

from plumbfall.errors import nearest_name
from plumbfall.timings.headings import Heading, known_headings, normalised, read_heading
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.records import ColumnRead
from plumbfall.timings.vocabulary import is_value, part_heading

__all__ = ["Layout", "columns_read", "declared_unit", "find_layout"]

_PLURAL = {"time": "time", "mark": "marks", "interval": "intervals", "repeat": "repeats"}


@dataclass(frozen=True, slots=True)
class Layout:
    """The columns of a file by what they hold.

    ``kind`` is ``time``, ``marks``, ``intervals`` or ``repeats``; ``times`` are its columns in
    order, ``written`` the series they are headed with (``time`` for repeats headed ``time 1``);
    ``first_mark`` is 2 where the clock starts at a first mark that has no column. ``positions``
    are those of marks that are headed by them, in metres.
    """

    kind: str
    times: tuple[Heading, ...]
    fields: Mapping[str, Heading] = field(default_factory=dict)
    written: str = "time"
    first_mark: int = 1
    positions: tuple[Fraction, ...] = ()

    @property
    def n_marks(self) -> int:
        """How many marks the columns stand for; 0 where they do not say."""
        if self.kind == "marks":
            return len(self.times) + self.first_mark - 1
        return len(self.times) + 1 if self.kind == "intervals" else 0


def find_layout(
    headings: Sequence[Heading], heading_line: int | None, notices: Notices
) -> Layout | None:
    """Return the layout that the headings describe.

    ``None``, and an error in the notices, where they describe none or more than one.
    """
    placed = _numbered_by_position(headings, heading_line, notices)
    if placed is None:
        return None
    fields, series = _sorted(placed, heading_line, notices)
    groups = [(kind, columns) for kind, columns in series.items()]
    if "time" in fields:
        groups.append(("time", [fields["time"]]))
    if "total" in fields and not groups:
        notices.repair(
            "times are the differences of successive running totals",
            heading_line,
            fields["total"].column,
        )
        return Layout("total", (fields["total"],), fields)
    if "total" in fields and "time" not in fields:
        notices.repair(
            f"column {quoted(fields['total'].text)} is not used",
            heading_line,
            fields["total"].column,
        )
        del fields["total"]
    if not groups:
        _note_no_times(headings, heading_line, notices)
        return None
    if len(groups) > 1:
        firsts = sorted((columns[0] for _, columns in groups), key=lambda first: first.column)
        notices.error(
            "times are given in two layouts at once: "
            + " and ".join(quoted(first.text) for first in firsts),
            "leave one of them out, or rename its columns so that they are not read",
            heading_line,
            firsts[1].column,
        )
        return None
    if "time" in fields:
        return Layout("time", (fields["time"],), fields)
    kind, columns = groups[0]
    columns = sorted(columns, key=lambda heading: heading.number)
    numbers = [heading.number for heading in columns]
    first_number = 2 if kind == "mark" and 1 not in numbers else 1
    wanted = range(first_number, first_number + len(numbers))
    if numbers != list(wanted):
        absent = next(number for number in wanted if number not in numbers)
        after = next(heading for heading in columns if heading.number > absent)
        notices.error(
            f"there is {quoted(after.text)} but no column {quoted(f'{kind} {absent}')}",
            f"number the columns {kind} 1, {kind} 2, … without a gap",
            heading_line,
            after.column,
        )
        return None
    near_mark = _near(headings, "mark 1") if first_number == 2 else None
    if near_mark is not None:
        notices.error(
            f"column {quoted(near_mark.text)} may be meant as mark 1",
            'write its heading as "mark 1 [s]"; without mark 1 the clock starts there at 0',
            heading_line,
            near_mark.column,
        )
        return None
    if kind == "mark" and numbers[-1] < 2:
        notices.error(
            "a time needs two marks, and there is a column for one only",
            'add the column "mark 2", or head the fall time "time [s]"',
            heading_line,
            columns[0].column,
        )
        return None
    plural = "repeats" if kind == "time" else _PLURAL[kind]
    positions = tuple(heading.position for heading in columns if heading.position is not None)
    return Layout(plural, tuple(columns), fields, kind, first_number, positions)


def _numbered_by_position(
    headings: Sequence[Heading], line: int | None, notices: Notices
) -> list[Heading] | None:
    """Return the headings, marks that are headed by where they stand numbered from the first.

    ``None``, and an error noted, where some marks have a position and some a number.
    """
    placed = [heading for heading in headings if heading.position is not None]
    numbered = [one for one in headings if one.meaning == "mark" and one.position is None]
    if placed and numbered:
        notices.error(
            f"{quoted(placed[0].text)} names a mark by its position, and"
            f" {quoted(numbered[0].text)} by its number",
            "name all marks in the same way",
            line,
            placed[0].column,
        )
        return None
    order = sorted({one.position for one in placed if one.position is not None})
    return [
        heading
        if heading.position is None
        else replace(heading, number=order.index(heading.position) + 1)
        for heading in headings
    ]


def columns_read(
    headings: Sequence[Heading], layout: Layout, units: Mapping[str, str]
) -> tuple[ColumnRead, ...]:
    """Return how every column was understood, for a person to check at a glance."""
    used = {one.column: one for one in (*layout.fields.values(), *layout.times)}
    series = {"marks": "mark", "intervals": "interval", "repeats": "repeat"}.get(layout.kind)
    found = []
    for written in headings:
        heading = used.get(written.column, written)
        meaning = heading.label if heading.column in used else ""
        if heading.number and meaning and series:
            meaning = f"{series} {heading.number}"
        unit = heading.unit or declared_unit(heading, units) if meaning else ""
        found.append(ColumnRead(heading.column, heading.text, meaning, unit))
    return tuple(found)


def declared_unit(heading: Heading, units: Mapping[str, str]) -> str:
    """Return the unit that the user declared for a column, empty where there is none."""
    if heading.meaning not in ("temperature", "total", *_PLURAL):
        return ""
    what = "temperature" if heading.meaning == "temperature" else "time"
    names = (heading.text, heading.label, heading.meaning, what)
    return next((units[name] for name in names if name in units), "")


def _sorted(
    headings: Sequence[Heading], line: int | None, notices: Notices
) -> tuple[dict[str, Heading], dict[str, list[Heading]]]:
    """Sort headings into fields and series; note those that come twice or are not known."""
    fields: dict[str, Heading] = {}
    series: dict[str, list[Heading]] = {}
    seen: dict[str, Heading] = {}
    for heading in headings:
        if not heading.meaning:
            _note_unused(heading, line, notices)
            continue
        if heading.label in seen:
            notices.error(
                f"columns {seen[heading.label].column} and {heading.column} both hold"
                f" {quoted(heading.label)}: {quoted(seen[heading.label].text)} and"
                f" {quoted(heading.text)}",
                "leave one of them out, or rename it",
                line,
                heading.column,
            )
            continue
        seen[heading.label] = heading
        if heading.number or heading.meaning in ("mark", "interval", "repeat"):
            series.setdefault(heading.meaning, []).append(heading)
        else:
            fields[heading.meaning] = heading
    return fields, series


def _note_unused(heading: Heading, line: int | None, notices: Notices) -> None:
    if not heading.text:
        notices.repair(f"column {heading.column} has no heading and is not used", line)
        return
    name, unit = part_heading(heading.text)
    near = nearest_name(normalised(name), known_headings()) if len(name.strip()) > 2 else None
    if near and unit and not read_heading(f"{near} [{unit}]", 1).unit_fits:
        near = None  # a heading in millimetres is not a misspelt name
    hint = f"; did you mean {quoted(near)}?" if near else ""
    if near:
        notices.offer(f'columns."{name.strip()}"', f'"{read_heading(near, 1).label}"')
    notices.repair(f"column {quoted(heading.text)} is not used{hint}", line, heading.column)


def _near(headings: Sequence[Heading], wanted: str) -> Heading | None:
    names = {part_heading(h.text)[0]: h for h in headings if not h.meaning and h.text}
    near = nearest_name(wanted, names)
    return names[near] if near else None


def _note_no_times(headings: Sequence[Heading], line: int | None, notices: Notices) -> None:
    shown = ", ".join(quoted(heading.text, 30) for heading in headings[:12] if heading.text)
    for wanted in ("time", "fall time", "mark 1", "interval 1", "repeat 1"):
        near = _near(headings, wanted)
        if near:
            notices.offer(f'columns."{part_heading(near.text)[0]}"', f'"{wanted}"')
            notices.error(
                f"no column holds times; {quoted(near.text)} may be meant as {quoted(wanted)}",
                f'write its heading as "{wanted} [s]", with the unit that was used',
                line,
                near.column,
            )
            return
    if any(is_value(heading.text) for heading in headings):
        notices.error(
            f"there is no row of headings; the first row has {shown}",
            'write a row of headings above it, such as "ball", "time [s]", "temperature [degC]"',
            line,
        )
        return
    notices.error(
        f"no column holds times; the headings are {shown or 'empty'}",
        'head the fall times "time [s]", or name them under [timings] in the bench sheet:'
        ' columns = { "…" = "time" }',
        line,
    )
