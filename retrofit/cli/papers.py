"""Commands that write a report or a job card, and that compute a report again."""

from __future__ import annotations

import sys
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

import click

from retrofit.cli.computed import assessed, with_life_if_asked
from retrofit.cli.options import (
    CASE,
    OWN_NAME,
    force_option,
    form_option,
    json_option,
    on_option,
    report_units_option,
    units_option,
)
from retrofit.cli.shell import columns, fail, guarded, print_json, say_build, strong

if TYPE_CHECKING:
    from retrofit.report.carried import Carried

READ_WITH = {"html": " Open it in a browser; print it from there for paper or PDF.", "pdf": "", "xlsx": ""}


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@click.option("-o", "--output", type=CASE, help="HTML file to write; the case's name with .html if left out.")
@form_option("--pdf", "Write a PDF; its name, or the case's with .pdf. Without -o no HTML then.")
@form_option("--xlsx", "Write a spreadsheet; its name, or the case's with .xlsx. Without -o no HTML then.")
@report_units_option
@click.option("--templates", type=CASE, help="Folder of your own templates, laid over the built-in ones.")
@on_option
@force_option
@guarded
def report(
    case_file: Path,
    output: Path | None,
    pdf: Path | None,
    xlsx: Path | None,
    units: str,
    templates: Path | None,
    on: datetime | None,
    force: bool,
) -> None:
    """Write the report of a CASE as one HTML file, as PDF or as spreadsheet, each whole or not at all."""
    from retrofit.case import read_case
    from retrofit.report.files import write_whole
    from retrofit.report.outputs import render_forms, require
    from retrofit.report.targets import check_outputs

    paths = _report_paths(case_file, {"html": output, "pdf": pdf, "xlsx": xlsx})
    require(paths)
    case = read_case(case_file)
    check_outputs(paths.values(), case, templates, force=force)
    comparison = with_life_if_asked(assessed(case, on))
    contents = render_forms(paths, comparison, units, templates, made_at=datetime.now().astimezone())
    for form, path in paths.items():
        write_whole(path, contents[form])
        click.echo(f"Wrote {path}.{READ_WITH[form]}")


def _report_paths(case_file: Path, asked: dict[str, Path | None]) -> dict[str, Path]:
    """Return where to write each form asked for; of several, none over another or over the case."""
    from retrofit.report.targets import check_endings

    named = {form: path for form, path in asked.items() if path is not None} or {"html": OWN_NAME}
    paths = {form: Path(f"{case_file.stem}.{form}") if path == OWN_NAME else path for form, path in named.items()}
    places = [case_file.resolve(), *(path.resolve() for path in paths.values())]
    if len(set(places)) < len(places):
        raise click.UsageError("the files to write have to differ from each other and from the case")
    check_endings(paths, {form: f"write --{form} and the name" for form in ("pdf", "xlsx")})
    return paths


@click.command(epilog="Exit status: 0 nothing differs; 1 something differs, or the file cannot be used; 2 wrong usage.")
@click.argument("report_file", type=CASE, metavar="REPORT")
@json_option
@click.option("--case", "case_file", type=CASE, metavar="FILE", help="Write the case of the REPORT to FILE instead.")
@click.option("--force", is_flag=True, help="Overwrite the FILE of --case if it is there; never the REPORT.")
@guarded
def rerun(report_file: Path, as_json: bool, case_file: Path | None, force: bool) -> None:
    """Compute the case that an HTML REPORT carries again, and say whether anything differs and why."""
    from retrofit.report import carried

    if case_file:
        _check_case_file(case_file, report_file)
    kept = carried.read_carried(report_file)
    if case_file:
        _write_case(kept, case_file, force)
        return
    found = carried.rerun(kept, say_build)
    if as_json:
        print_json(carried.rerun_json(found))
    else:
        click.echo(carried.rerun_text(found, columns(), strong()))
    sys.exit(1 if found.differs else 0)


def _check_case_file(case_file: Path, report_file: Path) -> None:
    from retrofit.report.targets import check_case_file, check_endings, is_same

    if is_same(case_file, report_file):
        fail(f"{case_file} is the report itself, which is never overwritten; choose another name", 1)
    check_endings({"toml": case_file})
    check_case_file(case_file)


def _write_case(kept: Carried, case_file: Path, force: bool) -> None:
    from retrofit.report.files import write_whole
    from retrofit.report.targets import check_replaced
    from retrofit.units import shown

    check_replaced(case_file, lambda path: False, "may hold work of its own", force=force)
    write_whole(case_file, kept.case_text)
    click.echo(f"Wrote {case_file}, the case of {kept.name}.")
    if "case" in kept.altered:
        click.echo("It was edited in the report: its digest does not fit.", err=True)
    if kept.files:
        names = ", ".join(shown(name) for name in kept.files)
        click.echo(f"The report was made with {names} beside its case; computing it again uses them.", err=True)


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@click.argument("refrigerant", metavar="REFRIGERANT")
@click.option("-o", "--output", type=CASE, help="File to write; the case's name and the refrigerant if left out.")
@click.option("--inlet", metavar="TEMPERATURE", help='Air or water at the condenser on the day, such as "27 degC".')
@click.option(
    "--despite", metavar="REASON", help="Write them for a refrigerant that a check stops; the REASON stands on top."
)
@units_option
@click.option("--templates", type=CASE, help="Folder of your own templates, laid over the built-in ones.")
@on_option
@force_option
@guarded
def commission(
    case_file: Path,
    refrigerant: str,
    output: Path | None,
    inlet: str | None,
    despite: str | None,
    units: str,
    templates: Path | None,
    on: datetime | None,
    force: bool,
) -> None:
    """Write job card and commissioning sheet of the change of a CASE to one REFRIGERANT as one HTML file.

    A refrigerant that a check stops, that is not computed or that is a new plant is refused.
    """
    from retrofit.case import read_case
    from retrofit.case.exchangers import INLET
    from retrofit.refrigerants import find
    from retrofit.report import render_site_copy, write_report
    from retrofit.report.targets import check_endings, check_outputs

    name = find(refrigerant).designation
    T_inlet_K = None if inlet is None else INLET.read(inlet)
    path = output or Path(f"{case_file.stem}-{name}.html")
    case = read_case(case_file)
    check_outputs([path], case, templates, force=force)
    check_endings({"html": path})
    html = render_site_copy(
        assessed(case, on),
        name,
        units,
        templates,
        made_at=datetime.now().astimezone(),
        T_inlet_today_K=T_inlet_K,
        despite=despite,
    )
    write_report(path, html)
    click.echo(f"Wrote {path}. Print it from a browser and take it to the plant.")
