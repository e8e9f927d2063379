"""A drawing as SVG that can stand in a page beside others, under a strict content policy."""

from __future__ import annotations

import io
import re
import warnings
from html import escape
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["inline_svg"]

_TAG = re.compile(r"<[^>]*>")
_STYLE = re.compile(r'\sstyle="([^"]*)"')
_NAME = re.compile(r'(\bid="|url\(#|href="#)')
_NO_ATTRIBUTE = ("font", "font-family")  # the page's own font is used


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
        Markup without style attributes and style elements, the same for the same figure.
    """
    import matplotlib as mpl

    from plumbfall.report.house_style import house_style

    buffer = io.StringIO()
    settings: dict[Any, Any] = {"svg.fonttype": "none", "svg.hashsalt": "plumbfall"}
    nothing = dict.fromkeys(("Date", "Creator", "Format", "Type"))
    with house_style(), mpl.rc_context(settings), warnings.catch_warnings():
        # The browser has its own fonts for what matplotlib's lacks.
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        figure.savefig(buffer, format="svg", transparent=True, metadata=nothing)
    text = buffer.getvalue()
    text = text[text.index("<svg") :]
    text = re.sub(r"<defs>\s*<style.*?</style>\s*</defs>", "", text, flags=re.DOTALL)
    text = re.sub(r"<!--.*?-->", "", text, flags=re.DOTALL)
    text = _TAG.sub(lambda tag: _inside_tag(tag[0], prefix), text)
    body = re.sub(r"\n\s*", "\n", text[text.index(">") + 1 :]).strip()
    box = re.search(r'viewBox="([^"]*)"', text)
    assert box is not None  # matplotlib writes one always
    return (
        f'<svg viewBox="{box[1]}" role="img" aria-labelledby="{prefix}-title {prefix}-desc" '
        f'xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink">'
        f'<title id="{prefix}-title">{escape(title)}</title>'
        f'<desc id="{prefix}-desc">{escape(description)}</desc>{body}'
    )


def _inside_tag(tag: str, prefix: str) -> str:
    return _NAME.sub(rf"\g<1>{prefix}-", _STYLE.sub(_as_attributes, tag))


def _as_attributes(match: re.Match[str]) -> str:
    """Turn ``style="fill: red"`` into ``fill="red"``: a strict content policy bars the former."""
    attributes = ""
    for declaration in match[1].split(";"):
        name, colon, value = (part.strip() for part in declaration.partition(":"))
        if not colon:
            continue
        if name == "font" and (size := re.search(r"([\d.]+px)", value)):
            attributes += f' font-size="{size[1]}"'
        if name not in _NO_ATTRIBUTE:
            attributes += f' {name}="{value}"'
    return attributes
