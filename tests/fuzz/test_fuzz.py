"""A second of fuzzing for each target, always the same: no text ends in a traceback."""

import importlib.util
from pathlib import Path
from types import ModuleType

import pytest


def load() -> ModuleType:
    """Return the script beside this file as a module."""
    path = Path(__file__).with_name("fuzz.py")
    spec = importlib.util.spec_from_file_location("fuzz", path)
    assert spec
    assert spec.loader
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


FUZZ = load()


@pytest.mark.parametrize("target", FUZZ.TARGETS)
def test_spoilt_text_is_refused_or_read(target: str) -> None:
    """Whatever is put in, the answer is a value or a refusal, and soon."""
    assert FUZZ.fuzz(target, 1.0) > 0


def test_a_find_is_told_with_its_text(monkeypatch: pytest.MonkeyPatch) -> None:
    """A reader that breaks is found: the check above can fail."""

    def broken(text: str) -> None:
        raise KeyError(text)

    monkeypatch.setitem(FUZZ.TARGETS, "broken", (lambda _: broken, ["a"]))
    with pytest.raises(AssertionError, match="broken: KeyError"):
        FUZZ.fuzz("broken", 1.0)
