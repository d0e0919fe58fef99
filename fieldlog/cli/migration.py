"""`ergbook migration`: write the migration for an edit of the sheet."""

from __future__ import annotations

import tempfile
from pathlib import Path

import click


@click.command()
@click.argument("message")
def migration(message: str) -> None:
    """Write a migration for what the sheets and models have and a database of all migrations has not.

    Read it before you commit it. MESSAGE says what it adds. Your own store is left alone.
    """
    from fieldlog.store.migrate import upgrade, write_migration

    with tempfile.TemporaryDirectory(prefix="ergbook-") as folder:
        url = f"sqlite:///{Path(folder) / 'empty.sqlite'}"
        upgrade(url)
        write_migration(url, message)
