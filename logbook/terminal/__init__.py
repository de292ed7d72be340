"""Pieces as plain text, for a terminal, a pipe, or a printer."""

from logbook.terminal.render import render

__all__ = ["render"]
