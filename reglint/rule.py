"""A rule: an inequality between quantities that must hold, with its reason and source."""

from dataclasses import dataclass

from reglint import quantity
from reglint.formula import Formula, Inequality
from reglint.statement import Statements
from reglint.tree import Document, Mapping, plain, section


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule of a kind; the file's name is its name."""

    name: str
    title: str
    #: The operating condition it is judged under.
    condition: str
    holds: Inequality
    #: What the margin is a fraction of, where that is not the limit.
    relative_to: Formula | None
    #: The margin, as a fraction, under which a rule that holds still warns.
    warn_margin: float
    #: Whether a break is a warning, never a failure.
    at_worst_warn: bool
    #: Whether a spec that lacks a figure skips the rule silently.
    optional: bool
    #: Figures that must be stated, not assumed.
    needs: tuple[str, ...]
    #: Influences whose neglect makes a pass a warning.
    counts_on: tuple[str, ...]
    #: The field on whose line a finding is shown.
    point_at: str
    reason: str
    source: str
    remedy: str
    #: The fields whose change may make the rule hold.
    adjust: tuple[str, ...]
    #: Changes to the kind's sample under which the rule passes, and fails.
    passes: Mapping
    fails: Mapping
    file: str

    def formulas(self) -> tuple[Formula, ...]:
        """Return every formula the rule's margin is made of."""
        sides = (self.holds.value, self.holds.limit)
        return sides if self.relative_to is None else (*sides, self.relative_to)


def read_rule(document: Document, name: str, file: str, statements: Statements) -> Rule:
    """Build a rule from a document that its schema accepts; complaints go to ``statements``."""
    root = document.root
    texts = plain(root)
    needs = texts.get("needs", [])
    return Rule(
        name=name,
        title=texts["title"],
        condition=texts["condition"],
        holds=statements.inequality(root, "holds"),
        relative_to=statements.optional(root, "relative_to"),
        warn_margin=quantity.parse(texts.get("warn_margin", "0 %"), "1"),
        at_worst_warn=texts.get("at_worst") == "warn",
        optional=needs == "optional",
        needs=() if needs == "optional" else tuple(needs),
        counts_on=tuple(texts.get("counts_on", ())),
        point_at=texts["point_at"],
        reason=texts["reason"].strip(),
        source=texts["source"].strip(),
        remedy=texts["remedy"].strip(),
        adjust=tuple(texts.get("adjust", ())),
        passes=section(root, "passes"),
        fails=section(root, "fails"),
        file=file,
    )
