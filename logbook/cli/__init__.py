"""The command `logbook`: check, new, compare."""

from logbook.cli.command import main

__all__ = ["main"]
