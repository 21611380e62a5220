"""A kind under a policy: allowances in the kind's names, and what depends on what."""

import pytest

from reglint.circuit import Circuit, under, unit_of, without_policy
from reglint.formula import parse
from reglint.kind import Kind
from reglint.policy import Allowance, PartClass, Policy
from reglint.rulebook import Rulebook


def policy(text: str, *, missing: str = "") -> Policy:
    """Return a policy for resistors alone: of their power, with two styles."""
    not_covered = {missing: "no row for it"} if missing else {}
    allowance = Allowance("power_allowed", parse(text), "Table 1.", not_covered)
    styles = {
        "wound": {"factor": parse("0.6"), "top": parse("derate_above + 10 K")},
        "film": {"factor": parse("0.5"), "top": parse("70 degC")},
    }
    rows = PartClass("resistor", "film", styles, {"power_allowed": allowance})
    return Policy("house", "House rules", "", "", {"resistor": rows}, "house.yaml")


@pytest.fixture
def kind(rulebook: Rulebook) -> Kind:
    """Return the Zener shunt regulator."""
    found = rulebook.kind("zener-shunt")
    assert found is not None
    return found


def allowed(kind: Kind, text: str, style: str) -> str:
    """Return the formula of the resistor's allowed power under a policy."""
    circuit = under(kind, policy(text), {"series_resistor": style})
    formula = circuit.quantities["series_resistor.power_allowed"].formula
    assert formula is not None
    return formula.text


@pytest.mark.parametrize(
    ("style", "factor"), [("wound", "0.6"), ("film", "0.5"), ("", "0.5"), ("unheard-of", "0.5")]
)
def test_a_style_gives_its_figures_or_the_default(style: str, factor: str, kind: Kind) -> None:
    """A style the policy does not list has the figures of its default one."""
    found = allowed(kind, "style.factor * power_rating", style)
    assert found == f"{factor} * series_resistor.power_rating"


def test_a_figure_that_is_a_formula_keeps_its_meaning(kind: Kind) -> None:
    """It stands in brackets, in the component's names, so that the minus holds for all of it."""
    found = allowed(kind, "power_rating * (ambient - style.top) / (1 K)", "wound")
    assert found == (
        "series_resistor.power_rating * (ambient - (series_resistor.derate_above + 10 K)) / (1 K)"
    )


@pytest.mark.parametrize(
    ("missing", "style", "path", "why"),
    [
        ("", "", "series_resistor.voltage_allowed", "house has no figure for it"),
        ("", "", "zener.power_allowed", "house has no figure for it"),
        ("film", "", "series_resistor.power_allowed", "house: no row for it"),
        ("wound", "wound", "series_resistor.power_allowed", "house: no row for it"),
    ],
    ids=["no allowance", "no class", "default style", "stated style"],
)
def test_what_a_policy_does_not_cover_has_its_reason(
    missing: str, style: str, path: str, why: str, kind: Kind
) -> None:
    """It is no quantity then, so that nothing passes by it."""
    circuit = under(kind, policy("power_rating", missing=missing), {"series_resistor": style})
    assert circuit.not_covered[path] == why
    assert path not in circuit.quantities


def test_a_style_that_is_covered_is_not_missed(kind: Kind) -> None:
    """That another style has no row does not concern it."""
    circuit = under(kind, policy("power_rating", missing="wound"), {"series_resistor": "film"})
    assert "series_resistor.power_allowed" in circuit.quantities


@pytest.fixture
def circuit(kind: Kind) -> Circuit:
    """Return the kind without a policy."""
    return without_policy(kind)


def test_the_operating_point_depends_on_itself_and_what_surrounds_it(circuit: Circuit) -> None:
    """The equation of the Zener current goes through the node's voltage and back."""
    reach = circuit.reach("zener.current")
    assert {"zener.current", "node.voltage", "supply.voltage", "load.conductance"} <= reach
    assert "output.absolute_maximum" not in reach


def test_a_stated_name_depends_on_itself_only(circuit: Circuit) -> None:
    """Nothing is computed for it."""
    assert circuit.reach("supply.voltage") == {"supply.voltage"}


def test_a_formula_depends_on_what_all_its_names_do(circuit: Circuit) -> None:
    """The node's voltage and a limit, each with its own."""
    found = circuit.reach_of(parse("rail.voltage - output.absolute_maximum"))
    assert {"output.absolute_maximum", "zener.tempco", "rail.voltage"} <= found


def test_what_a_condition_fixes_needs_no_more_than_its_formula(circuit: Circuit) -> None:
    """With the Zener open the output follows from supply, resistor and loads alone."""
    fixes = circuit.kind.conditions["zener_open"].fixes
    needed = circuit.needed([parse("rail.voltage")], fixes)
    assert needed == {
        "rail.voltage",
        "node.voltage",
        "zener.current",
        "supply.voltage",
        "series_resistor.resistance",
        "load.current",
        "load.conductance",
    }


@pytest.mark.parametrize(
    ("name", "unit"),
    [
        ("rail.voltage", "V"),
        ("load.current", "A"),
        ("load.conductance.most", "S"),
        ("zener.voltage", "V"),
        ("zener.impedance.max", "ohm"),
        ("series_resistor.resistance.tolerance", "1"),
        ("zener.test", "1"),
        ("no.such.name", "1"),
    ],
)
def test_a_name_has_its_unit(name: str, unit: str, circuit: Circuit) -> None:
    """Quantities, totals and fields, and the ends of their ranges; words count."""
    assert unit_of(circuit, name) == unit
