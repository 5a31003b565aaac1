"""Arguments and options that several commands take alike."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any

import click

CASE = click.Path(path_type=Path)
OWN_NAME = Path()  # stands for the case's name with the ending of the form

units_option = click.option(
    "--units", type=click.Choice(["si", "ip"]), default="si", show_default=True, help="Units of what is shown."
)
report_units_option = click.option(
    "--units",
    type=click.Choice(["si", "ip", "both"]),
    default="si",
    show_default=True,
    help="Units of what is shown; of a spreadsheet with both, si.",
)
on_option = click.option(
    "--on",
    type=click.DateTime(["%Y-%m-%d"]),
    metavar="DATE",
    help="Day to read the tables of law for, as 2027-04-01; today if left out.",
)
force_option = click.option(
    "--force", is_flag=True, help="Overwrite files that are there; never those that a case is made of."
)
json_option = click.option("--json", "as_json", is_flag=True, help="One JSON object in SI base units.")


def form_option(name: str, text: str) -> Callable[[Any], Any]:
    """Return an option that names a file, or stands by itself for the case's own name."""
    return click.option(name, type=CASE, is_flag=False, flag_value=str(OWN_NAME), metavar="[FILE]", help=text)


def one_of(as_json: bool, as_csv: bool) -> None:
    """Do nothing unless both forms for machines are asked for.

    Args:
        as_json, as_csv: Whether each is.
    Raises: UsageError if both are.
    """
    if as_json and as_csv:
        raise click.UsageError("--json and --csv exclude each other")
