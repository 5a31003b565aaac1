"""Running the page on this machine: one port of 127.0.0.1, a bounded number of requests at a time, an end by Ctrl-C."""

from __future__ import annotations

import contextlib
import logging
import signal
import threading
import webbrowser
from collections.abc import Callable, Iterator
from typing import TYPE_CHECKING, Any

from retrofit.errors import PortError
from retrofit.meeting.app import create_app
from retrofit.meeting.session import Session
from retrofit.meeting.writer import WRITING

if TYPE_CHECKING:
    from werkzeug.serving import BaseWSGIServer

ADDRESS = "127.0.0.1"
MOST_AT_ONCE = 64  # requests being answered; further ones wait in the queue of the system
IDLE_S = 5.0  # a connection that says nothing is closed


def make_server(session: Session, port: int = 0) -> BaseWSGIServer:
    """Return a server of a meeting, bound and ready to be run.

    Args:
        session: The meeting.
        port: Port of 127.0.0.1; 0 for any that is free. [-]
    Raises: PortError if the port is taken or not allowed.
    """
    from werkzeug.serving import ThreadedWSGIServer, WSGIRequestHandler

    class Handler(WSGIRequestHandler):
        timeout = IDLE_S

        def log(self, type: str, message: str, *args: Any) -> None:
            """Keep quiet: what is asked for is nobody's business."""

    class Server(ThreadedWSGIServer):
        daemon_threads = True

        def __init__(self, *args: Any, **options: Any) -> None:
            self.places = threading.BoundedSemaphore(MOST_AT_ONCE)
            super().__init__(*args, **options)

        def process_request(self, request: Any, client_address: Any) -> None:
            self.places.acquire()
            super().process_request(request, client_address)

        def process_request_thread(self, request: Any, client_address: Any) -> None:
            try:
                super().process_request_thread(request, client_address)
            finally:
                self.places.release()

        def handle_error(self, request: Any, client_address: Any) -> None:
            """A browser that goes away in the middle of an answer is no error."""

    logging.getLogger("werkzeug").setLevel(logging.ERROR)
    try:
        return Server(ADDRESS, port, create_app(session), handler=Handler)
    except (OSError, SystemExit, OverflowError) as error:
        raise PortError(
            f"port {port} of this machine cannot be had; leave --port out to take any that is free"
        ) from error


def serve(session: Session, port: int, is_opened: bool, say: Callable[[str], None]) -> None:
    """Show a meeting's page until Ctrl-C.

    Args:
        session: The meeting.
        port: Port of 127.0.0.1; 0 for any that is free. [-]
        is_opened: Whether to open a browser. [-]
        say: Takes what to tell the user.
    Raises: PortError if the port cannot be had.
    """
    server = make_server(session, port)
    address = f"http://{ADDRESS}:{server.server_port}/"
    say(f"The meeting is at {address} on this machine only. Ctrl-C ends it; what was frozen is kept.")
    if is_opened:
        threading.Thread(target=webbrowser.open, args=(address,), daemon=True).start()
    try:
        with _ended_as_by_keyboard():
            server.serve_forever(poll_interval=0.1)
    except KeyboardInterrupt:
        pass
    finally:
        server.server_close()
    if any(thread.name == WRITING for thread in threading.enumerate()):
        say("A revision is being written and is finished first.")
    say("The meeting is over.")


@contextlib.contextmanager
def _ended_as_by_keyboard() -> Iterator[None]:
    """Take the signal to end, as a machine that shuts down sends it, for Ctrl-C: what is being written is finished."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.signal(signal.SIGTERM, signal.default_int_handler)
    try:
        yield
    finally:
        signal.signal(signal.SIGTERM, before)
