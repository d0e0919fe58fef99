"""`ergbook migration`: write the migration for an edit of the sheet."""

from __future__ import annotations

import click


@click.command()
@click.argument("message")
def migration(message: str) -> None:
    """Write a migration for what the sheets and models have and the database has not.

    Read it before you commit it. MESSAGE says what it adds.
    """
    from fieldlog.store.migrate import upgrade, write_migration
    from fieldlog.web.settings import Settings

    url = Settings.from_environment().database_url
    upgrade(url)
    write_migration(url, message)
