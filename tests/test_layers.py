"""The shape of the house: imports point down, libraries have one doorway, modules stay small."""

import ast
import statistics
from collections.abc import Iterator
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parents[1] / "reglint"
MODULES = {
    ".".join(path.relative_to(PACKAGE.parent).with_suffix("").parts).removesuffix(".__init__"): path
    for path in PACKAGE.rglob("*.py")
}
#: From the words and numbers at the bottom to the edges at the top; DEVELOPERS.md tells why.
LAYERS = [
    ["reglint", "errors", "source", "nearest", "printable", "interval"],
    ["dimension", "preferred", "gradient", "roots", "plaintext", "tree"],
    ["document", "quantity"],
    ["functions", "formula", "statement", "schema"],
    ["declared", "kind", "rule", "policy", "part", "files"],
    ["circuit", "values", "check", "spec_schema"],
    ["rulebook", "settings", "discovery", "spec", "starter"],
    ["draft", "figure", "absent", "reader"],
    ["box", "worstcase", "proof", "margin"],
    [
        "account",
        "finding",
        "shares",
        "extent",
        "ruling",
        "yield_",
        "waiver",
        "judge",
        "calculation",
    ],
    ["pictures", "pictures.svg", "pictures.scale", "pictures.plot", "pictures.hatch"],
    ["pictures.contour", "pictures.sample", "pictures.field", "pictures.sweep"],
    ["pictures.meeting", "pictures.margins", "pictures.curves", "pictures.area"],
    ["pictures.adjustment", "accounting"],
    [
        "window",
        "lever",
        "relaxation",
        "project",
        "sheet",
        "explain",
        "catalogue",
        "output",
        "wording",
    ],
    ["jobs", "revision", "comparison", "cause", "compare", "movement", "commonmark", "page"],
    ["reports"],
    ["comparisons"],
    ["cli"],
    ["__main__"],
]
RANK = {name: rank for rank, names in enumerate(LAYERS) for name in names}
DOORWAYS = {
    "yaml": "document",
    "jsonschema": "schema",
    "quantiphy": "quantity",
    "click": "cli",
    "jinja2": "page",
}


def short(module: str) -> str:
    """Return a module's name within the package; a report counts as its folder."""
    name = module.removeprefix("reglint").lstrip(".") or "reglint"
    folder = name.partition(".")[0]
    return folder if folder in ("reports", "comparisons") else name


def imported(path: Path) -> Iterator[str]:
    """Yield the modules a file imports, anywhere in it."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module:
            if node.module == "reglint":
                names = (f"reglint.{alias.name}" for alias in node.names)
                yield from (name for name in names if name in MODULES)
            else:
                yield node.module


def test_every_module_has_its_layer() -> None:
    """The drawing names every module, and no module twice."""
    assert sorted(RANK) == sorted({short(module) for module in MODULES})


@pytest.mark.parametrize("module", MODULES)
def test_imports_point_down_or_sideways(module: str) -> None:
    """No module imports from a layer above its own."""
    for other in imported(MODULES[module]):
        if other.startswith("reglint"):
            assert RANK[short(other)] <= RANK[short(module)], other


def test_there_is_no_import_cycle() -> None:
    """Taking away modules that import none of the rest leaves nothing."""
    needs = {m: {o for o in imported(p) if o in MODULES and o != m} for m, p in MODULES.items()}
    while free := [module for module, others in needs.items() if not others & needs.keys()]:
        for module in free:
            del needs[module]
    assert not needs


@pytest.mark.parametrize(("library", "doorway"), DOORWAYS.items())
def test_a_library_has_one_doorway(library: str, doorway: str) -> None:
    """Only one module knows each of the outside libraries."""
    users = {
        short(module)
        for module, path in MODULES.items()
        if any(name.split(".")[0] == library for name in imported(path))
    }
    assert users == {doorway}


def test_modules_and_functions_are_small() -> None:
    """The median module has at most 120 lines and none over 400; no function has over 60."""
    sizes = [len(path.read_text(encoding="utf-8").splitlines()) for path in MODULES.values()]
    assert statistics.median(sizes) <= 120
    assert max(sizes) <= 400
    for path in MODULES.values():
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.FunctionDef):
                assert (node.end_lineno or 0) - node.lineno < 60, f"{path.name}: {node.name}"
