"""The command line: reads files, writes reports, sets the exit status.

Status 0: nothing at or above the gate. 1: findings at or above it. 2: a file could not be
read, or the command was misused. With several, the highest.

What one command alone needs is imported there: half the time of a short check is imports.
"""

import gc
import json
import os
import sys
from collections.abc import Callable
from datetime import date
from pathlib import Path
from typing import Any, TypeVar

import click

from reglint import __version__, comparisons, reports
from reglint.errors import ReaderGoneError, UsageError
from reglint.finding import Outcome, Run
from reglint.judge import Case, Wanted
from reglint.kind import Kind
from reglint.nearest import hint
from reglint.output import write
from reglint.project import Home, Project, Supposition
from reglint.reports import Options
from reglint.schema import KNOWLEDGE, knowledge_schema
from reglint.yield_ import DISTRIBUTIONS, Draw

F = TypeVar("F", bound=Callable[..., Any])

_PATHS = click.Path(path_type=Path)
_GATES = ("fail", "warn", "never")
_JOBS = "Processes for a run of more than a hundred specs."
_YIELD = "Draw N builds of each spec, and tell how many break a rule."


class _Today(click.ParamType):  # type: ignore[type-arg]  # its parameter is new in click 8.2
    name = "date"

    def convert(self, value: Any, param: Any, ctx: Any) -> date:
        try:
            return value if isinstance(value, date) else date.fromisoformat(value)
        except ValueError:
            self.fail(f"{value} is no date; write one such as 2027-06-30", param, ctx)


class _Supposed(click.ParamType):  # type: ignore[type-arg]  # its parameter is new in click 8.2
    name = "supposition"

    def convert(self, value: Any, param: Any, ctx: Any) -> Supposition:
        if isinstance(value, Supposition):
            return value
        place, equals, text = value.partition("=")
        spec, colon, field = place.partition(":")
        if not (equals and colon and spec and field and text):
            self.fail(f"{value}: write NAME:FIELD=TEXT, as d1:zener.part=1N4734A", param, ctx)
        return Supposition(spec.strip(), field.strip(), text.strip())


@click.group(context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, message="reglint %(version)s")
def cli() -> None:
    """Prove that every voltage regulator of a board holds, from specs kept beside it.

    A screening aid: local codes and licensed practice decide.
    """


@cli.command()
@click.argument("paths", nargs=-1, type=_PATHS)
@click.option("--report", type=click.Choice(reports.names()), default="text", show_default=True)
@click.option("--out", type=_PATHS, help="Write the report to a file instead.")
@click.option("--gate", type=click.Choice(_GATES), help="Outcome from which the status is 1.")
@click.option("--derating", metavar="NAME", help="Judge every spec under this policy.")
@click.option("--everything", is_flag=True, help="List passing rules too.")
@click.option(
    "--complete", is_flag=True, help="The complete log: waived findings with their suppressions."
)
@click.option(
    "--suppose",
    "suppositions",
    type=_Supposed(),
    multiple=True,
    metavar="NAME:FIELD=TEXT",
    help="Try a value without editing the file, as NAME:zener.part=1N4734A.",
)
@click.option("--yield", "builds", type=click.IntRange(1, 1_000_000), metavar="N", help=_YIELD)
@click.option("--seed", type=click.IntRange(0), default=1, show_default=True, help="For --yield.")
@click.option(
    "--distribution",
    type=click.Choice(list(DISTRIBUTIONS)),
    default="uniform",
    show_default=True,
    help="For --yield, of figures whose spec states none.",
)
@click.option("--jobs", type=click.IntRange(1), default=1, show_default=True, help=_JOBS)
@click.option("--today", type=_Today(), help="The day waivers are judged on, as 2027-06-30.")
@click.option("--colour/--no-colour", default=None, help="Colour, whatever the terminal says.")
@click.pass_context
def check(
    context: click.Context,
    paths: tuple[Path, ...],
    report: str,
    out: Path | None,
    gate: str | None,
    derating: str | None,
    everything: bool,
    complete: bool,
    suppositions: tuple[Supposition, ...],
    builds: int | None,
    seed: int,
    distribution: str,
    jobs: int,
    today: date | None,
    colour: bool | None,
) -> None:
    """Check the specs that PATHS lead to; without PATHS, those below this folder."""
    project = Project(Path.cwd(), derating, suppositions)
    specs = project.specs(paths or (Path.cwd(),))
    for path in project.untracked:
        said = "is not tracked by git yet: a check elsewhere will not see it"
        click.echo(f"reglint: {project.show(path)} {said}", err=True)
    day = today or date.today()  # noqa: DTZ011 -- a waiver ends on the reader's own day
    draw = Draw(builds, seed, distribution) if builds else None
    everything = everything or reports.wants_everything(report)
    extents, account = reports.wants_extents(report), reports.accountant(report)
    wanted = Wanted(day, everything, extents, draw, account=account)
    run = _checked(project, specs, wanted, jobs)
    _check_supposed(project, run)
    drawn = f"from seed {seed}, {distribution} where a spec states nothing else" if draw else ""
    options = Options(everything, out is None and _coloured(colour), drawn, complete)
    write(reports.renderer(report)(run, options), out)
    context.exit(_status(run, gate or project.gate()))


