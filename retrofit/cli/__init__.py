"""The command line: options in, calls, text out."""

from retrofit.cli.group import main

__all__ = ["main"]
