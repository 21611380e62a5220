"""Places in text files: what every message points to."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, order=True)
class Span:
    """A stretch of text; lines and columns are code points counted from 1.

    The end column is one past the last character, as SARIF counts.
    """

    line: int
    column: int
    end_line: int
    end_column: int


#: The start of a file, for what concerns the file as a whole.
TOP = Span(1, 1, 1, 1)


@dataclass(frozen=True, slots=True)
class Complaint:
    """Something wrong in one file, before anybody said which file."""

    span: Span
    message: str


@dataclass(frozen=True, slots=True, order=True)
class Problem:
    """A file, or part of one, that could not be used, and where."""

    file: str
    span: Span
    message: str

    def __str__(self) -> str:
        """Return the problem in the form ``file:line:column: message``."""
        return f"{self.file}:{self.span.line}:{self.span.column}: {self.message}"
