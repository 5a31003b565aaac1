"""Commands that write and read a case file."""

from __future__ import annotations

import json
from datetime import datetime
from pathlib import Path

import click

from retrofit.cli.computed import compared, with_life_if_asked
from retrofit.cli.options import CASE, on_option
from retrofit.cli.shell import columns, fail, guarded, say_build


@click.command()
@click.argument("case_file", type=CASE, metavar="FILE")
@click.option("--force", is_flag=True, help="Overwrite files that are there; never through a link.")
@guarded
def new(case_file: Path, force: bool) -> None:
    """Write a new case FILE to fill in, and its schema for editors beside it."""
    from retrofit.case import SCHEMA_FILE, case_schema, new_case_text
    from retrofit.report.files import write_whole
    from retrofit.report.targets import check_case_file, check_endings, check_replaced, is_same, is_schema

    schema = case_file.parent / SCHEMA_FILE
    if case_file.name == SCHEMA_FILE or is_same(case_file, schema):
        fail(f"{SCHEMA_FILE} is the name of the schema written beside the case; choose another name", 2)
    check_endings({"toml": case_file})
    for file in (case_file, schema):
        check_case_file(file)
    check_replaced(case_file, lambda path: False, "may hold work of its own", force=force)
    check_replaced(schema, is_schema, "is not a schema of case files", force=force)
    write_whole(case_file, new_case_text())
    write_whole(schema, json.dumps(case_schema(), indent=1) + "\n")
    click.echo(f"Wrote {case_file} and {schema}. Fill it in, then: retrofit check {case_file}")


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@click.option("--open", "list_open", is_flag=True, help="List what is missing instead, as a sheet for the site.")
@click.option("--csv", "as_csv", is_flag=True, help="With --open: one line a key.")
@on_option
@guarded
def check(case_file: Path, list_open: bool, as_csv: bool, on: datetime | None) -> None:
    """Read a CASE file and name every problem in it, and what is assumed where it says nothing."""
    if as_csv and not list_open:
        raise click.UsageError("--csv goes with --open")
    if list_open:
        _list_open(case_file, as_csv, on)
        return
    from retrofit.case import read_case
    from retrofit.checks import require_usable
    from retrofit.refrigerants import with_hyphens
    from retrofit.study import case_as_taken
    from retrofit.units import shown

    case = read_case(case_file)
    require_usable(case)
    case = case_as_taken(case, say_build)
    candidates = with_hyphens(f"Candidates: {', '.join(case.compare.candidates)}.")
    click.echo(f"{shown(str(case_file), 500)}: can be used. {candidates}")
    for default in case.defaults:
        click.echo(f"  assumed: {default.key} = {default.shown_text} ({default.why})")


def _list_open(case_file: Path, as_csv: bool, on: datetime | None) -> None:
    """Print the keys that would settle what is not known of a case."""
    from retrofit.report.open_list import open_csv, open_text

    comparison = with_life_if_asked(compared(case_file, on), in_short=True)
    if as_csv:
        click.echo(open_csv(comparison), nl=False)
    else:
        click.echo(open_text(comparison, columns()))
