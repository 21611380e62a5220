"""An account of a spec: what a reader needs beside its findings to follow and to sign it.

Data only, and all of it text: figures, calculation and pictures as they are shown.
"""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Figure:
    """One figure a spec is judged by."""

    path: str
    #: Its value, with its range where it has one.
    value: str
    symbol: str
    #: Where it comes from: a line, a part's file, or nowhere in the spec.
    place: str
    #: What was assumed about it.
    says: str = ""


@dataclass(frozen=True, slots=True)
class Step:
    """One quantity of a calculation."""

    path: str
    symbol: str
    says: str
    #: The formula, then the same with the nominal numbers put in.
    working: tuple[str, ...]
    nominal: str
    least: str
    most: str


@dataclass(frozen=True, slots=True)
class Chapter:
    """The calculation under one operating condition."""

    condition: str
    says: str
    #: What is left out of it, or nothing.
    note: str
    steps: tuple[Step, ...]


@dataclass(frozen=True, slots=True)
class Picture:
    """A drawing with the words that belong to it."""

    title: str
    #: A whole ``svg`` element, safe to put into a page.
    svg: str
    #: What it shows, and how far to trust it.
    says: str
    #: The marks in the drawing and what each stands for.
    key: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Account:
    """All that is shown of one spec beside its findings."""

    #: The derating policy it was judged under.
    derating: str
    figures: tuple[Figure, ...]
    calculation: tuple[Chapter, ...]
    pictures: tuple[Picture, ...]
    #: Pictures that could not be drawn, and why.
    missing: tuple[str, ...] = ()
