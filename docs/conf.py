"""Settings of the documents as a site; ``docs/site.py`` builds it."""

from __future__ import annotations

from pygments.lexers.special import TextLexer
from sphinx.application import Sphinx

from plumbfall import __version__

project = "plumbfall"
version = release = __version__
root_doc = "index"
source_suffix = {".md": "markdown"}
extensions = ["myst_parser"]
myst_heading_anchors = 4
html_theme = "furo"
html_title = f"plumbfall {__version__}"
html_copy_source = False
html_show_copyright = False
html_show_sphinx = False
html_theme_options = {
    "light_css_variables": {"color-brand-primary": "#146172", "color-brand-content": "#146172"},
    "dark_css_variables": {"color-brand-primary": "#63bccd", "color-brand-content": "#63bccd"},
}
nitpicky = True


def setup(app: Sphinx) -> None:
    """Show timing files as they are."""
    app.add_lexer("csv", TextLexer)
