"""The lead chooses a file, sees what it would change, and says so or not."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from flask import Blueprint, current_app, g, redirect, render_template, request, url_for

from fieldlog.errors import Refusal
from fieldlog.imports import pending, service
from fieldlog.imports.found import ImportFileError
from fieldlog.people.access import callers
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoFolder
from fieldlog.store.transaction import write
from fieldlog.surveys.service import crew_names, crew_of_lead, survey_row

blueprint = Blueprint("imports", __name__, url_prefix="/surveys/<survey>/import")


@blueprint.get("")
@callers("lead")
def page(survey: str) -> str:
    """What can be imported, and the form that takes a file."""
    return _page(survey, None)


@blueprint.post("")
@callers("lead")
def take(survey: str) -> Any:
    """Read the file, hold it, and show what it would change. Nothing is written."""
    chosen = request.files.get("file")
    walker = request.form.get("walker") or None
    try:
        if chosen is None or not chosen.filename:
            raise ImportFileError("no file was chosen", mend="Choose a .gpx, a .csv or a .ergbook")
        upload = pending.Upload(chosen.filename, walker, chosen.read())
        service.preview(db.session, survey, upload.name, upload.data, walker, folder=_photos())
    except Refusal as problem:
        return _page(survey, problem), 422
    held = pending.keep(_folder(), survey, upload)
    return redirect(url_for("imports.preview", survey=survey, upload=held))


@blueprint.get("/<upload>")
@callers("lead")
def preview(survey: str, upload: str) -> Any:
    """What a held file would change."""
    row = survey_row(db.session, survey)
    try:
        file = pending.held(_folder(), survey, upload)
        plan = service.preview(db.session, survey, file.name, file.data, file.walker, folder=_photos())
    except Refusal as problem:
        return _page(survey, problem), 422
    names = crew_names(db.session, survey)
    return render_template("desk/import_preview.html", survey=row, plan=plan, file=file, upload=upload, crew=names)


@blueprint.post("/<upload>")
@callers("lead")
def confirm(survey: str, upload: str) -> Any:
    """Write it, or, where the lead does not want it, let it go."""
    row = survey_row(db.session, survey)
    if "let_go" in request.form:
        pending.drop(_folder(), survey, upload)
        return redirect(url_for("imports.page", survey=survey))
    try:
        file = pending.held(_folder(), survey, upload)
        with write() as session:
            by = crew_of_lead(session, survey, g.lead.name)
            plan = service.confirm(
                session, survey, by, file.name, file.data, file.walker, folder=_photos(), who=g.lead.name
            )
    except Refusal as problem:
        return _page(survey, problem), 422
    pending.drop(_folder(), survey, upload)
    return render_template("desk/import_done.html", survey=row, plan=plan, file=file)


def _page(survey: str, problem: Refusal | None) -> str:
    return render_template(
        "desk/import.html", survey=survey_row(db.session, survey), crew=crew_names(db.session, survey), problem=problem
    )


def _photos() -> PhotoFolder:
    return PhotoFolder(Path(current_app.config["ERGBOOK"].data_dir) / "photos")


def _folder() -> Path:
    return Path(current_app.config["ERGBOOK"].data_dir) / "imports"
