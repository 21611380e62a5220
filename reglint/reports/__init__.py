"""Reports: one module a format; the module's name is the format's name.

Each has ``render(run: Run, options: Options) -> str``. Adding a format is adding a file.
"""

from collections.abc import Callable
from dataclasses import dataclass
from importlib import import_module
from pkgutil import iter_modules
from typing import TypeAlias

from reglint.finding import Run
from reglint.judge import Accountant


@dataclass(frozen=True, slots=True)
class Options:
    """How a report is wanted."""

    #: Passing rules are listed too.
    everything: bool = False
    #: Outcome words are coloured.
    colour: bool = False
    #: How builds were drawn for the yield, in words; empty where none were.
    drawn: str = ""
    #: Waived findings too, where a format leaves them out by default.
    complete: bool = False


Renderer: TypeAlias = Callable[[Run, Options], str]


def names() -> list[str]:
    """Return the names of all formats, sorted."""
    return sorted(module.name for module in iter_modules(__path__))


def renderer(name: str) -> Renderer:
    """Return the renderer of a format; only its module is loaded."""
    render: Renderer = import_module(f"{__name__}.{name}").render
    return render


def wants_extents(name: str) -> bool:
    """Tell whether a format shows the range of every quantity."""
    return bool(getattr(import_module(f"{__name__}.{name}"), "EXTENTS", False))


def accountant(name: str) -> Accountant | None:
    """Return what makes the accounts a format shows, where it shows any."""
    found: Accountant | None = getattr(import_module(f"{__name__}.{name}"), "ACCOUNT", None)
    return found


def wants_everything(name: str) -> bool:
    """Tell whether a format lists passing rules unasked."""
    return bool(getattr(import_module(f"{__name__}.{name}"), "EVERYTHING", False))
