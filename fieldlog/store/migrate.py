"""Bringing a database to the present shape."""

from __future__ import annotations

from pathlib import Path

from alembic import command
from alembic.autogenerate import compare_metadata
from alembic.config import Config
from alembic.runtime.migration import MigrationContext
from sqlalchemy import Connection, Engine, create_engine

from fieldlog.store.db import Base, engine_url, set_up_engine

FOLDER = Path(__file__).resolve().parent / "migrations"


def configuration(url: str) -> Config:
    """Alembic's configuration for one database."""
    config = Config()
    config.set_main_option("script_location", str(FOLDER))
    config.attributes["url"] = engine_url(url)
    return config


def upgrade(url: str, revision: str = "head") -> bool:
    """Run all migrations that the database has not seen; whether one that held something was changed."""
    before = _revision(url)
    command.upgrade(configuration(url), revision)
    return before is not None and before != _revision(url)


def downgrade(url: str, revision: str) -> None:
    """Go back to an earlier shape."""
    command.downgrade(configuration(url), revision)


def _revision(url: str) -> str | None:
    engine = engine_for(url)
    with engine.connect() as connection:
        found = MigrationContext.configure(connection).get_current_revision()
    engine.dispose()
    return found


def write_migration(url: str, message: str) -> None:
    """Write a migration, numbered on, from what the models say and an up-to-date database does not have."""
    number = 1 + len(list((FOLDER / "versions").glob("[0-9]*.py")))
    command.revision(configuration(url), message=message, autogenerate=True, rev_id=f"{number:04d}")


def difference(connection: Connection) -> list[object]:
    """What separates the database from the models; empty when nothing does."""
    context = MigrationContext.configure(connection, opts={"compare_type": True, "render_as_batch": True})
    return list(compare_metadata(context, Base.metadata))


def engine_for(url: str) -> Engine:
    """A plain engine set up as the store's."""
    engine = create_engine(engine_url(url))
    set_up_engine(engine)
    return engine
