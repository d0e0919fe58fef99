"""Pages and answers that belong to no survey."""

from __future__ import annotations

from typing import Any

from flask import Blueprint, jsonify, redirect, render_template, url_for

from fieldlog import __version__
from fieldlog.handover.service import head
from fieldlog.people.access import callers
from fieldlog.sheet.cautions import CAUTIONS
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.vocabulary import VOCABULARIES
from fieldlog.store.db import db
from fieldlog.web.openapi import description

blueprint = Blueprint("pages", __name__)


@blueprint.get("/")
@callers("lead")
def start() -> Any:
    """The list of surveys is where a lead begins."""
    return redirect(url_for("surveys.index"))


@blueprint.get("/dictionary")
@callers("lead")
def dictionary() -> str:
    """The data dictionary, drawn from the sheets."""
    return render_template("desk/dictionary.html", sheets=SHEETS.values(), vocabularies=VOCABULARIES)


@blueprint.get("/cautions")
@callers("anyone")
def cautions() -> str:
    """What to know before anyone walks out."""
    return render_template("desk/cautions.html", cautions=CAUTIONS)


@blueprint.get("/api/v1/health")
@callers("anyone")
def health() -> Any:
    """Whether the store answers, and who it is."""
    return jsonify({"status": "ok", "app": __version__, **head(db.session)})


@blueprint.get("/api/v1/openapi.json")
@callers("anyone")
def openapi() -> Any:
    """The interface, described."""
    return jsonify(description())
