"""The page that offers the exports, and the files."""

from __future__ import annotations

import re
import tempfile
from pathlib import Path
from typing import Any

from flask import Blueprint, render_template, send_file

from fieldlog.exports import service
from fieldlog.exports.layers import LAYERS
from fieldlog.people.access import callers
from fieldlog.store.db import db
from fieldlog.surveys.service import survey_row

blueprint = Blueprint("exports", __name__, url_prefix="/surveys/<survey>")


@blueprint.get("/export")
@callers("lead")
def page(survey: str) -> str:
    """What each format holds, with its link."""
    row = survey_row(db.session, survey)
    return render_template(
        "desk/export.html", survey=row, formats=service.FORMATS.values(), layers=LAYERS, file_name=file_name(row["name"])
    )


@blueprint.get("/export/<name>")
@callers("lead")
def file(survey: str, name: str) -> Any:
    """The survey as a file, in the format of the name's ending."""
    chosen = service.format_of(name)
    folder = tempfile.TemporaryDirectory(prefix="ergbook-")
    try:
        target = Path(folder.name) / f"survey{chosen.ending}"
        service.export(db.session, survey, target)
        answer = send_file(
            target, mimetype=chosen.media_type, as_attachment=True, download_name=name, etag=False, max_age=0
        )
    except BaseException:
        folder.cleanup()
        raise
    # What is passed through as it is closes its file only, and never calls what waits for its end.
    answer.direct_passthrough = False
    answer.call_on_close(folder.cleanup)
    return answer


def file_name(survey_name: str) -> str:
    """A survey's name as the beginning of a file's name on any system."""
    return re.sub(r"[^\w-]+", "-", survey_name).strip("-")[:60] or "survey"
