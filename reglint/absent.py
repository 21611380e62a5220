"""What stands in for figures a spec does not state: derived, or neglected and said so."""

import math

import numpy as np

from reglint.draft import Draft
from reglint.formula import Formula, Number, evaluate, names_in
from reglint.functions import REAL
from reglint.kind import Field
from reglint.spec import Term


def read_absent(draft: Draft, one: Field) -> None:
    """Take what stands in for a field that is not stated, and say so."""
    component = one.path.split(".")[0]
    if one.required:
        if component in draft.parts:
            name = draft.parts[component].name
            draft.complain(one.path, f"is missing, and part {name} does not state it either")
        return
    if one.choices and one.default:
        draft.numbers[one.path] = one.choices[one.default]
        return
    for formula in one.otherwise:
        if _derive(draft, one, formula):
            return
    if one.neglected is not None:
        _neglect(draft, one)


def _derive(draft: Draft, one: Field, formula: Formula) -> bool:
    """Try a formula for a field not stated; tell whether it has a value."""
    if not all(each.name in draft.numbers for each in names_in(formula.root)):
        return False
    with np.errstate(all="ignore"):
        value = float(evaluate(formula.root, lambda n: np.asarray(draft.numbers[n]), REAL))
    if not math.isfinite(value):
        return False
    draft.numbers[one.path] = value
    source = "" if isinstance(formula.root, Number) else f"{formula.text} = "
    draft.assume(one.path, f"not stated, taken as {source}", value, one.unit)
    return True


def _neglect(draft: Draft, one: Field) -> None:
    assert one.neglected is not None  # noqa: S101 -- the caller's question
    value = one.neglected.value
    if one.role == "swept":
        draft.swept[one.path] = (Term(one.path, value, value, value),)
    else:
        draft.numbers[one.path] = value
    draft.neglected[one.path] = one.neglected.says
    draft.assume(one.path, f"not stated: {one.neglected.says}")
