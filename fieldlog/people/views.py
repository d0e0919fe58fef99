"""Signing in at the desk, joining with a phone."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any
from urllib.parse import urlsplit

from flask import Blueprint, current_app, jsonify, redirect, render_template, request, url_for
from flask_login import UserMixin, login_user, logout_user
from marshmallow import Schema, ValidationError

from fieldlog.errors import Refusal
from fieldlog.people import service
from fieldlog.people.access import callers
from fieldlog.people.models import Lead
from fieldlog.people.schema import JoinAnswerSchema, JoinSchema, LookAnswerSchema, LookSchema
from fieldlog.sheet.times import iso_millis
from fieldlog.store.db import db
from fieldlog.store.identity import identity
from fieldlog.store.transaction import write

blueprint = Blueprint("people", __name__)
joining = Blueprint("joining", __name__, url_prefix="/api/v1/joining")


class Session(UserMixin):  # type: ignore[misc]
    """A lead who is signed in."""

    def __init__(self, lead: Lead) -> None:
        self.lead = lead.id
        self.name = lead.name
        self.number = lead.session_number

    def get_id(self) -> str:
        return f"{self.lead}.{self.number}"


def load_session(session_id: str) -> Session | None:
    """The lead of a signed cookie, None where that session has been ended."""
    lead_id, _, number = session_id.partition(".")
    lead = db.session.get(Lead, int(lead_id)) if lead_id.isdigit() else None
    return Session(lead) if lead and str(lead.session_number) == number else None


@blueprint.get("/sign-in")
@callers("anyone")
def sign_in_page() -> Any:
    """The form."""
    return render_template("desk/sign_in.html", next=request.args.get("next", ""), name="", problem=None)


@blueprint.post("/sign-in")
@callers("anyone")
def sign_in() -> Any:
    """Name and password."""
    name = request.form.get("name", "")
    try:
        lead = service.sign_in(db.session, name, request.form.get("password", ""))
    except service.SignInError as problem:
        page = render_template("desk/sign_in.html", next=request.form.get("next", ""), name=name, problem=problem)
        return page, 401
    login_user(Session(lead))
    return redirect(_own_address(request.form.get("next", "")))


@blueprint.post("/sign-out")
@callers("lead")
def sign_out() -> Any:
    """End this session."""
    logout_user()
    return redirect(url_for("people.sign_in_page"))


@blueprint.get("/way-in/<token>")
@callers("anyone")
def way_in_page(token: str) -> Any:
    """What a one-time link would do. Previews and scanners may look: only the button spends it."""
    return render_template("desk/way_in.html", found=service.look_at_link(db.session, token), problem=None, name="")


@blueprint.post("/way-in/<token>")
@callers("anyone")
def way_in(token: str) -> Any:
    """Spend the link."""
    name = request.form.get("name", "")
    try:
        with write() as session:
            made = Session(
                service.spend_link(session, token, name=name, password=request.form.get("password", ""))
            )
    except service.LinkError:
        raise
    except Refusal as problem:
        found = service.look_at_link(db.session, token)
        return render_template("desk/way_in.html", found=found, problem=problem, name=name), 422
    login_user(made)
    return redirect("/")


@joining.post("/look")
@callers("anyone")
def look() -> Any:
    """What a joining code opens, so that the phone can ask who it belongs to."""
    asked = _loaded(LookSchema())
    found = service.look_at_code(db.session, asked["code"], secret=str(current_app.secret_key))
    crew = [{"record": record, "name": name} for record, name in found.crew]
    return jsonify(LookAnswerSchema().dump({"survey": {"id": found.survey, "name": found.name}, "crew": crew}))


@joining.post("")
@callers("anyone")
def join() -> Any:
    """Join: the phone's token is told this once."""
    asked = _loaded(JoinSchema())
    with write() as session:
        joined = service.join(
            session, asked["code"], secret=str(current_app.secret_key), device=asked["device"], app=asked["app"],
            member=asked["crew"], name=asked["name"],
        )
        me = identity(session)
        head = {"store": me.store, "epoch": me.epoch, "time": iso_millis(datetime.now(UTC))}
    survey = {"id": joined.survey, "name": joined.name}
    return jsonify(JoinAnswerSchema().dump({**head, "token": joined.token, "survey": survey, "crew": joined.crew})), 201


def _loaded(schema: Schema) -> dict[str, Any]:
    try:
        loaded: dict[str, Any] = schema.load(request.get_json(silent=True) or {})
    except ValidationError as error:
        raise service.JoiningError(f"the request is wrong: {error.messages}", mend="Update the phone's app") from error
    return loaded


def _own_address(target: str) -> str:
    """The page asked for before signing in, if it is one of ours."""
    parts = urlsplit(target)
    ours = target.startswith("/") and not target.startswith("//") and "\\" not in target
    return target if ours and not parts.netloc and not parts.scheme else "/"
