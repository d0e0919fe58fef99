"""`ergbook check`: does the database say what its ledger says?"""

from __future__ import annotations

import sys

import click

from fieldlog.cli.progress import progress_line

SHOWN = 20


@click.command()
def check() -> None:
    """Rebuild every table from the ledger and compare. Exit 1 where anything differs."""
    from fieldlog.store import rebuild
    from fieldlog.store.db import db
    from fieldlog.web.app import create_app
    from fieldlog.web.settings import Settings

    app = create_app(Settings.from_environment())
    with app.app_context():
        faults = list(rebuild.check(db.session, progress_line("records compared")))
        records = db.session.execute(db.text("SELECT count(*) FROM ledger_entry")).scalar()
    for fault in faults[:SHOWN]:
        click.echo(f"ergbook: {fault}", err=True)
    if len(faults) > SHOWN:
        click.echo(f"ergbook: and {len(faults) - SHOWN} more", err=True)
    if faults:
        click.echo("ergbook: the tables are not what the ledger adds up to. Restore from a back-up", err=True)
        sys.exit(1)
    click.echo(f"{records} entries: the tables are what the ledger adds up to.")
