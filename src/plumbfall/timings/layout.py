"""How a file is laid out: which column holds what, and how it writes its times."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from plumbfall.errors import nearest_name
from plumbfall.timings.headings import Heading, known_headings, normalised, read_heading
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.records import ColumnRead

__all__ = ["Layout", "columns_read", "declared_unit", "find_layout", "read_headings"]

_PLURAL = {"time": "time", "mark": "marks", "interval": "intervals", "repeat": "repeats"}


@dataclass(frozen=True, slots=True)
class Layout:
    """The columns of a file by what they hold.

    ``kind`` is ``time``, ``marks``, ``intervals`` or ``repeats``; ``times`` are its columns in
    order, ``written`` the series they are headed with (``time`` for repeats headed ``time 1``);
    ``first_mark`` is 2 where the clock starts at a first mark that has no column.
    """

    kind: str
    times: tuple[Heading, ...]
    fields: Mapping[str, Heading] = field(default_factory=dict)
    written: str = "time"
    first_mark: int = 1

    @property
    def n_marks(self) -> int:
        """How many marks the columns stand for; 0 where they do not say."""
        if self.kind == "marks":
            return len(self.times) + self.first_mark - 1
        return len(self.times) + 1 if self.kind == "intervals" else 0


def read_headings(
    texts: Sequence[str], declared: Mapping[str, str], notices: Notices, used: set[str]
) -> list[Heading]:
    """Return the meaning of every heading, by the user's declarations before our own list.

    ``used`` takes the declarations that met a heading.
    """
    by_name = {normalised(name): (name, meaning) for name, meaning in declared.items()}
    headings = []
    for column, text in enumerate(texts, 1):
        heading = read_heading(text, column)
        parted = read_heading_unit(text)
        for candidate in (text, parted[0]):
            if normalised(candidate) in by_name:
                name, meaning = by_name[normalised(candidate)]
                used.add(name)
                wanted = read_heading(meaning, column)
                if not wanted.meaning:
                    _note_meaning(name, meaning, notices)
                unit = wanted.unit or (parted[1] if candidate != text else heading.unit)
                heading = Heading(text.strip(), column, wanted.meaning, wanted.number, unit)
                break
        headings.append(heading)
    return headings


def read_heading_unit(text: str) -> tuple[str, str]:
    """Part a heading that is not known by itself into its name and its unit."""
    for opening, closing in ("[]", "()"):
        name, found, rest = text.strip().partition(opening)
        if found and rest.endswith(closing):
            return name, rest[:-1].strip()
    for separator in ("/", "_"):
        name, found, unit = text.strip().rpartition(separator)
        if found:
            return name, unit.strip()
    return text, ""


def _note_meaning(name: str, meaning: str, notices: Notices) -> None:
    near = nearest_name(meaning, known_headings())
    hint = f"did you mean {quoted(near)}?" if near else "use one of the usual headings"
    notices.error(
        f"{quoted(meaning)} is not something a column can hold",
        hint,
        key=f"timings.columns.{name}",
    )


def find_layout(
    headings: Sequence[Heading], heading_line: int | None, notices: Notices
) -> Layout | None:
    """Return the layout that the headings describe.

    ``None``, and an error in the notices, where they describe none or more than one.
    """
    fields, series = _sorted(headings, heading_line, notices)
    groups = [(kind, columns) for kind, columns in series.items()]
    if "time" in fields:
        groups.append(("time", [fields["time"]]))
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
    return Layout(plural, tuple(columns), fields, kind, first_number)


def columns_read(
    headings: Sequence[Heading], layout: Layout, units: Mapping[str, str]
) -> tuple[ColumnRead, ...]:
    """Return how every column was understood, for a person to check at a glance."""
    used = {heading.column for heading in (*layout.times, *layout.fields.values())}
    series = {"marks": "mark", "intervals": "interval", "repeats": "repeat"}.get(layout.kind)
    found = []
    for heading in headings:
        meaning = heading.label if heading.column in used else ""
        if heading.number and meaning and series:
            meaning = f"{series} {heading.number}"
        unit = heading.unit or declared_unit(heading, units) if meaning else ""
        found.append(ColumnRead(heading.column, heading.text, meaning, unit))
    return tuple(found)


def declared_unit(heading: Heading, units: Mapping[str, str]) -> str:
    """Return the unit that the user declared for a column, empty where there is none."""
    if heading.meaning not in ("temperature", *_PLURAL):
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
    name, unit = read_heading_unit(heading.text)
    near = nearest_name(normalised(name), known_headings()) if len(name.strip()) > 2 else None
    if near and unit and not read_heading(f"{near} [{unit}]", 1).unit_fits:
        near = None  # a heading in millimetres is not a misspelt name
    hint = f"; did you mean {quoted(near)}?" if near else ""
    notices.repair(f"column {quoted(heading.text)} is not used{hint}", line, heading.column)


def _near(headings: Sequence[Heading], wanted: str) -> Heading | None:
    names = {read_heading_unit(h.text)[0]: h for h in headings if not h.meaning and h.text}
    near = nearest_name(wanted, names)
    return names[near] if near else None


def _note_no_times(headings: Sequence[Heading], line: int | None, notices: Notices) -> None:
    shown = ", ".join(quoted(heading.text, 30) for heading in headings[:12] if heading.text)
    for wanted in ("time", "fall time", "mark 1", "interval 1", "repeat 1"):
        near = _near(headings, wanted)
        if near:
            notices.error(
                f"no column holds times; {quoted(near.text)} may be meant as {quoted(wanted)}",
                f'write its heading as "{wanted} [s]", with the unit that was used',
                line,
                near.column,
            )
            return
    notices.error(
        f"no column holds times; the headings are {shown or 'empty'}",
        'head the fall times "time [s]", or name them under [timings] in the bench sheet:'
        ' columns = { "…" = "time" }',
        line,
    )
