"""Bringing a database to the present shape."""

from __future__ import annotations

from pathlib import Path

from alembic import command
from alembic.autogenerate import compare_metadata
from alembic.config import Config
from alembic.runtime.migration import MigrationContext
from alembic.script import ScriptDirectory
from sqlalchemy import Connection, Engine, create_engine, make_url
from sqlalchemy.exc import ArgumentError, DBAPIError

from fieldlog.errors import Refusal
from fieldlog.store.db import Base, engine_url, set_up_engine

FOLDER = Path(__file__).resolve().parent / "migrations"


class StoreError(Refusal, OSError):
    """A database that cannot be opened, or not by this version."""


def configuration(url: str) -> Config:
    """Alembic's configuration for one database."""
    config = Config()
    config.set_main_option("script_location", str(FOLDER))
    config.attributes["url"] = engine_url(url)
    return config


def upgrade(url: str, revision: str = "head") -> bool:
    """Run all migrations that the database has not seen; whether one that held something was changed.

    Refusal of what is no address; StoreError where there is no such database, or a later version of the program has changed it.
    """
    try:
        before = _revision(url)
    except (ArgumentError, ValueError) as error:  # a port that is no number is a ValueError
        raise Refusal("it is not the address of a database", "ERGBOOK_DATABASE_URL", "Write postgresql://user@host/name") from error
    except DBAPIError as error:
        why = str(error.orig).splitlines()[0]
        raise StoreError(f"the database cannot be opened ({why})", _shown(url), "ERGBOOK_DATABASE_URL names it") from error
    config = configuration(url)
    if before not in {None, *(script.revision for script in ScriptDirectory.from_config(config).walk_revisions())}:
        raise StoreError(f"a later version of Ergbook has changed it ({before})", _shown(url), "Install that version")
    command.upgrade(config, revision)
    return before is not None and before != _revision(url)


def _shown(url: str) -> str:
    return make_url(url).render_as_string(hide_password=True)


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
    """Write a migration, numbered on, from what the models say and an up-to-date database does not have.

    Refusal where that is nothing, or nothing is said of it.
    """
    if not message.strip():
        raise Refusal("a migration says what it adds", "MESSAGE")
    engine = engine_for(url)
    with engine.connect() as connection:
        new = difference(connection)
    engine.dispose()
    if not new:
        raise Refusal("the migrations have all that the sheets and models have", mend="Edit those first")
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
