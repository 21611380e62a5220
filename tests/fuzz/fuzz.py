"""Feed readers with spoilt text, for as long as wanted: ``python tests/fuzz/fuzz.py SECONDS``.

Each target reads text from a file that may come from anybody. It may refuse with its own
exception; any other, and an answer that takes over two seconds, is a find: the text is printed.
With atheris installed its coverage leads the way (``--atheris TARGET``); otherwise seeds are
spoilt at random, the same way for the same number.
"""

# ruff: noqa: T201 -- what was tried is printed
import argparse
import sys
import tempfile
import time
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from random import Random

from reglint import document, formula, quantity
from reglint.errors import FormulaError, QuantityError
from reglint.project import Project
from reglint.rulebook import built_in

Reader = Callable[[str], None]

#: Pieces that mean something to one of the readers, put in by chance.
PIECES = (
    *("{", "}", "[", "]", ": ", ":", "- ", "---\n", "...", "#", "&a ", "*a", "!!str ", "<<: *a"),
    *("|\n", ">\n", "'", '"', "\\", "%YAML 1.2\n", "\t", "\n", "\r", "\x00", "\ufeff", "\u2028"),
    *("Ω", "µ", "−", "±", "°C", " %", "+10/-5 %", "1e999", "nan", "inf", "mV/K", "k", "M", "4k7"),
    *(
        "**",
        "(",
        ")",
        ",",
        "max(",
        "knee(",
        ".",
        "0",
        "9" * 30,
        "e",
        "supply.voltage",
        "\U0001f600",
    ),
)


def _document(text: str) -> None:
    document.read(text.encode("utf-8", "surrogatepass"))


def _quantity(text: str) -> None:
    try:
        found = quantity.parse_range(text, "V")
    except QuantityError:
        return
    assert found.min <= found.nom <= found.max, found


def _formula(text: str) -> None:
    try:
        formula.parse(text)
    except (FormulaError, QuantityError):
        return


def _spec(folder: Path) -> Reader:
    """Return a reader of specs in a project of its own."""
    project, path = Project(folder), folder / "fuzzed.reg.yaml"

    def read(text: str) -> None:
        path.write_bytes(text.encode("utf-8", "surrogatepass"))
        cases, problems = project.read(path)
        assert cases or problems, "neither a spec nor a problem"

    return read


def _seeds(*patterns: str) -> list[str]:
    return [
        path.read_text(encoding="utf-8")
        for pattern in patterns
        for path in sorted(built_in().path.glob(pattern))
    ]


_SPEC = _seeds("zener-shunt/kind.yaml")[0].partition("\nsample:\n")[2]
#: Each target with the texts that are spoilt for it.
TARGETS: Mapping[str, tuple[Callable[[Path], Reader], Sequence[str]]] = {
    "document": (lambda _: _document, _seeds("*/*.yaml", "parts/*.yaml")),
    "quantity": (lambda _: _quantity, ["12 V ± 10 %", "4.7 kV", "-10 V +1/-0.5 V", "32 dB"]),
    "formula": (lambda _: _formula, ["max(0 V, a.b / (1 - 2e-3 * c)) ** 2", "25 degC + x", "-a"]),
    "spec": (_spec, [_SPEC.replace("\n  ", "\n")[2:]]),
}


def spoilt(seed: str, random: Random) -> str:
    """Return a text with a few pieces put in, taken out, doubled or swapped."""
    text = seed
    for _ in range(random.randint(1, 6)):
        start = random.randint(0, len(text))
        end = min(len(text), start + random.choice((0, 0, 1, 2, 8, 40)))
        piece = random.choice(
            (random.choice(PIECES), text[start:end] * 2, "", chr(random.randrange(0xD7FF)))
        )
        text = text[:start] + piece + text[end:]
    return text


def fuzz(target: str, seconds: float, number: int = 0) -> int:
    """Spoil seeds for some seconds and return how many were tried; a find is raised."""
    (make, seeds), random, tried = TARGETS[target], Random(number), 0
    with tempfile.TemporaryDirectory() as folder:
        read, end = make(Path(folder)), time.perf_counter() + seconds
        while time.perf_counter() < end:
            _try(target, read, spoilt(random.choice(seeds), random))
            tried += 1
    return tried


def _try(target: str, read: Reader, text: str) -> None:
    start = time.perf_counter()
    try:
        read(text)
    except Exception as error:
        raise AssertionError(f"{target}: {error!r} for {text!r}") from error
    if time.perf_counter() - start > 2.0:
        raise AssertionError(f"{target}: over two seconds for {text!r}")


def main() -> None:
    """Fuzz every target for the seconds given, with a seed that can be given."""
    parser = argparse.ArgumentParser(description="Feed readers with spoilt text.")
    parser.add_argument("seconds", type=float)
    parser.add_argument("--seed", type=int, default=0)
    parser.add_argument("--atheris", choices=TARGETS, metavar="TARGET")
    wanted = parser.parse_args()
    if wanted.atheris:
        import atheris  # type: ignore[import-not-found]  # noqa: PLC0415 -- not installed with us

        with tempfile.TemporaryDirectory() as folder:
            read = TARGETS[wanted.atheris][0](Path(folder))
            atheris.Setup(sys.argv[:1], lambda data: read(data.decode("utf-8", "replace")))
            atheris.Fuzz()
    for target in TARGETS:
        print(target, fuzz(target, wanted.seconds, wanted.seed), flush=True)


if __name__ == "__main__":
    main()
