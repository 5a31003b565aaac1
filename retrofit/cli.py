"""The command line: options in, calls, text out."""

from __future__ import annotations

import codecs
import contextlib
import importlib
import io
import json
import os
import signal
import sys
from collections.abc import Callable, Iterator
from datetime import datetime
from functools import wraps
from pathlib import Path
from typing import TYPE_CHECKING, Any, NoReturn

import click

from retrofit import __version__
from retrofit.errors import CaseFileError, RetrofitError

if TYPE_CHECKING:
    from retrofit.report.carried import Carried
    from retrofit.study import Comparison

EPILOG = (
    "Exit status: 0 done; 1 an error named on the error stream; 2 wrong usage or a case file that cannot be used. "
    "Nothing here replaces ASHRAE 34 and 15, ISO 817 and 5149 or EN 378, local code and licensed practice."
)
CASE = click.Path(path_type=Path)
OWN_NAME = Path()  # stands for the case's name with the ending of the form
READ_WITH = {"html": " Open it in a browser; print it from there for paper or PDF.", "pdf": "", "xlsx": ""}
WIDEST_PROSE = 100
MOST_DRAWS, MOST_SEED = 20_000, 2**32 - 1
INTERRUPTED = 128 + 2  # by the custom of shells: 128 and the number of the signal
# What stands for a sign that the encoding of a stream has no place for; a minus must never get lost.
PLAIN = {
    **{"−": "-", "–": "-", "─": "-", "·": ".", "±": "+/-", "≈": "~", "°": "deg", "²": "2", "³": "3", "…": "..."},
    **dict.fromkeys("\N{NO-BREAK SPACE}\N{NARROW NO-BREAK SPACE}\N{THIN SPACE}", " "),
}


def _guarded(command: Callable[..., None]) -> Callable[..., None]:
    """Show our own errors as one line (a case file's: one a problem), files' errors likewise; bugs stay loud."""

    @wraps(command)
    def run(*args: Any, **options: Any) -> None:
        _write_plainly_where_needed()
        try:
            command(*args, **options)
        except KeyboardInterrupt:
            _fail("stopped by the keyboard; nothing half done is left", INTERRUPTED)
        except CaseFileError as error:
            click.echo(str(error), err=True)
            sys.exit(error.exit_code)
        except RetrofitError as error:
            _fail(error.message, error.exit_code)
        except BrokenPipeError:
            # The reader has gone; leave quietly, and keep the interpreter from complaining at exit.
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
            sys.exit(1)
        except OSError as error:
            _fail(f"{error.filename or 'file'}: {error.strerror or error}", 1)

    return run


def _fail(message: str, status: int) -> NoReturn:
    from retrofit.units import shown

    click.echo(f"retrofit: {shown(message, 2000)}", err=True)
    sys.exit(status)


def _write_plainly_where_needed() -> None:
    """Let every text through to a stream whose encoding lacks some of its signs, as files on some systems do."""
    codecs.register_error("plain", _plain)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="plain")


def _plain(error: UnicodeError) -> tuple[str, int]:
    if not isinstance(error, UnicodeEncodeError):
        raise error
    missing = error.object[error.start : error.end]
    return "".join(PLAIN.get(sign) or ascii(sign)[1:-1] for sign in missing), error.end


def _columns() -> int:
    with contextlib.suppress(OSError, ValueError):
        return max(60, min(WIDEST_PROSE, os.get_terminal_size().columns))
    return WIDEST_PROSE


def _strong() -> Callable[[str], str]:
    """Return how a heading is set off: bold on a terminal that wants it."""
    plain = not sys.stdout.isatty() or os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
    return str if plain else lambda text: click.style(text, bold=True)


def _say_build(designation: str) -> None:
    """Say what takes a second, and load the library for it; its loading ends in a crash if it is interrupted."""
    with _interrupts_held():
        click.echo(f"Building the property tables of {designation}, once for this version…", err=True)
        importlib.import_module("CoolProp.CoolProp")


