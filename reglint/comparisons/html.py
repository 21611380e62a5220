"""A comparison as a page: one file of HTML, nothing loaded, nothing run."""

from reglint import __version__, movement
from reglint.comparison import Comparison
from reglint.page import template


def render(comparison: Comparison) -> str:
    """Return the page."""
    return template("comparison").render(
        comparison=comparison, movement=movement, version=__version__
    )
