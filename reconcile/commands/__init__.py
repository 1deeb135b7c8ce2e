"""The command line: one file a command, and nothing computed here."""

from reconcile.commands.entry import main

__all__ = ["main"]
