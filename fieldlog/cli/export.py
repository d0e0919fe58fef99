"""`ergbook export`: a survey as a file."""

from __future__ import annotations

from pathlib import Path

import click

from fieldlog.cli.progress import progress_line


@click.command()
@click.argument("survey", metavar="SURVEY")
@click.option("--to", "target", metavar="FILE", required=True, type=click.Path(path_type=Path, dir_okay=False),
              help="The file; its ending names the format: .gpkg .geojson .csv .gpx")
def export(survey: str, target: Path) -> None:
    """Write SURVEY (its id or unique name) into a file. A file that is there is replaced when the new one is whole."""
    from fieldlog.exports import service
    from fieldlog.store.db import db
    from fieldlog.surveys.service import find_survey
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    service.format_of(target.name)
    app = create_app(Settings.from_environment())
    with app.app_context():
        row = find_survey(db.session, survey)
        service.export(db.session, row["survey"], target.absolute(), progress=progress_line("rows read"))
    click.echo(f"{target}: {row['name']}")
