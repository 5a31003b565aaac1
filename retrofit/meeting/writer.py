"""Writing a revision outside the requests, one at a time, so that every page can say that it is under way."""

from __future__ import annotations

import logging
import threading
import time
from datetime import datetime

from retrofit.errors import CaseFileError, RetrofitError
from retrofit.meeting.freeze import freeze
from retrofit.meeting.session import Session
from retrofit.meeting.state import State

WRITING = "revision"  # name of the thread
PATIENCE_S = 0.8  # what takes longer is shown as under way


class Writer:
    """Writes the revisions of a meeting; the end of the program waits for one that is begun."""

    def __init__(self, session: Session, patience_s: float = PATIENCE_S) -> None:
        self.session, self.patience_s = session, patience_s
        self._lock = threading.Lock()
        self._thread: threading.Thread | None = None
        self._since = 0.0

    @property
    def is_writing(self) -> bool:
        """Return whether a revision is being written."""
        return self._thread is not None and self._thread.is_alive()

    @property
    def said(self) -> str:
        """Return what is being written, in words; empty if nothing."""
        if not self.is_writing:
            return ""
        return f"Writing the revision and its report, {time.monotonic() - self._since:.0f} s so far"

    def begin(self, what: str, at: datetime) -> None:
        """Begin to write the present state as a revision, and wait a little for it; what hinders it is shown.

        Args:
            what: What the revision is about, in the words of the meeting. [-]
            at: The time to print.
        """
        with self._lock:
            if self.is_writing:
                self.session.complain("the revision before it is still being written; freeze again when it is there")
                return
            # No daemon: both files of a revision are written, or none, also when the meeting is ended meanwhile.
            self._thread = threading.Thread(
                target=self._write, args=(self.session.state, what, at), name=WRITING, daemon=False
            )
            self._since = time.monotonic()
            self._thread.start()
        self._thread.join(self.patience_s)

    def _write(self, state: State, what: str, at: datetime) -> None:
        try:
            made = freeze(self.session.source, state, what, at)
        except CaseFileError as error:
            self.session.complain("; ".join(problem.text for problem in error.problems))
        except RetrofitError as error:
            self.session.complain(error.message)
        except OSError as error:
            self.session.complain(f"the files cannot be written: {error.strerror}")
        except Exception:
            logging.getLogger(__name__).exception("a revision could not be written")
            self.session.complain("by a fault of the program; nothing was written, and the meeting is as it was")
        else:
            self.session.freeze(made)