def _checked(project: Project, specs: list[Path], wanted: Wanted, jobs: int) -> Run:
    if jobs == 1:
        return project.check(specs, wanted)
    from reglint.jobs import check as shared

    return shared(project, specs, wanted, jobs)


def _check_supposed(project: Project, run: Run) -> None:
    """Refuse a supposition about a spec that is not there."""
    known = [verdict.spec.name for verdict in run.verdicts]
    for each in project.suppositions:
        if each not in project.used:
            raise UsageError(f"no spec is called {each.spec}{hint(each.spec, known)}")


@cli.command()
@click.argument("paths", nargs=-1, type=_PATHS)
@click.option("--against", metavar="REV", required=True, help="Git revision to compare with.")
@click.option("--report", type=click.Choice(comparisons.names()), default="text", show_default=True)
@click.option("--out", type=_PATHS, help="Write the report to a file instead.")
@click.option(
    "--gate",
    type=click.Choice(("worse", *_GATES)),
    default="worse",
    show_default=True,
    help="What makes the status 1: anything worse than before, or an outcome from this on.",
)
@click.option("--derating", metavar="NAME", help="Judge every spec under this policy.")
@click.option("--today", type=_Today(), help="The day waivers are judged on, as 2027-06-30.")
@click.pass_context
def compare(
    context: click.Context,
    paths: tuple[Path, ...],
    against: str,
    report: str,
    out: Path | None,
    gate: str,
    derating: str | None,
    today: date | None,
) -> None:
    """Compare the margins of the specs that PATHS lead to with those of a git revision."""
    from reglint.compare import compare as compared

    day = today or date.today()  # noqa: DTZ011 -- a waiver ends on the reader's own day
    found = compared(Path.cwd(), paths or (Path.cwd(),), against, derating, day)
    write(comparisons.renderer(report)(found), out)
    context.exit(2 if found.problems else int(found.reaches(gate)))


@cli.command()
@click.argument("name")
def explain(name: str) -> None:
    """Explain a rule, kind, quantity, field or derating policy in words, formula and source."""
    from reglint.explain import explain as explain_name

    home = _home()
    write(explain_name(name, home.rulebook), None)


@cli.command()
@click.argument("spec", type=_PATHS)
@click.option("--name", help="The spec's name, where the file holds several.")
@click.option("--derating", metavar="NAME", help="Judge under this policy.")
@click.option("--out", type=_PATHS, help="Write the sheet to a file instead.")
@click.pass_context
def sheet(
    context: click.Context, spec: Path, name: str | None, derating: str | None, out: Path | None
) -> None:
    """Print the calculation of SPEC: formulas, the numbers put in, least, nominal and most."""
    from reglint.sheet import sheet as calculation

    project = Project(Path.cwd(), derating)
    cases, problems = project.read(spec)
    problems += project.problems()
    for problem in problems:
        click.echo(f"reglint: {problem}", err=True)
    chosen = _chosen(cases, name, spec)
    write(
        "\n".join(calculation(case.spec, case.circuit, case.rules.values()) for case in chosen), out
    )
    context.exit(2 if problems else 0)


