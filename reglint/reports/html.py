"""The page a reviewer prints and signs: one file of HTML, nothing loaded, nothing run."""

from reglint import __version__
from reglint.accounting import account
from reglint.calculation import LEGEND
from reglint.finding import Outcome, Run
from reglint.page import template
from reglint.reports import Options

#: The page shows an account of each spec.
ACCOUNT = account

#: Who signs a page.
_SIGNERS = ("Prepared by", "Checked by", "Approved by")


def render(run: Run, options: Options) -> str:
    """Return the page; pictures in it are the only markup that is not escaped there."""
    return template("check").render(
        run=run,
        everything=options.everything,
        drawing=options.drawn,
        version=__version__,
        left_out=[each for each in run.verdicts if each.account is None],
        outcomes=list(reversed(Outcome)),
        signers=_SIGNERS,
        legend=LEGEND,
    )
