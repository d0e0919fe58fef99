"""Every error as an answer: RFC 9457 problem details for programs, a page for people."""

from __future__ import annotations

import logging
import re
from typing import Any, Final

from flask import Flask, Response, json, render_template, request
from flask_wtf.csrf import CSRFError
from werkzeug.exceptions import HTTPException

from fieldlog.errors import Refusal
from fieldlog.handover.service import WrongStoreError
from fieldlog.handover.views import BatchTooLargeError, PhotoNotHereError, PhotoTooLargeError
from fieldlog.people.service import LinkError, SignInError
from fieldlog.store.append import ForeignStoreError, GapError
from fieldlog.store.photos import WrongOffsetError

LOG: Final = logging.getLogger("fieldlog")

STATUS: Final[dict[type[Refusal], int]] = {
    GapError: 409,
    WrongOffsetError: 409,
    WrongStoreError: 409,
    ForeignStoreError: 404,
    LinkError: 410,
    SignInError: 401,
    PhotoNotHereError: 404,
    PhotoTooLargeError: 413,
    BatchTooLargeError: 413,
}
"""Refusals whose status is not 422."""

_WORDS: Final = {
    404: ("There is nothing here", "Go back, or begin at the list of surveys"),
    405: ("This address does not take that kind of request", ""),
    413: ("What was sent is too large", "Send a smaller file"),
    429: ("Too many tries", "Wait a minute, then try again"),
    500: ("Something went wrong in the store", "Nothing was changed. Try again; if it stays, look at the store's log"),
}


class AccessError(Refusal, PermissionError):
    """The caller may not do this."""

    def __init__(self, status: int, kind: str, what: str, mend: str = "") -> None:
        super().__init__(what, mend=mend)
        self.status = status
        self.kind = kind


def is_api() -> bool:
    """Whether a program asks, rather than a person's browser for a page."""
    return request.path.startswith("/api/")


def answer(status: int, kind: str, title: str, mend: str = "", **more: Any) -> Response:
    """A problem as its caller reads it."""
    if is_api():
        body = {"type": f"urn:ergbook:problem:{kind}", "title": title, "status": status, "mend": mend, **more}
        body.setdefault("detail", title)
        return Response(json.dumps(body), status=status, content_type="application/problem+json")
    page = render_template("desk/problem.html", status=status, title=title, mend=mend, where=more.get("where", ""))
    return Response(page, status=status, content_type="text/html; charset=utf-8")


def status_of(refusal: Refusal) -> int:
    """The HTTP status of a refusal."""
    if isinstance(refusal, AccessError):
        return refusal.status
    return next((code for kind, code in STATUS.items() if isinstance(refusal, kind)), 422)


def _kind_of(refusal: Refusal) -> str:
    if isinstance(refusal, AccessError):
        return refusal.kind
    name = type(refusal).__name__.removesuffix("Error")
    return re.sub(r"(?<!^)(?=[A-Z])", "-", name).lower()


def set_up_problems(app: Flask) -> None:
    """Answer every error in one shape."""

    @app.errorhandler(Refusal)
    def refused(refusal: Refusal) -> Response:
        more: dict[str, Any] = {"detail": str(refusal), "where": refusal.where}
        if isinstance(refusal, GapError):
            more["received_through"] = refusal.received_through
        if isinstance(refusal, WrongOffsetError):
            more["offset"] = refusal.offset
        return answer(status_of(refusal), _kind_of(refusal), refusal.what, refusal.mend, **more)

    @app.errorhandler(CSRFError)
    def stale_form(error: CSRFError) -> Response:
        return answer(400, "stale-form", "This form is too old or came from another page", "Open the page again")

    @app.errorhandler(HTTPException)
    def http(error: HTTPException) -> Any:
        code = error.code or 500
        if code < 400:
            return error
        title, mend = _WORDS.get(code, (error.name, ""))
        return answer(code, error.name.lower().replace(" ", "-"), title, mend)

    @app.errorhandler(Exception)
    def unforeseen(error: Exception) -> Response:
        LOG.exception("%s %s failed", request.method, request.path)
        title, mend = _WORDS[500]
        return answer(500, "store-failed", title, mend)
