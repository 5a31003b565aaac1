"""The command itself, and which module each of its commands is in."""

from __future__ import annotations

import importlib

import click

from retrofit import __version__

EPILOG = (
    "Exit status: 0 done; 1 an error named on the error stream; 2 wrong usage or a case file that cannot be used. "
    "Nothing here replaces ASHRAE 34 and 15, ISO 817 and 5149 or EN 378, local code and licensed practice."
)
# A command's module is loaded when the command is asked for, so that none waits for the others.
COMMANDS = {
    "check": "cases",
    "commission": "papers",
    "compare": "results",
    "meeting": "meetings",
    "new": "cases",
    "pt": "tables",
    "refrigerants": "tables",
    "report": "papers",
    "rerun": "papers",
    "year": "results",
}


class _Commands(click.Group):
    """A group that finds its commands by name."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return sorted(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name in COMMANDS:
            return _loaded(cmd_name)
        self.commands = {name: _loaded(name) for name in COMMANDS}  # among which the library looks for a near one
        return None


def _loaded(name: str) -> click.Command:
    found: click.Command = getattr(importlib.import_module(f"retrofit.cli.{COMMANDS[name]}"), name)
    return found


@click.group(cls=_Commands, epilog=EPILOG, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, "-V", "--version", prog_name="retrofit")
def main() -> None:
    """Compare the options for changing the refrigerant of an existing vapour-compression plant.

    \b
    retrofit new plant.toml         start a case file
    retrofit compare plant.toml     compare the candidates in the terminal
    retrofit year plant.toml        tell a year, its warming and its money
    retrofit report plant.toml      write the report: HTML, PDF, spreadsheet
    retrofit rerun plant.html       compute a report again
    retrofit meeting plant.toml     open a page to change it together
    retrofit commission plant.toml R448A   print a job card for the site
    """
