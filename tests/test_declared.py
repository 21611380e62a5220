"""Pictures as a kind declares them: names and dimensions are checked when the file is read."""

from pathlib import Path

import pytest

from reglint.files import Folder
from reglint.rulebook import Rulebook

KIND = Path(__file__).parents[1] / "rules/zener-shunt/kind.yaml"


def problems(folder: Path, old: str, new: str) -> list[str]:
    """Return what is wrong with the shipped kind after one change, under another name."""
    text = KIND.read_text(encoding="utf-8")
    assert text.count(old) == 1
    (folder / "house/odd").mkdir(parents=True)
    (folder / "house/odd/kind.yaml").write_text(text.replace(old, new), encoding="utf-8")
    book = Rulebook([Folder(folder / "house", "house")], [])
    kind = book.kind("odd")
    assert (kind is None) == bool(book.problems)
    return [each.message for each in book.problems]


def test_the_shipped_kind_declares_its_pictures() -> None:
    """The load line and the operating area of a Zener regulator are there to be drawn."""
    kind = Rulebook().kind("zener-shunt")
    assert kind is not None
    assert list(kind.pictures.curves) == ["load-line"]
    assert list(kind.pictures.areas) == ["operating-area"]
    assert kind.pictures.areas["operating-area"].across.text == "supply.voltage"


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "lines: node.voltage",
            "lines: node.volage",
            (
                "there is no field or quantity node.volage; the nearest known one is node.voltage"
                " (in node.volage)"
            ),
        ),
        (
            "lines: node.voltage",
            "lines: supply.current",
            "this is in A, but V is wanted (in supply.current)",
        ),
        ("from: 0 A", "from: 0 V", "this is in V, but A is wanted (in 0 V)"),
        (
            "free: zener.current",
            "free: supply.voltage",
            "one quantity is wanted here, by its name (in supply.voltage)",
        ),
        (
            "condition: any_load\n      free",
            "condition: any_lod\n      free",
            (
                "odd has no condition any_lod; the nearest known one is any_load"
                " (in zener.operating_voltage)"
            ),
        ),
        (
            "marks: [zener.minimum_current,",
            "marks: [zener.power,",
            "this is in W, but V is wanted (in zener.power)",
        ),
        (
            "across: supply.voltage",
            "across: rail.voltage",
            "one swept field or total is wanted here, by its name (in rail.voltage)",
        ),
        (
            "up: load.current",
            "up: load.curent",
            (
                "there is no field or quantity load.curent; the nearest known one is load.current"
                " (in load.curent)"
            ),
        ),
    ],
)
def test_a_picture_that_cannot_be_drawn_is_a_problem_of_its_file(
    old: str, new: str, message: str, tmp_path: Path
) -> None:
    """A wrong name, dimension or condition is told once, before any spec is read."""
    assert problems(tmp_path, old, new) == [message]


def test_a_kind_needs_no_pictures(tmp_path: Path) -> None:
    """Without the section the kind is sound; the margins are drawn all the same."""
    text = KIND.read_text(encoding="utf-8")
    section = text[text.index("pictures:\n") : text.index("sample:\n")]
    assert problems(tmp_path, section, "") == []
