"""The page as a web application: addresses in, templates out; one session for all windows of one start."""

from __future__ import annotations

import secrets
from dataclasses import replace
from datetime import datetime
from typing import TYPE_CHECKING, Any

from retrofit.case import laid_over
from retrofit.errors import RetrofitError
from retrofit.meeting.board import build_board, in_sight, tables
from retrofit.meeting.changes import change_of
from retrofit.meeting.freeze import LONGEST_WHAT, case_text, whole
from retrofit.meeting.how import how
from retrofit.meeting.pictures import Pictures, View
from retrofit.meeting.security import (
    FORM,
    HOSTS,
    LARGEST_REQUEST_BYTES,
    PICTURE_POLICY,
    is_own_host,
    new_token,
    page_policy,
    refusal,
    secure,
)
from retrofit.meeting.session import Moment, Session
from retrofit.meeting.writer import Writer
from retrofit.meeting.years import OPTION, how_of_option
from retrofit.report import render_html
from retrofit.report.guard import POLICY
from retrofit.report.judging import judged
from retrofit.report.plain import plain
from retrofit.report.templates import built_in_folder, filled, render_cautions
from retrofit.units import UNIT_SYSTEMS, told

if TYPE_CHECKING:
    from flask import Flask, Request, Response

PART = "X-Part"  # asks for the changing part of the page alone, as the script does
LONGEST_WINDOW = 40  # characters of the name a window gives itself
BACK = "The page is at /."


class Meeting:
    """One start of the server: its session, its token, and what answers each address."""

    def __init__(self, session: Session) -> None:
        self.session = session
        self.token = new_token()
        self.writer = Writer(session)
        self.pictures = Pictures(lambda: session.desk.is_idle)
        self.script = (built_in_folder() / "meeting.js").read_text(encoding="utf-8")

    def page(self, is_part: bool) -> Response:
        """Return the page, or the part of it that changes."""
        moment = self.session.moment()
        board = build_board(moment, self.session.source, self.pictures, self.writer.said)
        cautions, nonce = render_cautions(board, is_topmost=False), secrets.token_urlsafe(16)
        template = "meeting-board.html" if is_part else "meeting.html"
        html = filled(template, board=board, page=board, cautions=cautions, token=self.token, nonce=nonce)
        return _html(told(html, UNIT_SYSTEMS[moment.state.units]), page_policy(nonce, str(cautions)))

    def act(self, request: Request) -> None:
        """Do what a form asks for; what hinders it is shown on the page."""
        word = request.form.get("act", "set")
        version, window = _seen(request)
        if word in ("undo", "redo"):
            (self.session.undo if word == "undo" else self.session.redo)(version, window)
            return
        form = {name: request.form[name] for name in request.form}
        has_inputs = any(name.startswith("in.") for name in form)
        self.session.apply(change_of(self.session.source, form), version, has_inputs, window)

    def freeze(self, request: Request) -> None:
        """Begin to write the present state as a revision; what hinders it is shown on the page."""
        if news := self.session.unseen(*_seen(request)):
            self.session.complain(f"{news} by another window meanwhile; look at it, then freeze")
            return
        what = " ".join(plain(request.form.get("what", "")).split())[:LONGEST_WHAT] or "without remark"
        self.writer.begin(what, datetime.now().astimezone())

    def how(self, name: str, quantity: str, is_part: bool) -> Response | None:
        """Return how a number comes about, None if there is no such number."""
        moment = self.session.moment()
        units, view = UNIT_SYSTEMS[moment.state.units], in_sight(moment)
        if name.startswith(OPTION):
            way = how_of_option(view, name, quantity, units, moment.state)
            return self._aside("meeting-how.html", is_part, moment, how=way, chart="") if way else None
        found = how(view, tables(view, units), name, quantity, units, moment.state)
        if found is None:
            return None
        place = [entry.refrigerant.designation for entry in view.entries].index(name)
        chart = self.pictures.cycle(moment.state, View(view, moment.state.units), place) if found.states else ""
        return self._aside("meeting-how.html", is_part, moment, how=found, chart=chart)

    def why(self, name: str, is_part: bool) -> Response | None:
        """Return what the checks found for a refrigerant, None if there is none of that name."""
        moment = self.session.moment()
        comparison = moment.outcome.comparison
        every, _ = judged(comparison)
        for entry, item in zip(comparison.entries, every, strict=True):
            if entry.refrigerant.designation == name:
                return self._aside("meeting-why.html", is_part, moment, judged=item, entry=entry)
        return None

    def _aside(self, template: str, is_part: bool, moment: Moment, **values: Any) -> Response:
        nonce = secrets.token_urlsafe(16)
        frame = template if is_part else "meeting-aside.html"
        html = filled(frame, part=template, nonce=nonce, large=moment.state.is_large, **values)
        return _html(told(html, UNIT_SYSTEMS[moment.state.units]), page_policy(nonce))

    def report(self) -> Response:
        """Return the report of the present state as it would be written."""
        moment, source = self.session.moment(), self.session.source
        found, state = moment.outcome.comparison, moment.state
        found = whole(found)
        if moment.outcome.is_current:  # the case that the report carries is the one it is made from
            text = case_text(source, laid_over(source.data, dict(state.changes), state.added))
            found = replace(found, case=replace(found.case, text=text))
        html = render_html(found, units=state.units, made_at=datetime.now().astimezone())
        return _html(html, POLICY)

    def picture(self, key: str, name: str) -> Response | None:
        """Return a chart, None if it is not there, or not any more."""
        from flask import Response

        svg = self.pictures.svg(key, name)
        if svg is None:
            return None
        response = Response(svg, mimetype="image/svg+xml")
        response.headers["Cache-Control"] = "private, max-age=3600, immutable"
        return secure(response, PICTURE_POLICY)


