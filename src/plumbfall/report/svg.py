"""A drawing as SVG that can stand in a page beside others, under a strict content policy."""

from __future__ import annotations

import io
import re
import warnings
from collections.abc import Mapping
from html import escape
from typing import TYPE_CHECKING
from xml.etree import ElementTree

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["inline_svg"]

_NUMBER = re.compile(r"-?\d+\.?\d*(?:e-?\d+)?")
_REFERENCE = re.compile(r"#([\w.-]+)")
_ASKED = re.compile(r"url\(#([\w.-]+)\)|^#([\w.-]+)$")  # a colour beside it is no reference
_LEFT_OUT = ("font", "font-family", "version", "width", "height")  # the page's own font is used
_ROUNDED = ("x", "y", "width", "height", "transform")
_USE = ("href", "x", "y", "fill")
_INHERITED = {"font-size": "8.5px", "fill": "#24333b"}
"""What most texts have: said once, on the drawing itself."""


def inline_svg(figure: Figure, prefix: str, title: str, description: str) -> str:
    """Return a figure as an ``svg`` element to be put into a page.

    Parameters
    ----------
    figure : Figure
        The drawing; text stays text.
    prefix : str
        Put before every id, so that several drawings of a page do not clash.
    title, description : str
        What a screen reader says; escaped here.

    Returns
    -------
    str
        Markup without style attributes and style elements, the same for the same figure, without
        what matplotlib writes and nobody sees: coordinates have one decimal.
    """
    from plumbfall.report.house_style import house_style

    buffer = io.StringIO()
    nothing = dict.fromkeys(("Date", "Creator", "Format", "Type"))
    with house_style(), warnings.catch_warnings():
        # The browser has its own fonts for what matplotlib's lacks.
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        figure.savefig(buffer, format="svg", transparent=True, metadata=nothing)
    text = buffer.getvalue()
    root = ElementTree.fromstring(text[text.index("<svg") :])  # our own drawing, just made
    names = _short_names(root, prefix)
    body = "".join(_compact(child, names) for child in root)
    inherited = "".join(f' {name}="{value}"' for name, value in _INHERITED.items())
    return (
        f'<svg viewBox="{_rounded(root.get("viewBox", ""))}" role="img" '
        f'aria-labelledby="{prefix}-title {prefix}-desc"{inherited}>'
        f'<title id="{prefix}-title">{escape(title)}</title>'
        f'<desc id="{prefix}-desc">{escape(description)}</desc>{body}</svg>'
    )


def _short_names(root: ElementTree.Element, prefix: str) -> dict[str, str]:
    """Return a short id for everything that something refers to; the other ids are left out."""
    asked = [
        name
        for element in root.iter()
        for key, value in element.attrib.items()
        if key != "clip-path" and ("url(" in value or key.endswith("href"))
        for name in map("".join, _ASKED.findall(value))
    ]
    return {name: f"{prefix}-{n}" for n, name in enumerate(dict.fromkeys(asked), 1)}


def _compact(element: ElementTree.Element, names: Mapping[str, str]) -> str:
    """Return an element and what is in it as markup; groups that only group are opened."""
    tag = element.tag.rpartition("}")[2]
    if tag in ("style", "metadata", "clipPath"):  # what we draw stays within its axes
        return ""
    given = _attributes(element, names)
    if tag == "path" and given.get("fill") == "none" and "stroke" not in given:
        return ""
    inner = "".join(_compact(child, names) for child in element)
    if tag in ("g", "defs") and not inner:
        return ""
    if tag == "g" and not given:
        return inner
    if tag == "text":
        inner += escape(element.text or "")
        given = {name: value for name, value in given.items() if _INHERITED.get(name) != value}
    if tag == "use":  # what it refers to has the rest itself; a tick has no inside to fill
        kept = ("href", "x", "y") if given.get("stroke") == given.get("fill") else _USE
        given = {name: given[name] for name in kept if name in given}
    shown = "".join(f' {name}="{escape(value)}"' for name, value in given.items())
    return f"<{tag}{shown}>{inner}</{tag}>" if inner else f"<{tag}{shown}/>"


def _attributes(element: ElementTree.Element, names: Mapping[str, str]) -> dict[str, str]:
    sized = element.tag.endswith(("image", "rect", "pattern"))
    given: dict[str, str] = {}
    for key, value in element.attrib.items():
        name = key.rpartition("}")[2]
        if name == "style":
            given |= {one: _renamed(said, names) for one, said in _declarations(value).items()}
        elif name == "id":
            given |= {"id": names[value]} if value in names else {}
        elif name == "clip-path":
            continue
        elif name == "d":
            given["d"] = _path(value)
        elif value.startswith(("data:", "rotate(-0 ")):
            given |= {"href": value} if name == "href" else {}
        elif sized or name not in _LEFT_OUT:
            given[name] = _rounded(value) if name in _ROUNDED else _renamed(value, names)
    return given


def _declarations(style: str) -> dict[str, str]:
    """Turn ``style="fill: red"`` into ``fill="red"``: a strict content policy bars the former."""
    given = {}
    for declaration in style.split(";"):
        name, colon, value = (part.strip() for part in declaration.partition(":"))
        if not colon:
            continue
        if name == "font" and (size := re.search(r"([\d.]+px)", value)):
            given["font-size"] = size[1]
        if name not in _LEFT_OUT:
            given[name] = value
    return given


def _renamed(value: str, names: Mapping[str, str]) -> str:
    return _REFERENCE.sub(lambda found: f"#{names.get(found[1], found[1])}", value)


def _rounded(text: str) -> str:
    return _NUMBER.sub(lambda number: f"{float(number[0]):.1f}".removesuffix(".0"), text)


def _path(text: str) -> str:
    """Return a path on one line with one decimal."""
    return re.sub(r"\s*([A-Za-z])\s*", r"\1", " ".join(_rounded(text).split()))
