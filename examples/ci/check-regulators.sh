#!/bin/sh
# The regulators' step of a CI workflow, for any CI that runs a shell and keeps files.
#
# Run it at the root of the hardware repository, with reglint installed:
#
#     sh ci/check-regulators.sh origin/main
#
# The argument is the revision a change is compared with, the branch it is to be merged into;
# without one, nothing is compared. In a shallow clone fetch it first.
#
# Artifacts to keep, in the folder regulators/:
#   check.sarif       for a code host: each finding at its line
#   check.junit.xml   for the CI's list of tests
#   check.md          to post on the pull request
#   check.html        to print and sign
#   compare.md        to post on the pull request: what the change does to the margins
#
# The status is that of the strictest step: 1 where a rule fails, or is worse than before; 2
# where a file could not be read. Every report is written all the same.
set -u
mkdir -p regulators
status=0

worst() {
    if [ "$1" -gt "$status" ]; then status=$1; fi
}

reglint check . --report sarif --out regulators/check.sarif --gate never || worst $?
reglint check . --report junit --out regulators/check.junit.xml --gate never || worst $?
reglint check . --report markdown --out regulators/check.md --gate never || worst $?
reglint check . --report html --out regulators/check.html --gate never || worst $?
if [ -n "${1:-}" ]; then
    reglint compare . --against "$1" --report markdown --out regulators/compare.md || worst $?
fi
# Last, so that what decides stands at the end of the log. The gate is the repository's own.
reglint check . || worst $?
exit "$status"
