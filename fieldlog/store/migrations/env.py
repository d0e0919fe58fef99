"""Alembic's environment: the store's metadata, batch mode for SQLite."""

from __future__ import annotations

from alembic import context
import fieldlog.people.models as _people_models  # noqa: F401  its tables belong to the metadata

from fieldlog.store import tables as _tables  # noqa: F401
from fieldlog.store.db import Base, as_writer
from fieldlog.store.migrate import engine_for


def run() -> None:
    engine = engine_for(context.config.attributes["url"])
    with engine.connect() as connection, as_writer():
        context.configure(
            connection=connection,
            target_metadata=Base.metadata,
            render_as_batch=True,
            compare_type=True,
            user_module_prefix="store.",
        )
        with context.begin_transaction():
            context.run_migrations()
    engine.dispose()


run()
