"""A comparison as Markdown, for a pull request: worse first, waivers in sight, the rest folded."""

from collections.abc import Iterator

from reglint import movement, wording
from reglint.commonmark import document, escaped, folded, table
from reglint.comparison import Compared, Comparison
from reglint.plaintext import short

#: A step that posts the report finds its own comment again by this.
_MARKER = "reglint compare"


def render(comparison: Comparison) -> str:
    """Return the report; it is cut at a line where a host would refuse it."""
    verdict = "worse than before" if comparison.worse else "not worse than before"
    against, counts = escaped(comparison.against), escaped(movement.summary(comparison))
    head = [f"**Margins: {verdict}**, against {against}. {counts}"]
    ordered = sorted(comparison.specs, key=lambda each: movement.WORDS.index(each.word))
    body = [*_problems(comparison), *_waivers(comparison)]
    for each in ordered:
        body += _spec(each)
    return document(_MARKER, head, body, [f"*{escaped(f'{movement.SIGN} {wording.CAUTION}')}*"])


def _problems(comparison: Comparison) -> Iterator[str]:
    rows = [(str(each), "now") for each in comparison.problems]
    rows += [(str(each), "before") for each in comparison.earlier_problems]
    yield from table(("unreadable", "when"), rows) if rows else ()


def _waivers(comparison: Comparison) -> Iterator[str]:
    """Yield what became of waivers: a change must not excuse itself unnoticed."""
    rows = [
        (short(each.verdict.spec.name), said)
        for each in comparison.specs
        for said in movement.waivers(each)
    ]
    rows += [
        (short(spec.name), movement.ending(spec, waiver)) for spec, waiver in comparison.ending
    ]
    yield from table(("spec", "waiver"), rows) if rows else ()


def _spec(compared: Compared) -> Iterator[str]:
    name, place = short(compared.verdict.spec.name), movement.place(compared)
    causes = [f"- {escaped(movement.cause(each))}" for each in compared.causes]
    rows = list(table(movement.COLUMNS, map(movement.cells, compared.movements)))
    lines = [*causes, *(rows if compared.movements else ())]
    if compared.word == "worse":
        yield from (f"**{compared.word}** {escaped(name)} ({escaped(place)})", "", *lines)
    else:
        yield from folded(f"{compared.word} {name} ({place})", lines)
