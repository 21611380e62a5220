"""The exceptions of reglint, one tree.

    ReglintError                 anything below; never shown as a traceback
    ├── QuantityError            a text is not the quantity a field asks for
    ├── DimensionError           an operation joins dimensions that do not fit
    ├── FormulaError             a formula is not in the language; knows the column
    ├── SolveError               an equation has no root between its bounds
    ├── UsageError               the command cannot do what it was asked
    └── ReaderGoneError          nobody reads the report any more

A mistake in somebody's file ends as a finding or a problem with a place. These
exceptions carry the sentence; whoever knows the file adds the place.
"""


class ReglintError(Exception):
    """Anything reglint refuses, with a sentence that says what to do."""


class QuantityError(ReglintError):
    """A text that is not the quantity a field asks for."""


class DimensionError(ReglintError):
    """An operation between dimensions that do not fit together."""


class FormulaError(ReglintError):
    """A text that is not a formula, with the column where it goes wrong.

    ``offset`` counts characters from the start of the formula, from 0.
    """

    def __init__(self, message: str, offset: int = 0) -> None:
        """Keep the sentence and where in the formula it applies."""
        super().__init__(message)
        self.offset = offset


class SolveError(ReglintError):
    """An equation without a root between its bounds."""


class UsageError(ReglintError):
    """A command that cannot do what it was asked."""


class ReaderGoneError(ReglintError):
    """A report whose reader stopped reading, as ``head`` does: it has read enough."""
