"""Pages: HTML that loads nothing and runs nothing, made from the templates in ``pages/``."""

from functools import cache
from typing import Any

from jinja2 import Environment, PackageLoader, StrictUndefined, Template
from markupsafe import Markup

from reglint import wording
from reglint.printable import printable

#: The shape beside each word for an outcome; neither depends on colour.
_SHAPES = {
    "pass": "●",
    "warn": "▲",
    "fail": "■",
    "waived": "◇",
    "unreadable": "✕",
    "better": "↑",
    "worse": "↓",
    "changed": "↔",
    "added": "+",
    "removed": "−",
}


@cache
def template(name: str) -> Template:
    """Return a page's template; undefined names are errors, not blanks."""
    environment = Environment(
        loader=PackageLoader("reglint", "pages"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_shown,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    environment.globals.update(wording=wording, shapes=_SHAPES, drawn=Markup)
    return environment.get_template(f"{name}.html.jinja")


def _shown(value: Any) -> Any:
    """Return what is put into the page: text without characters that could disturb it."""
    if isinstance(value, Markup):
        return value
    return "\n".join(printable(line) for line in str(value).split("\n"))
