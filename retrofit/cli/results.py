"""Commands that print a result in the terminal or for machines."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

import click

from retrofit.cli.computed import compared
from retrofit.cli.options import CASE, json_option, on_option, one_of, units_option
from retrofit.cli.shell import columns, guarded, print_json, strong

MOST_DRAWS, MOST_SEED = 20_000, 2**32 - 1


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@units_option
@json_option
@click.option("--csv", "as_csv", is_flag=True, help="One line a refrigerant, in SI base units.")
@on_option
@guarded
def compare(case_file: Path, units: str, as_json: bool, as_csv: bool, on: datetime | None) -> None:
    """Compare the candidates of a CASE with the refrigerant in the plant."""
    one_of(as_json, as_csv)
    comparison = compared(case_file, on)
    if as_json:
        from retrofit.report.machine import comparison_json

        print_json(comparison_json(comparison))
    elif as_csv:
        from retrofit.report.machine import comparison_csv

        click.echo(comparison_csv(comparison), nl=False)
    else:
        from retrofit.report.terminal import comparison_text
        from retrofit.units import UNIT_SYSTEMS

        click.echo(comparison_text(comparison, UNIT_SYSTEMS[units], columns(), strong()))


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@units_option
@json_option
@click.option(
    "--draws",
    type=click.IntRange(0, MOST_DRAWS),
    default=1000,
    show_default=True,
    help="Draws of the inputs; 0 for none.",
)
@click.option(
    "--seed",
    type=click.IntRange(0, MOST_SEED),
    default=1,
    show_default=True,
    help="The same seed gives the same draws.",
)
@click.option("--csv", "as_csv", is_flag=True, help="One line an option, in SI base units.")
@on_option
@guarded
def year(case_file: Path, units: str, as_json: bool, draws: int, seed: int, as_csv: bool, on: datetime | None) -> None:
    """Tell year, warming, money and how sure they are of every option of a CASE."""
    one_of(as_json, as_csv)
    from retrofit.study.life import with_life

    comparison = with_life(compared(case_file, on), draws, seed)
    if as_json:
        from retrofit.report.machine_year import year_json

        print_json(year_json(comparison))
    elif as_csv:
        from retrofit.report.year_lines import year_csv

        click.echo(year_csv(comparison), nl=False)
    else:
        from retrofit.report.terminal_year import year_text
        from retrofit.units import UNIT_SYSTEMS

        click.echo(year_text(comparison, UNIT_SYSTEMS[units], columns(), strong()))