def _seen(request: Request) -> tuple[int, str]:
    """Return the version of the page that a form comes from, 0 if it says none, and its window."""
    seen = request.form.get("seen", "")
    version = int(seen) if seen.isascii() and seen.isdigit() and len(seen) < 12 else 0
    return version, request.form.get("window", "")[:LONGEST_WINDOW]


def _html(html: str, policy: str) -> Response:
    from flask import Response

    return secure(Response(html, mimetype="text/html"), policy)


def create_app(session: Session) -> Flask:
    """Return the application of one start.

    Args:
        session: The meeting.
    """
    from flask import Flask, abort, redirect, request
    from flask import Response as Answer

    meeting = Meeting(session)
    app = Flask("retrofit.meeting", static_folder=None)
    app.config.update(
        TRUSTED_HOSTS=list(HOSTS),
        MAX_CONTENT_LENGTH=LARGEST_REQUEST_BYTES,
        MAX_FORM_MEMORY_SIZE=LARGEST_REQUEST_BYTES,
    )
    app.extensions["meeting"] = meeting

    def is_part() -> bool:
        return request.headers.get(PART) == "1"

    @app.before_request
    def guard() -> None:
        if not is_own_host(request.host):
            abort(400, "this server answers to 127.0.0.1 and localhost alone")
        if request.method == "POST" and request.mimetype != FORM:
            abort(415, "the page posts plain forms alone")
        if request.method == "POST" and (why := refusal(request, meeting.token)):
            abort(403, why)

    @app.get("/")
    def page() -> Any:
        return meeting.page(is_part())

    @app.get("/news")
    def news() -> Any:
        """Tell a window whether there is something newer than it shows."""
        if request.args.get("seen") == str(session.version):
            return secure(Answer(status=204), "default-src 'none'")
        return meeting.page(True)

    @app.post("/change")
    def change() -> Any:
        meeting.act(request)
        return meeting.page(True) if is_part() else redirect("/", 303)

    @app.post("/freeze")
    def freeze_now() -> Any:
        meeting.freeze(request)
        return meeting.page(True) if is_part() else redirect("/#freeze", 303)

    @app.get("/how/<name>/<quantity>")
    def how_page(name: str, quantity: str) -> Any:
        return meeting.how(name, quantity, is_part()) or abort(404)

    @app.get("/why/<name>")
    def why_page(name: str) -> Any:
        return meeting.why(name, is_part()) or abort(404)

    @app.get("/report")
    def report() -> Any:
        return meeting.report()

    @app.get("/picture/<key>/<name>.svg")
    def picture(key: str, name: str) -> Any:
        return meeting.picture(key, name) or secure(Answer(status=204), "default-src 'none'")

    @app.get("/meeting.js")
    def script() -> Any:
        return secure(Answer(meeting.script, mimetype="text/javascript"), "default-src 'none'")

    @app.get("/favicon.ico")
    def icon() -> Any:
        return secure(Answer(status=204), "default-src 'none'")

    @app.errorhandler(Exception)
    def fault(error: Exception) -> Any:
        return _fault(app, error)

    return app


def _fault(app: Flask, error: Exception) -> Response:
    """Return a plain word for what went wrong: our own or HTTP's; of a bug only that it is one."""
    from flask import Response
    from werkzeug.exceptions import HTTPException

    if isinstance(error, HTTPException):
        code, said = error.code or 500, error.description or error.name
        if code in (301, 302, 303, 307, 308):
            return error.get_response()  # type: ignore[return-value]
    elif isinstance(error, RetrofitError):
        code, said = 500, str(error)
    else:
        app.logger.exception("a request failed")
        code, said = 500, "this failed by a fault of the program; what was there before is kept"
    return secure(Response(f"{said} {BACK}\n", status=code, mimetype="text/plain"), "default-src 'none'")
