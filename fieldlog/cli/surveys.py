"""`ergbook surveys`: what is in this store."""

from __future__ import annotations

import json

import click


@click.command()
@click.option("--json", "as_json", is_flag=True, help="Print JSON.")
def surveys(as_json: bool) -> None:
    """List the surveys: id, name and number of observations."""
    from fieldlog.store.db import db
    from fieldlog.surveys.service import list_surveys
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    app = create_app(Settings.from_environment())
    with app.app_context():
        found = list_surveys(db.session)
    if as_json:
        rows = [{"id": s.survey, "name": s.name, "observations": s.observations} for s in found]
        click.echo(json.dumps(rows, ensure_ascii=False))
        return
    for s in found:
        click.echo(f"{s.survey}  {s.observations:>7}  {s.name}")
