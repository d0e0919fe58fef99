"""The one gate: every view says who may call it, everybody else is turned away here."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from flask import Flask, current_app, g, redirect, request, url_for
from flask_login import current_user

from fieldlog.people.access import callers_of
from fieldlog.people.service import phone_of_token
from fieldlog.store.db import db
from fieldlog.web.problems import AccessError, is_api


@dataclass(frozen=True)
class PhoneCaller:
    """The phone that asks."""

    survey: str
    device: str
    crew: str


@dataclass(frozen=True)
class LeadCaller:
    """The lead who asks."""

    id: int
    name: str


def set_up_gate(app: Flask) -> None:
    """Turn away whom a view does not name; refuse to start where a view names nobody."""
    app.before_request(_admit)


def check_views(app: Flask) -> None:
    """RuntimeError where a route does not say who may call it."""
    silent = sorted({rule.endpoint for rule in app.url_map.iter_rules() if callers_of(_view(app, rule.endpoint)) is None})
    if silent:
        raise RuntimeError(f"these views do not say who may call them: {', '.join(silent)}")


def _view(app: Flask, endpoint: str) -> Any:
    return app.view_functions[endpoint]


def _admit() -> Any:
    if request.endpoint is None:
        return None
    allowed = callers_of(_view(current_app, request.endpoint)) or frozenset()
    if "anyone" in allowed:
        return None
    token = _bearer()
    if token is not None:
        if "phone" not in allowed:
            raise AccessError(403, "not-for-phones", "a phone may not do this")
        g.phone = _phone(token)
        return None
    if "lead" in allowed and current_user.is_authenticated:
        g.lead = LeadCaller(current_user.lead, current_user.name)
        if request.endpoint == "imports.take":  # a week's photos may be in it
            request.max_content_length = current_app.config["ERGBOOK"].notebook_bytes_max
        return None
    if is_api():
        raise AccessError(401, "not-signed-in", "this needs a phone's token or a lead's session", "Join or sign in")
    return redirect(url_for("people.sign_in_page", next=request.full_path.rstrip("?")))


def _bearer() -> str | None:
    scheme, _, token = request.headers.get("Authorization", "").partition(" ")
    return token.strip() if scheme.lower() == "bearer" else None


def _phone(token: str) -> PhoneCaller:
    phone = phone_of_token(db.session, token)
    if phone is None:
        raise AccessError(401, "unknown-phone", "this phone is not known here", "Join again; nothing on the phone is lost")
    if phone.revoked_at is not None:
        raise AccessError(
            403, "phone-revoked", "the lead has revoked this phone",
            "What it holds stays on it. Ask the lead",
        )
    survey = (request.view_args or {}).get("survey")
    if survey is not None and survey != phone.survey:
        raise AccessError(403, "other-survey", "this phone has joined another survey")
    return PhoneCaller(phone.survey, phone.device, phone.crew)