@contextlib.contextmanager
def _interrupts_held() -> Iterator[None]:
    """Let an interrupt wait until the block has ended."""
    came: list[int] = []
    before = signal.signal(signal.SIGINT, lambda number, frame: came.append(number))
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
    if came:
        raise KeyboardInterrupt


def _compared(case_file: Path, on: datetime | None) -> Comparison:
    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.study import compare as compare_case

    return assess(compare_case(read_case(case_file), _say_build), on.date() if on else None)


def _with_life_if_asked(comparison: Comparison) -> Comparison:
    """Return a result with the remaining life if its case asks for any of it."""
    case = comparison.case
    if case.year is None and case.emissions is None and case.money is None:
        return comparison
    from retrofit.study.life import with_life

    return with_life(comparison)


def _one_of(as_json: bool, as_csv: bool) -> None:
    if as_json and as_csv:
        raise click.UsageError("--json and --csv exclude each other")


def _print_json(value: object) -> None:
    click.echo(json.dumps(value, indent=1, allow_nan=False))


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
json_option = click.option("--json", "as_json", is_flag=True, help="One JSON object in SI base units.")


def _form_option(name: str, text: str) -> Callable[[Any], Any]:
    """Return an option that names a file, or stands by itself for the case's own name."""
    return click.option(name, type=CASE, is_flag=False, flag_value=str(OWN_NAME), metavar="[FILE]", help=text)


@click.group(epilog=EPILOG, context_settings={"help_option_names": ["-h", "--help"]})
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


@main.command()
@click.argument("case_file", type=CASE, metavar="FILE")
@click.option("--force", is_flag=True, help="Overwrite files that are there.")
@_guarded
def new(case_file: Path, force: bool) -> None:
    """Write a new case FILE to fill in, and its schema for editors beside it."""
    from retrofit.case import SCHEMA_FILE, case_schema, new_case_text
    from retrofit.report.files import write_whole

    schema = case_file.parent / SCHEMA_FILE
    if case_file.name == SCHEMA_FILE:
        _fail(f"{SCHEMA_FILE} is the name of the schema written beside the case; choose another name", 2)
    if case_file.exists() and not force:
        _fail(f"{case_file} is there already; choose another name or add --force", 1)
    write_whole(case_file, new_case_text())
    write_whole(schema, json.dumps(case_schema(), indent=1) + "\n")
    click.echo(f"Wrote {case_file} and {schema}. Fill it in, then: retrofit check {case_file}")


@main.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@_guarded
def check(case_file: Path) -> None:
    """Read a CASE file and name every problem in it."""
    from retrofit.case import read_case
    from retrofit.units import shown

    case = read_case(case_file)
    click.echo(f"{shown(str(case_file), 500)}: can be used. Candidates: {', '.join(case.compare.candidates)}.")
    for default in case.defaults:
        click.echo(f"  assumed: {default.key} = {default.shown_text} ({default.why})")


@main.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@units_option
@json_option
@click.option("--csv", "as_csv", is_flag=True, help="One line a refrigerant, in SI base units.")
@on_option
@_guarded
def compare(case_file: Path, units: str, as_json: bool, as_csv: bool, on: datetime | None) -> None:
    """Compare the candidates of a CASE with the refrigerant in the plant."""
    _one_of(as_json, as_csv)
    comparison = _compared(case_file, on)
    if as_json:
        from retrofit.report.machine import comparison_json

        _print_json(comparison_json(comparison))
    elif as_csv:
        from retrofit.report.machine import comparison_csv

        click.echo(comparison_csv(comparison), nl=False)
    else:
        from retrofit.report.terminal import comparison_text
        from retrofit.units import UNIT_SYSTEMS

        click.echo(comparison_text(comparison, UNIT_SYSTEMS[units], _columns(), _strong()))


