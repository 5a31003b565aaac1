"""The command that opens the page for the meeting."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path

import click

from retrofit.cli.options import CASE, on_option, units_option
from retrofit.cli.shell import guarded, say_build


@click.command()
@click.argument("case_file", type=CASE, metavar="CASE")
@units_option
@on_option
@click.option("--port", type=click.IntRange(0, 65535), default=0, help="Port of 127.0.0.1; any free one if left out.")
@click.option("--no-browser", is_flag=True, help="Only say where the page is.")
@guarded
def meeting(case_file: Path, units: str, on: datetime | None, port: int, no_browser: bool) -> None:
    """Open a page on this machine to change a CASE together, and freeze what is decided."""
    from retrofit.meeting import session_of
    from retrofit.meeting.server import serve

    session = session_of(case_file, units, on.date() if on else None, say_build)
    serve(session, port, not no_browser, click.echo)
