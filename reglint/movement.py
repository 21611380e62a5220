"""The words in which every report tells a comparison."""

from collections import Counter
from collections.abc import Iterator

from reglint.comparison import Cause, Compared, Comparison, Movement
from reglint.finding import Finding
from reglint.quantity import render
from reglint.ruling import percent
from reglint.spec import Spec, Waiver
from reglint.wording import acceptance, outcome_word, plural

#: What became of a spec, the most urgent first.
WORDS = ("worse", "changed", "better", "added", "removed")
#: What the sign of a change means.
SIGN = "A change is in percent of the limit: + is margin won, − margin lost."
#: The columns of a table of movements.
COLUMNS = ("rule", "limit", "before", "after", "change")


def summary(comparison: Comparison) -> str:
    """Return how many specs became what."""
    ends = Counter(each.word for each in comparison.specs)
    counts = [f"{ends[word]} {word}" for word in WORDS if ends[word]]
    counts.append(f"{comparison.same} as before")
    return f"{plural(len(comparison.specs) + comparison.same, 'spec')}: {', '.join(counts)}."


def cells(movement: Movement) -> tuple[str, ...]:
    """Return the cells of a movement's row, in the order of `COLUMNS`."""
    before, after = movement.before, movement.after
    change = movement.change
    return (
        movement.rule,
        _limit(before, after),
        _state(before),
        _state(after),
        percent(change) if change is not None else "",
    )


def _limit(before: Finding | None, after: Finding | None) -> str:
    """Return the limit, or both where it moved."""
    found = [e for e in (before, after) if e is not None and e.limit is not None]
    limits = dict.fromkeys(render(each.limit or 0.0, each.unit) for each in found)
    return " → ".join(limits)


def _state(finding: Finding | None) -> str:
    """Return value, margin and outcome of a rule."""
    if finding is None:
        return "not judged"
    if finding.value is None or finding.margin is None:
        return f"{outcome_word(finding)}, not checked" if finding.limit is None else ""
    value = render(finding.value, finding.unit)
    return f"{value}, {percent(finding.margin)}, {outcome_word(finding)}"


def cause(found: Cause) -> str:
    """Return what changed, from what to what, and where it stands."""
    line = f", line {found.line}" if found.line else ""
    was, now = found.before or "not stated", found.after or "not stated any more"
    return f"{found.what}: {was} → {now} ({found.file}{line})"


def waivers(compared: Compared) -> Iterator[str]:
    """Yield the waivers of a spec that are new, changed or gone."""
    for word, waiver in compared.waivers():
        yield f"{word}: {waiver.rule}; {acceptance(waiver)}"


def ending(spec: Spec, waiver: Waiver) -> str:
    """Return which waiver ends soon, and where it stands."""
    place = f"{spec.file}, line {waiver.span.line}"
    return f"{waiver.rule} of {spec.name} ends on {waiver.until} ({place})"


def place(compared: Compared) -> str:
    """Return where a spec stands, or stood."""
    spec = compared.verdict.spec
    return f"{spec.file}, line {spec.line}"
