"""Tubes and balls that must agree: within themselves, with each other, and with constants."""

from __future__ import annotations

from collections.abc import Collection, Iterator

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Ball, Bench, Tube
from plumbfall.bench.schema import Sheet
from plumbfall.errors import Problem

__all__ = ["ball_problems", "misfits", "tube_problems"]


# --- tubes --------------------------------------------------------------------------------------


def tube_problems(sheet: Sheet, bench: Bench, tube: Tube, *, whole: bool) -> Iterator[Problem]:
    """Yield what does not agree within a tube, or between it and its constants."""
    keys = sheet.tube[tube.name]
    path = key_path("tube", tube.name)
    if keys.marks and keys.distance:
        yield Problem("both marks and distance are given", "keep one of them", key=path)
    if tube.kind == "calibrated":
        named = any(entry.tube == tube.name for entry in bench.constants.values())
        if whole and not tube.constant and not named:
            yield Problem(
                "a calibrated tube has no constant",
                f'add constant = "NAME" with [constant.NAME], or tube = "{tube.name}" to one '
                "(a file that calibrate has yet to write need not be there)",
                key=path,
            )
    else:
        if tube.constant:
            yield Problem(
                "a vertical tube takes no constant",
                'add kind = "calibrated", or drop constant',
                key=f"{path}.constant",
            )
        elif tube.bore is None:
            yield Problem("is missing", 'add bore, such as "50.00(2) mm"', key=f"{path}.bore")
        if not tube.marks and not tube.constant:
            yield Problem(
                "a vertical tube has no marks",
                'add distance = "200.00(5) mm", or marks = ["0 mm", "200.00(5) mm"]',
                key=path,
            )
    if len(tube.marks) == 1:
        yield Problem("one mark gives no distance", "give two marks or more", key=f"{path}.marks")
    for n, (upper, lower) in enumerate(zip(tube.marks, tube.marks[1:], strict=False), 1):
        if lower.value <= upper.value:
            yield Problem(
                f"'{lower.text}' is not below the mark before it, '{upper.text}'",
                "give distances down from the first mark, in order",
                key=f"{path}.marks[{n}]",
            )
    release, surface = tube.release_above, tube.surface_above
    if release and surface and release.value > surface.value:
        yield Problem(
            f"'{release.text}' above the first mark is above the liquid surface ('{surface.text}')",
            "a ball is let go below the surface",
            key=f"{path}.release_above",
        )
    offset = tube.release_offset
    if offset and tube.bore and abs(offset.value) >= tube.bore.value / 2:
        yield Problem(
            f"'{offset.text}' from the axis is outside the bore ('{tube.bore.text}')",
            "give the distance from the axis",
            key=f"{path}.release_offset",
        )


# --- balls --------------------------------------------------------------------------------------


def ball_problems(sheet: Sheet, ball: Ball) -> Iterator[Problem]:
    """Yield what does not agree within a ball."""
    keys = sheet.ball[ball.name]
    path = key_path("ball", ball.name)
    given = [key for key in ("density", "material", "mass") if getattr(keys, key) is not None]
    if len(given) != 1:
        said = f"both {' and '.join(given)} are given" if given else "nothing says how heavy it is"
        if len(given) == 3:
            said = "density, material and mass are all given"
        remedy = "keep one of them" if given else "add density, material or mass"
        yield Problem(said, remedy, key=path)
    if ball.weighed_together > 1 and ball.mass is None:
        yield Problem(
            "stands without mass",
            "add mass, or drop weighed_together",
            key=f"{path}.weighed_together",
        )
    if ball.balance and ball.mass is None:
        yield Problem("stands without mass", "add mass, or drop balance", key=f"{path}.balance")
    if ball.spread and not ball.lot:
        yield Problem(
            "a single ball has no spread from ball to ball",
            "add lot = true, or drop spread",
            key=f"{path}.spread",
        )


def misfits(bench: Bench) -> Iterator[Problem]:
    """Yield balls too wide for the tube they are named with, or for every tube there is."""
    said = set()
    for entry in bench.sets.values():
        tube = bench.tubes.get(entry.tube or _only(bench.tubes))
        ball = bench.balls.get(entry.ball or _only(bench.balls))
        if tube and ball and tube.bore and not _fits(ball, tube) and ball.name not in said:
            said.add(ball.name)
            yield _too_wide(ball, tube)
    if not bench.tubes or any(tube.bore is None for tube in bench.tubes.values()):
        return
    for ball in bench.balls.values():
        if ball.name not in said and not any(_fits(ball, tube) for tube in bench.tubes.values()):
            widest = max(bench.tubes.values(), key=lambda tube: tube.bore.value if tube.bore else 0)
            yield _too_wide(ball, widest)


def _only(entries: Collection[str]) -> str:
    names = list(entries)
    return names[0] if len(names) == 1 else ""


def _fits(ball: Ball, tube: Tube) -> bool:
    return tube.bore is None or ball.diameter.value < tube.bore.value


def _too_wide(ball: Ball, tube: Tube) -> Problem:
    bore = tube.bore.text if tube.bore else ""
    return Problem(
        f"ball '{ball.name}' of '{ball.diameter.text}' does not fit tube '{tube.name}' with a bore "
        f"of '{bore}'",
        "check both diameters and their units",
        key=key_path("ball", ball.name, "diameter"),
    )
