"""The page a reviewer prints and signs: one file of HTML, nothing loaded, nothing run."""

from functools import cache
from typing import Any

from jinja2 import Environment, PackageLoader, StrictUndefined, Template
from markupsafe import Markup

from reglint import __version__, wording
from reglint.accounting import account
from reglint.calculation import LEGEND
from reglint.finding import Outcome, Run
from reglint.printable import printable
from reglint.reports import Options

#: The page shows an account of each spec.
ACCOUNT = account

#: The shape beside each outcome's word; neither depends on colour.
_SHAPES = {"pass": "●", "warn": "▲", "fail": "■", "waived": "◇", "unreadable": "✕"}
#: Who signs a page.
_SIGNERS = ("Prepared by", "Checked by", "Approved by")


def render(run: Run, options: Options) -> str:
    """Return the page; pictures in it are the only markup that is not escaped here."""
    return _template().render(
        run=run,
        everything=options.everything,
        version=__version__,
        left_out=[each for each in run.verdicts if each.account is None],
        outcomes=list(reversed(Outcome)),
    )


@cache
def _template() -> Template:
    """Return the page's template; undefined names are errors, not blanks."""
    environment = Environment(
        loader=PackageLoader("reglint", "reports"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_shown,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    environment.globals.update(
        wording=wording, shapes=_SHAPES, signers=_SIGNERS, legend=LEGEND, drawn=Markup
    )
    return environment.get_template("page.html.jinja")


def _shown(value: Any) -> Any:
    """Return what is put into the page: text without characters that could disturb it."""
    if isinstance(value, Markup):
        return value
    return "\n".join(printable(line) for line in str(value).split("\n"))
