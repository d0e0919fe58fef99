"""Day sheet, site sheet, history."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from flask import Blueprint, g, redirect, render_template, request, url_for
from markupsafe import Markup

from fieldlog.draw.rose import rose
from fieldlog.draw.svg import svg
from fieldlog.people.access import callers
from fieldlog.review import service
from fieldlog.review.results import Result
from fieldlog.sheet.observation import OBSERVATION
from fieldlog.store.db import db
from fieldlog.store.transaction import write
from fieldlog.surveys.service import crew_names, crew_of_lead, site_row, survey_row

blueprint = Blueprint("review", __name__, url_prefix="/surveys/<survey>")

SMALL_PX = 72
LARGE_PX = 320


@blueprint.get("/day")
@callers("lead")
def day(survey: str) -> str:
    """All sites at a glance, worst first."""
    sheet = service.day_sheet(
        db.session, survey, day=request.args.get("day", ""), member=request.args.get("crew", "")
    )
    return render_template("desk/day.html", sheet=sheet, survey=sheet.survey, small_rose=small_rose)


@blueprint.get("/sites/<record>")
@callers("lead")
def site(survey: str, record: str) -> str:
    """All about one site."""
    sheet = service.site_sheet(db.session, survey, record)
    columns = [field for field in OBSERVATION.fields if field.name != "site" and _filled(field.name, sheet.rows)]
    return render_template(
        "desk/site.html", sheet=sheet, survey=sheet.survey, columns=columns, large_rose=large_rose
    )


def _filled(name: str, rows: Sequence[Any]) -> bool:
    if name == "observed_by_clock":  # worth a column only where a clock was off
        return any(row[name] != row["observed_at"] for row in rows)
    return any(row[name] is not None or row.get(f"{name}_absent") for row in rows)


@blueprint.get("/observations/<record>")
@callers("lead")
def observation(survey: str, record: str) -> str:
    """One observation and its history from the ledger."""
    row = service.observation_row(db.session, survey, record)
    return render_template(
        "desk/observation.html",
        survey=survey_row(db.session, survey),
        site=site_row(db.session, survey, row["site"]),
        row=row,
        fields=[field for field in OBSERVATION.fields if field.name != "site" and _filled(field.name, [row])],
        crew=crew_names(db.session, survey),
        changes=service.history(db.session, survey, record),
        versions=service.versions_of_record(db.session, survey, record),
        photos=service.photos_of(db.session, survey, {record}).get(record, []),
    )


@blueprint.post("/sites/<record>/dunes")
@callers("lead")
def one_dune(survey: str, record: str) -> Any:
    """Two phones' dunes are one; or, with `same`, that is taken back or said again."""
    same = request.form.get("same")
    with write() as session:
        by = crew_of_lead(session, survey, g.lead.name)
        if same:
            service.part_dunes(session, survey, by, same, request.form.get("reason", "").strip() or None)
        else:
            service.call_one_dune(session, survey, by, record, request.form.get("dune", ""), request.form.get("other", ""))
    return redirect(url_for("review.site", survey=survey, record=record, _anchor="dunes"))


@blueprint.post("/records/<record>/choose")
@callers("lead")
def choose(survey: str, record: str) -> Any:
    """Let one of two versions stand."""
    field, _, entry = request.form.get("version", "").partition(" ")
    with write() as session:
        by = crew_of_lead(session, survey, g.lead.name)
        kind = service.choose_version(session, survey, by, record, field, entry)
    if kind in ("site", "observation"):
        return redirect(url_for(f"review.{kind}", survey=survey, record=record))
    return redirect(url_for("review.day", survey=survey))


def small_rose(result: Result, identifier: str) -> Markup:
    """The rose of a row of the day sheet."""
    return _drawn(result, SMALL_PX, identifier)


def large_rose(result: Result, identifier: str, crossed_out: Sequence[float] = (), expected: float | None = None) -> Markup:
    """The rose of a site sheet."""
    return _drawn(result, LARGE_PX, identifier, crossed_out, expected)


def _drawn(
    result: Result, size: int, identifier: str, crossed_out: Sequence[float] = (), expected: float | None = None
) -> Markup:
    drawing = rose(
        result.sample.angles, result.summary, axial=result.measure.axial, size=size,
        crossed_out_deg=crossed_out, expected_deg=expected,
    )
    return Markup(svg(drawing, identifier=identifier))  # noqa: S704  svg() escapes every text it writes