@main.command()
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
@_guarded
def year(case_file: Path, units: str, as_json: bool, draws: int, seed: int, as_csv: bool, on: datetime | None) -> None:
    """Tell year, warming, money and how sure they are of every option of a CASE."""
    _one_of(as_json, as_csv)
    from retrofit.study.life import with_life

    comparison = with_life(_compared(case_file, on), draws, seed)
    if as_json:
        from retrofit.report.machine_year import year_json

        _print_json(year_json(comparison))
    elif as_csv:
        from retrofit.report.year_lines import year_csv

        click.echo(year_csv(comparison), nl=False)
    else:
        from retrofit.report.terminal_year import year_text
        from retrofit.units import UNIT_SYSTEMS

        click.echo(year_text(comparison, UNIT_SYSTEMS[units], _columns(), _strong()))


@main.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@click.option("-o", "--output", type=CASE, help="HTML file to write; the case's name with .html if left out.")
@_form_option("--pdf", "Write a PDF; its name, or the case's with .pdf. Without -o no HTML then.")
@_form_option("--xlsx", "Write a spreadsheet; its name, or the case's with .xlsx. Without -o no HTML then.")
@report_units_option
@click.option("--templates", type=CASE, help="Folder of your own templates, laid over the built-in ones.")
@on_option
@_guarded
def report(
    case_file: Path,
    output: Path | None,
    pdf: Path | None,
    xlsx: Path | None,
    units: str,
    templates: Path | None,
    on: datetime | None,
) -> None:
    """Write the report of a CASE as one HTML file, as PDF or as spreadsheet, each whole or not at all."""
    from retrofit.report.files import write_whole
    from retrofit.report.outputs import render_forms, require

    paths = _report_paths(case_file, {"html": output, "pdf": pdf, "xlsx": xlsx})
    require(paths)
    comparison = _with_life_if_asked(_compared(case_file, on))
    contents = render_forms(paths, comparison, units, templates, made_at=datetime.now().astimezone())
    for form, path in paths.items():
        write_whole(path, contents[form])
        click.echo(f"Wrote {path}.{READ_WITH[form]}")


def _report_paths(case_file: Path, asked: dict[str, Path | None]) -> dict[str, Path]:
    """Return where to write each form asked for; of several, none over another or over the case."""
    named = {form: path for form, path in asked.items() if path is not None} or {"html": OWN_NAME}
    paths = {form: Path(f"{case_file.stem}.{form}") if path == OWN_NAME else path for form, path in named.items()}
    places = [case_file.resolve(), *(path.resolve() for path in paths.values())]
    if len(set(places)) < len(places):
        raise click.UsageError("the files to write have to differ from each other and from the case")
    return paths


@main.command(epilog="Exit status: 0 nothing differs; 1 something differs, or the file cannot be used; 2 wrong usage.")
@click.argument("report_file", type=CASE, metavar="REPORT")
@json_option
@click.option("--case", "case_file", type=CASE, metavar="FILE", help="Write the case of the REPORT to FILE instead.")
@click.option("--force", is_flag=True, help="Overwrite the FILE of --case if it is there.")
@_guarded
def rerun(report_file: Path, as_json: bool, case_file: Path | None, force: bool) -> None:
    """Compute the case that an HTML REPORT carries again, and say whether anything differs and why."""
    from retrofit.report import carried

    kept = carried.read_carried(report_file)
    if case_file:
        _write_case(kept, case_file, force)
        return
    found = carried.rerun(kept, _say_build)
    if as_json:
        _print_json(carried.rerun_json(found))
    else:
        click.echo(carried.rerun_text(found, _columns(), _strong()))
    sys.exit(1 if found.differs else 0)


def _write_case(kept: Carried, case_file: Path, force: bool) -> None:
    from retrofit.report.files import write_whole
    from retrofit.units import shown

    if case_file.exists() and not force:
        _fail(f"{case_file} is there already; choose another name or add --force", 1)
    write_whole(case_file, kept.case_text)
    click.echo(f"Wrote {case_file}, the case of {kept.name}.")
    if "case" in kept.altered:
        click.echo("It was edited in the report: its digest does not fit.", err=True)
    if kept.files:
        names = ", ".join(shown(name) for name in kept.files)
        click.echo(f"The report was made with {names} beside its case; computing it again uses them.", err=True)


