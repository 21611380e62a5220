"""Reports of a comparison: one module a format; the module's name is the format's name.

Each has ``render(comparison: Comparison) -> str``. Adding a format is adding a file.
"""

from collections.abc import Callable
from importlib import import_module
from pkgutil import iter_modules
from typing import TypeAlias

from reglint.comparison import Comparison

Renderer: TypeAlias = Callable[[Comparison], str]


def names() -> list[str]:
    """Return the names of all formats, sorted."""
    return sorted(module.name for module in iter_modules(__path__))


def renderer(name: str) -> Renderer:
    """Return the renderer of a format; only its module is loaded."""
    render: Renderer = import_module(f"{__name__}.{name}").render
    return render
