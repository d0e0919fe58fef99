"""The list of surveys and the page that sets one up."""

from __future__ import annotations

import io
import re
from dataclasses import asdict
from typing import Any

import segno
from flask import Blueprint, current_app, g, redirect, render_template, request, url_for

from fieldlog.errors import Refusal
from fieldlog.people import service as people
from fieldlog.people.access import callers
from fieldlog.sheet.question import Thresholds
from fieldlog.sheet.subjects import ASKS, SITE, SURVEY
from fieldlog.store.append import ForeignStoreError
from fieldlog.store.db import db
from fieldlog.store.transaction import write
from fieldlog.surveys import service
from fieldlog.surveys.forms import values_from

blueprint = Blueprint("surveys", __name__, url_prefix="/surveys")

SURVEY_FIELDS = ("name", "time_zone", "target_half_width_deg", "fewest_dunes", "reading_step_deg", "photo_long_edge_px", "photo_original", "note")
ASKING_FIELDS = tuple(field.name for field in SURVEY.fields if field.group == "questions")
SITE_FIELDS = ("name", "lat_deg", "lon_deg", "radius_m", "dune_pattern", "dune_rule", "target_half_width_deg",
               "expected_facing_deg", "note")


@blueprint.get("")
@callers("lead")
def index() -> str:
    """All surveys of this store."""
    return render_template("desk/surveys.html", surveys=service.list_surveys(db.session))


@blueprint.get("/new")
@callers("lead")
def new() -> str:
    """The form for a new survey."""
    return _new_page({"time_zone": "Etc/GMT", "target_half_width_deg": 10, **service.DEFAULTS}, None)


@blueprint.post("/new")
@callers("lead")
def create() -> Any:
    """Create it."""
    try:
        values = values_from(SURVEY, request.form, SURVEY_FIELDS)
        with write() as session:
            survey, _lead = service.create_survey(session, values, g.lead.name)
    except Refusal as problem:
        return _new_page(request.form, problem), 422
    return redirect(url_for("surveys.page", survey=survey))


def _new_page(values: Any, problem: Refusal | None) -> str:
    fields = [SURVEY.by_name[name] for name in SURVEY_FIELDS]
    return render_template("desk/survey_new.html", fields=fields, values=values, problem=problem)


@blueprint.get("/<survey>")
@callers("lead")
def page(survey: str) -> str:
    """Set up: the survey, its sites, its phones."""
    return _set_up_page(survey)


def _set_up_page(survey: str, **more: Any) -> str:
    row = service.survey_row(db.session, survey)
    return render_template(
        "desk/set_up.html",
        survey=row,
        fields=[SURVEY.by_name[name] for name in SURVEY_FIELDS],
        asking=[SURVEY.by_name[name] for name in ASKING_FIELDS],
        usual={f"{ASKS}{name}": value for name, value in asdict(Thresholds()).items()},
        optional=service.optional_fields(),
        sites=service.sites_of(db.session, survey),
        phones=people.phones_of(db.session, survey),
        crew=service.crew_names(db.session, survey),
        **{"problem": None, "values": row, "switched_on": row["optional_fields"] or [], **more},
    )


@blueprint.post("/<survey>")
@callers("lead")
def change(survey: str) -> Any:
    """Change what is said of the survey."""
    try:
        values = values_from(SURVEY, request.form, (*SURVEY_FIELDS, *ASKING_FIELDS))
        values["optional_fields"] = request.form.getlist("optional_fields")
        with write() as session:
            by = service.crew_of_lead(session, survey, g.lead.name)
            service.change_survey(session, survey, by, values)
    except ForeignStoreError:
        raise
    except Refusal as problem:
        ticked = request.form.getlist("optional_fields")
        return _set_up_page(survey, problem=problem, values=request.form, switched_on=ticked), 422
    return redirect(url_for("surveys.page", survey=survey))


@blueprint.get("/<survey>/site")
@blueprint.get("/<survey>/site/<record>")
@callers("lead")
def site_form(survey: str, record: str | None = None) -> str:
    """The form of a new site, or of one that is changed."""
    values: Any = service.site_row(db.session, survey, record) if record else {}
    return _site_page(survey, record, values, None)


def _site_page(survey: str, record: str | None, values: Any, problem: Refusal | None) -> str:
    return render_template(
        "desk/site_form.html", survey=service.survey_row(db.session, survey), record=record, values=values,
        fields=[SITE.by_name[name] for name in SITE_FIELDS], problem=problem,
    )


@blueprint.post("/<survey>/site")
@blueprint.post("/<survey>/site/<record>")
@callers("lead")
def put_site(survey: str, record: str | None = None) -> Any:
    """Add or change a site."""
    try:
        values = values_from(SITE, request.form, SITE_FIELDS)
        with write() as session:
            by = service.crew_of_lead(session, survey, g.lead.name)
            service.put_site(session, survey, by, values, record)
    except ForeignStoreError:
        raise
    except Refusal as problem:
        return _site_page(survey, record, request.form, problem), 422
    return redirect(url_for("surveys.page", survey=survey, _anchor="sites"))


@blueprint.post("/<survey>/site/<record>/cross-out")
@callers("lead")
def cross_out_site(survey: str, record: str) -> Any:
    """Cross a site out with a reason, or, without one, take that back."""
    reason = request.form.get("reason", "").strip() or None
    with write() as session:
        by = service.crew_of_lead(session, survey, g.lead.name)
        service.put_site(session, survey, by, {"crossed_out": reason}, record)
    return redirect(url_for("surveys.page", survey=survey, _anchor="sites"))


@blueprint.post("/<survey>/joining-codes")
@callers("lead")
def make_code(survey: str) -> Any:
    """A new joining code with its link and QR, shown on this answer only."""
    service.survey_row(db.session, survey)
    typed = request.form.get("hours", "48").strip()
    if re.fullmatch("[0-9]{1,6}", typed) is None:
        raise Refusal(f"{typed[:40]!r} is not a number of hours", "hours", "Write a whole number like 48")
    with write() as session:
        code = people.make_joining_code(
            session, survey, secret=str(current_app.secret_key), who=g.lead.name, hours=int(typed)
        )
    link = f"{current_app.config['ERGBOOK'].address}/phone/#join={code}"
    return render_template(
        "desk/joining_code.html", survey=service.survey_row(db.session, survey), code=code, link=link,
        hours=int(typed), qr=qr_svg(link),
    )


def qr_svg(text: str) -> str:
    """A QR code as SVG markup without a style of its own."""
    out = io.BytesIO()
    segno.make(text, error="m").save(
        out, kind="svg", scale=6, border=4, xmldecl=False, svgns=True, nl=False, svgclass="qr", lineclass=None,
        dark="#000", light="#fff",
    )
    return out.getvalue().decode("utf-8")


@blueprint.post("/<survey>/joining-codes/close")
@callers("lead")
def close_codes(survey: str) -> Any:
    """Close every open code."""
    service.survey_row(db.session, survey)
    with write() as session:
        people.close_joining_codes(session, survey, g.lead.name)
    return redirect(url_for("surveys.page", survey=survey, _anchor="phones"))


@blueprint.post("/<survey>/phones/<device>/revoke")
@callers("lead")
def revoke(survey: str, device: str) -> Any:
    """Take a phone's token back."""
    with write() as session:
        people.revoke_phone(session, survey, device, g.lead.name)
    return redirect(url_for("surveys.page", survey=survey, _anchor="phones"))
