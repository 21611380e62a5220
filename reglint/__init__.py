"""A design-rule linter for voltage-regulator specs kept as YAML beside the board."""

__version__ = "0.1.0"
