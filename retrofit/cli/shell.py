"""What is around every command: its errors as lines, its streams, the terminal's width, and interrupts."""

from __future__ import annotations

import codecs
import contextlib
import importlib
import io
import json
import logging
import os
import signal
import sys
import warnings
from collections.abc import Callable, Iterator
from functools import wraps
from typing import Any, NoReturn

import click

from retrofit.errors import CaseFileError, RetrofitError, StoreWarning

WIDEST_PROSE = 100
_QUIET = logging.NullHandler()
INTERRUPTED = 128 + 2  # by the custom of shells: 128 and the number of the signal
# What stands for a sign that the encoding of a stream has no place for; a minus must never get lost.
PLAIN = {
    **{"−": "-", "–": "-", "─": "-", "·": ".", "±": "+/-", "≈": "~", "°": "deg", "²": "2", "³": "3", "…": "..."},
    **dict.fromkeys("\N{NO-BREAK SPACE}\N{NARROW NO-BREAK SPACE}\N{THIN SPACE}", " "),
}


def guarded(command: Callable[..., None]) -> Callable[..., None]:
    """Show our own errors as one line (a case file's: one a problem), files' errors likewise; bugs stay loud."""

    @wraps(command)
    def run(*args: Any, **options: Any) -> None:
        _open_closed_streams()
        _write_plainly_where_needed()
        _keep_to_our_own_words()
        try:
            command(*args, **options)
        except KeyboardInterrupt:
            fail("stopped by the keyboard; nothing half done is left", INTERRUPTED)
        except CaseFileError as error:
            click.echo(str(error), err=True)
            sys.exit(error.exit_code)
        except RetrofitError as error:
            fail(error.message, error.exit_code)
        except BrokenPipeError:
            # The reader has gone; leave quietly, and keep the interpreter from complaining at exit.
            os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
            sys.exit(1)
        except OSError as error:
            fail(f"{error.filename or 'file'}: {error.strerror or error}", 1)

    return run


def fail(message: str, status: int) -> NoReturn:
    """Say on the error stream what is wrong, and end.

    Args:
        message: What is wrong and what to do next. [-]
        status: Status to end with. [-]
    """
    from retrofit.refrigerants import with_hyphens
    from retrofit.units import shown

    click.echo(f"retrofit: {with_hyphens(shown(message, 2000))}", err=True)
    sys.exit(status)


def _open_closed_streams() -> None:
    """Let what goes to a stream that was closed go nowhere; else the next file opened would take its place."""
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:
            setattr(sys, name, open(os.devnull, "w", encoding="utf-8"))


def _keep_to_our_own_words() -> None:
    """Show warnings of our own as a line, and none of a library: it would name its files, not what to do."""
    for library in ("matplotlib", "fontTools"):
        logging.getLogger(library).addHandler(_QUIET)
    shown_before = warnings.showwarning

    def show(message: Warning | str, category: type[Warning], *place: Any, **more: Any) -> None:
        if issubclass(category, StoreWarning):
            click.echo(f"retrofit: {message}", err=True)
        elif sys.warnoptions:  # they are asked for
            shown_before(message, category, *place, **more)

    warnings.showwarning = show


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


def columns() -> int:
    """Return the width to wrap prose to: that of the terminal, within what reads well. [characters]"""
    with contextlib.suppress(OSError, ValueError):
        return max(60, min(WIDEST_PROSE, os.get_terminal_size().columns))
    return WIDEST_PROSE


def strong() -> Callable[[str], str]:
    """Return how a heading is set off: bold on a terminal that wants it."""
    plain = not sys.stdout.isatty() or os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
    return str if plain else lambda text: click.style(text, bold=True)


def say_build(designation: str) -> None:
    """Say what takes a second, and load the library for it; its loading ends in a crash if it is interrupted."""
    from retrofit.refrigerants import with_hyphens

    with _interrupts_held():
        click.echo(f"Building the property tables of {with_hyphens(designation)}, once for this version…", err=True)
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


def print_json(value: object) -> None:
    """Print an object as JSON; a number that JSON does not have ends in an error.

    Args:
        value: The object.
    """
    click.echo(json.dumps(value, indent=1, allow_nan=False))
