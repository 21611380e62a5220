"""A comparison in plain text: for each spec that changed, its rules that moved."""

from collections.abc import Iterator, Sequence

from reglint import movement, wording
from reglint.comparison import Compared, Comparison
from reglint.printable import printable


def render(comparison: Comparison) -> str:
    """Return the report; its last lines count and caution."""
    lines = [f"Margins against {comparison.against}", ""]
    for each in comparison.specs:
        lines += _spec(each)
    for said, problems in (("", comparison.problems), ("before, ", comparison.earlier_problems)):
        lines += [f"unreadable  {said}{each}" for each in problems]
    lines += [f"waiver  {movement.ending(*each)}" for each in comparison.ending]
    lines += [movement.summary(comparison), movement.SIGN, wording.CAUTION]
    return "".join(f"{printable(line)}\n" for line in lines)


def _spec(compared: Compared) -> Iterator[str]:
    spec = compared.verdict.spec
    yield f"{compared.word}  {spec.name} ({spec.kind.name})  {movement.place(compared)}"
    yield from (f"  changed  {movement.cause(each)}" for each in compared.causes)
    yield from (f"  waiver   {each}" for each in movement.waivers(compared))
    if compared.movements:
        yield from _table([movement.COLUMNS, *map(movement.cells, compared.movements)])
    yield ""


def _table(rows: Sequence[Sequence[str]]) -> Iterator[str]:
    """Yield rows with their columns under one another."""
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    for row in rows:
        padded = (cell.ljust(width) for cell, width in zip(row, widths, strict=True))
        yield f"    {'  '.join(padded)}".rstrip()
