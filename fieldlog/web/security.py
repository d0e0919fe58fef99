"""Headers on every answer, and compression of what the phone pulls over a thin line."""

from __future__ import annotations

import gzip
from typing import Final

from flask import Flask, Response, request

CONTENT_SECURITY_POLICY: Final = (
    "default-src 'none'; script-src 'self'; style-src 'self'; connect-src 'self'; manifest-src 'self'; "
    "worker-src 'self'; form-action 'self'; img-src 'self' blob:; base-uri 'none'; frame-ancestors 'none'; "
    "require-trusted-types-for 'script'"
)
_WORTH_COMPRESSING: Final = 400


def set_up_headers(app: Flask) -> None:
    """Add the headers that shut the ways in."""

    @app.after_request
    def dress(response: Response) -> Response:
        response.headers.setdefault("Content-Security-Policy", CONTENT_SECURITY_POLICY)
        response.headers.setdefault("X-Content-Type-Options", "nosniff")
        response.headers.setdefault("Referrer-Policy", "no-referrer")
        response.headers.setdefault("Permissions-Policy", "geolocation=(self), camera=(self), microphone=()")
        response.headers.setdefault("Cross-Origin-Opener-Policy", "same-origin")
        if request.is_secure:
            response.headers.setdefault("Strict-Transport-Security", "max-age=31536000")
        if not request.path.startswith(("/shell/", "/static/", "/phone", "/sw.js")):
            response.headers.setdefault("Cache-Control", "no-store")
        return _compressed(response)


def _compressed(response: Response) -> Response:
    if (
        response.mimetype not in ("application/json", "text/html")
        or response.is_streamed
        or "Content-Encoding" in response.headers
        or request.accept_encodings["gzip"] <= 0
        or len(response.get_data()) < _WORTH_COMPRESSING
    ):
        return response
    response.set_data(gzip.compress(response.get_data(), 6, mtime=0))
    response.headers["Content-Encoding"] = "gzip"
    response.headers.add("Vary", "Accept-Encoding")
    return response
