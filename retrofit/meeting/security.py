"""Who may talk to the page, and what a browser may do with it."""

from __future__ import annotations

import base64
import hashlib
import hmac
import re
import secrets
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from flask import Request, Response

HOSTS = ("127.0.0.1", "localhost")
LARGEST_REQUEST_BYTES = 256_000
FORM = "application/x-www-form-urlencoded"
HEADERS = {
    "Referrer-Policy": "same-origin",
    "X-Content-Type-Options": "nosniff",
    "X-Frame-Options": "DENY",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Cross-Origin-Resource-Policy": "same-origin",
    "Permissions-Policy": "camera=(), geolocation=(), microphone=()",
}
PICTURE_POLICY = "default-src 'none'; style-src 'unsafe-inline'"
_STYLE = re.compile(r'\sstyle="([^"]*)"')


def new_token() -> str:
    """Return a token for one start of the server."""
    return secrets.token_urlsafe(24)


def refusal(request: Request, token: str) -> str:
    """Return why a request that acts is refused; empty if it is not.

    Args:
        request: The request.
        token: That of this start. [-]
    Source: the token is what counts; where the browser tells where a request comes from, that has to fit as well.
    """
    site = request.headers.get("Sec-Fetch-Site")
    if site not in (None, "same-origin"):
        return "this request comes from another page"
    origin = request.headers.get("Origin")
    if origin is not None and origin != f"{request.scheme}://{request.host}":
        return "this request comes from another page"
    given = request.form.get("token", "")
    if not hmac.compare_digest(given.encode(), token.encode()):
        return "the page belongs to an earlier start; load it again"
    return ""


def is_own_host(host: str) -> bool:
    """Say whether a request names this machine as its host, with any port.

    Args:
        host: What it names. [-]
    """
    return host.rpartition(":")[0] in HOSTS or host in HOSTS


def page_policy(nonce: str, html: str = "") -> str:
    """Return the content security policy of a page: own script and style by nonce, own pictures, nothing else.

    Args:
        nonce: Of this answer. [-]
        html: The block of cautions, whose elements carry one style of their own, allowed by its digest. [-]
    """
    styles = sorted({_digest(text) for text in _STYLE.findall(html)})
    attributes = f" 'unsafe-hashes' {' '.join(styles)}" if styles else ""
    return (
        f"default-src 'none'; script-src 'nonce-{nonce}'; style-src 'nonce-{nonce}'{attributes}; img-src 'self'; "
        "connect-src 'self'; form-action 'self'; base-uri 'none'; frame-ancestors 'none'"
    )


def _digest(text: str) -> str:
    return f"'sha256-{base64.b64encode(hashlib.sha256(text.encode()).digest()).decode()}'"


def secure(response: Response, policy: str) -> Response:
    """Return an answer with its headers.

    Args:
        response: The answer.
        policy: Its content security policy. [-]
    """
    response.headers.setdefault("Content-Security-Policy", policy)
    for name, value in HEADERS.items():
        response.headers.setdefault(name, value)
    response.headers.setdefault("Cache-Control", "no-store")
    return response
