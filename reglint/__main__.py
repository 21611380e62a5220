"""Runs the command line: ``python -m reglint``."""

from reglint.cli import main

main()