@main.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@click.argument("refrigerant", metavar="REFRIGERANT")
@click.option("-o", "--output", type=CASE, help="File to write; the case's name and the refrigerant if left out.")
@click.option("--inlet", metavar="TEMPERATURE", help='Air or water at the condenser on the day, such as "27 degC".')
@units_option
@click.option("--templates", type=CASE, help="Folder of your own templates, laid over the built-in ones.")
@on_option
@_guarded
def commission(
    case_file: Path,
    refrigerant: str,
    output: Path | None,
    inlet: str | None,
    units: str,
    templates: Path | None,
    on: datetime | None,
) -> None:
    """Write job card and commissioning sheet of the change of a CASE to one REFRIGERANT as one HTML file."""
    from retrofit.case.exchangers import INLET
    from retrofit.refrigerants import find
    from retrofit.report import render_site_copy, write_report

    name = find(refrigerant).designation
    T_inlet_K = None if inlet is None else INLET.read(inlet)
    html = render_site_copy(
        _compared(case_file, on),
        name,
        units,
        templates,
        made_at=datetime.now().astimezone(),
        T_inlet_today_K=T_inlet_K,
    )
    path = output or Path(f"{case_file.stem}-{name}.html")
    write_report(path, html)
    click.echo(f"Wrote {path}. Print it from a browser and take it to the plant.")


@main.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@units_option
@on_option
@click.option("--port", type=click.IntRange(0, 65535), default=0, help="Port of 127.0.0.1; any free one if left out.")
@click.option("--no-browser", is_flag=True, help="Only say where the page is.")
@_guarded
def meeting(case_file: Path, units: str, on: datetime | None, port: int, no_browser: bool) -> None:
    """Open a page on this machine to change a CASE together, and freeze what is decided."""
    from retrofit.meeting import session_of
    from retrofit.meeting.server import serve

    session = session_of(case_file, units, on.date() if on else None, _say_build)
    serve(session, port, not no_browser, click.echo)


@main.command()
@click.argument("names", nargs=-1, metavar="[NAME]...")
@json_option
@_guarded
def refrigerants(names: tuple[str, ...], as_json: bool) -> None:
    """List the refrigerants of the catalogue, or show NAMEs with the source of every value."""
    from retrofit.refrigerants import designations, find
    from retrofit.report.catalogue import catalogue_json, catalogue_text, refrigerant_text

    chosen = [find(name) for name in names or designations()]
    if as_json:
        _print_json(catalogue_json(chosen))
    elif names:
        click.echo("\n\n".join(refrigerant_text(item, _columns(), _strong()) for item in chosen))
    else:
        click.echo(catalogue_text(chosen, _strong()))


@main.command()
@click.argument("name", metavar="REFRIGERANT")
@click.option("--from", "start", default="-40 degC", show_default=True, help='First temperature, such as "-40 degC".')
@click.option("--to", "stop", default="60 degC", show_default=True, help='Last temperature, such as "140 degF".')
@click.option("--step", default="5 K", show_default=True, help='Step, such as "1 K".')
@units_option
@json_option
@_guarded
def pt(name: str, start: str, stop: str, step: str, units: str, as_json: bool) -> None:
    """Print bubble and dew pressures of a REFRIGERANT against temperature."""
    from retrofit.report.saturation import saturation_json, saturation_text, temperature_steps
    from retrofit.study.saturation import saturation_table
    from retrofit.units import UNIT_SYSTEMS

    table = saturation_table(name, temperature_steps(start, stop, step), _say_build)
    if as_json:
        _print_json(saturation_json(table))
    else:
        click.echo(saturation_text(table, UNIT_SYSTEMS[units], _columns(), _strong()))