@cli.command()
@click.argument("spec", type=_PATHS)
@click.argument("field", required=False)
@click.option("--name", help="The spec's name, where the file holds several.")
@click.option("--derating", metavar="NAME", help="Judge under this policy.")
def window(spec: Path, field: str | None, name: str | None, derating: str | None) -> None:
    """Print the standard values of FIELD at which every rule of SPEC holds.

    Without FIELD, of every field that the spec's rules name for adjustment.
    """
    from reglint.relaxation import told as give_way
    from reglint.window import told, trials

    project = Project(Path.cwd(), derating)
    cases, problems = project.read(spec)
    if problems:
        raise UsageError(str(problems[0]))
    today = date.today()  # noqa: DTZ011 -- a waiver ends on the reader's own day
    for case in _chosen(cases, name, spec):
        adjusted = {each for rule in case.rules.values() for each in rule.adjust}
        for each in [field] if field else sorted(adjusted):
            if not (tried := trials(case.spec, each)):
                said = "with a tolerance, so no series is meant"
                raise UsageError(f"{case.spec.name} states no {each} {said}")
            found = project.window(case, each, tried, today)
            relaxed = [] if found.holding() else project.relaxations(case, found, today)
            write(told(case.spec, found) + give_way(relaxed, found.unit), None)


@cli.command()
@click.argument("kind")
@click.option("--out", type=_PATHS, help="Write the spec to a file instead.")
def starter(kind: str, out: Path | None) -> None:
    """Print a commented spec of KIND to fill in."""
    from reglint.starter import starter as commented

    write(commented(_kind(_home(), kind)), out)


@cli.command()
@click.argument("name", required=False)
@click.option("--out", type=_PATHS, help="Write the schema to a file instead.")
def schema(name: str | None, out: Path | None) -> None:
    """Print the JSON Schema of the specs of a kind, or of all kinds for an editor.

    NAME is a kind, or one of: rule, kind, policy, part, settings.
    """
    from reglint.spec_schema import editor_schema

    home = _home()
    if name is None:
        kinds = [_kind(home, each) for each in home.rulebook.kind_names()]
        found = editor_schema(kinds)
    elif name in KNOWLEDGE:
        found = knowledge_schema(name)
    else:
        found = home.schema(_kind(home, name))
    write(json.dumps(found, indent=2, ensure_ascii=False) + "\n", out)


@cli.command()
@click.argument("name", required=False)
def parts(name: str | None) -> None:
    """List the known parts, or print what is known of the part NAME and from where."""
    from reglint.catalogue import described, listed

    book = _home().rulebook
    if name is None:
        write(listed(book.parts().values()), None)
        return
    part = book.part(name)
    if isinstance(part, str):
        raise UsageError(part)
    write(described(part), None)


def _chosen(cases: list[Case], name: str | None, path: Path) -> list[Case]:
    """Return the cases of one name, or all where none is wanted."""
    chosen = [case for case in cases if name in (None, case.spec.name)]
    if name and not chosen:
        known = ", ".join(case.spec.name for case in cases)
        raise UsageError(f"{path} has no spec {name} (it has: {known})")
    return chosen


def _home() -> Home:
    """Return the home of the working folder; what is wrong with it is said at once."""
    project = Project(Path.cwd())
    home = project.home(Path.cwd() / "any")
    for problem in home.problems:
        click.echo(f"reglint: {problem}", err=True)
    return home


def _kind(home: Home, name: str) -> Kind:
    kind = home.rulebook.kind(name) if name in home.rulebook.kind_names() else None
    if kind is None:
        known = home.rulebook.kind_names()
        raise UsageError(f"there is no kind {name}{hint(name, known)} (known: {', '.join(known)})")
    return kind


def _status(run: Run, gate: str) -> int:
    if run.problems:
        return 2
    failing = run.count(Outcome.FAIL) + (run.count(Outcome.WARN) if gate == "warn" else 0)
    return 1 if failing and gate != "never" else 0


def _coloured(wish: bool | None) -> bool:
    """Decide on colour: an explicit wish wins, then the environment, then the terminal."""
    if wish is not None:
        return wish
    if os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb":
        return False
    return bool(os.environ.get("FORCE_COLOR")) or sys.stdout.isatty()


def main() -> None:
    """Run the command line; a user's mistake ends in a sentence, never in a traceback."""
    for stream in (sys.stdout, sys.stderr):
        stream.reconfigure(encoding="utf-8", errors="backslashreplace")  # type: ignore[union-attr]
    # Trees hold no cycles, and a run is short: the collector would walk them for nothing, which
    # took a quarter of the time of reading.
    gc.disable()
    try:
        status = cli.main(prog_name="reglint", standalone_mode=False)
    except UsageError as error:
        click.echo(f"reglint: {error}", err=True)
        status = 2
    except click.ClickException as error:
        error.show()
        status = 2
    except (click.Abort, KeyboardInterrupt):
        click.echo("reglint: stopped; no report was written", err=True)
        status = 130
    except ReaderGoneError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        status = 141
    sys.exit(status if isinstance(status, int) else 0)
