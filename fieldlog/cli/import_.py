"""`ergbook import`: a file of others into a survey."""

from __future__ import annotations

from pathlib import Path

import click

from fieldlog.errors import Refusal


@click.command(name="import")
@click.argument("survey", metavar="SURVEY")
@click.argument("file", metavar="FILE", type=click.Path(path_type=Path, dir_okay=False, exists=True))
@click.option("--walked-by", "walker", metavar="CREW", help="Who carried the device: only their observations are placed along its tracks.")
@click.option("--preview", "only_preview", is_flag=True, help="Say what it would change, and write nothing.")
def import_(survey: str, file: Path, walker: str | None, only_preview: bool) -> int:
    """Read FILE (.gpx: waypoints as sites, tracks; .csv: sites; .ergbook: a phone's file) into SURVEY, its id or unique name.

    Exit code 1 where a part of the file was not taken.
    """
    from fieldlog.imports import service
    from fieldlog.store.db import db
    from fieldlog.store.photos import PhotoFolder
    from fieldlog.store.transaction import write
    from fieldlog.surveys.service import crew_names, find_survey
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    data = file.read_bytes()
    settings = Settings.from_environment()
    folder = PhotoFolder(settings.data_dir / "photos")
    with create_app(settings).app_context():
        row = find_survey(db.session, survey)
        carried = _record(crew_names(db.session, row["survey"]), walker)
        if only_preview:
            plan = service.preview(db.session, row["survey"], file.name, data, carried, folder=folder)
        else:
            with write() as session:
                by = service.first_lead(session, row["survey"])
                plan = service.confirm(
                    session, row["survey"], by, file.name, data, carried, folder=folder, who="ergbook import"
                )
    click.echo(f"{row['name']}: {plan.sentence}")
    for name in plan.already:
        click.echo(f"Here already: {name}.")
    for note in plan.notes:
        click.echo(note)
    for refused in plan.refused:
        click.echo(f"Not taken: {refused.where}: {refused.why}.", err=True)
    problems = [p for line in plan.notebook.devices for p in line.problems] if plan.notebook else []
    for problem in problems:
        click.echo(problem, err=True)
    return 1 if plan.refused or problems else 0


def _record(names: dict[str, str], walker: str | None) -> str | None:
    if walker is None:
        return None
    found = [record for record, name in names.items() if walker in (record, name)]
    if len(found) != 1:
        raise Refusal(f"{len(found) or 'nobody'} of the crew: {walker!r}", "--walked-by", f"One of: {', '.join(names.values())}")
    return found[0]
