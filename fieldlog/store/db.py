"""The one database handle, its naming convention, and how each engine is set up.

SQLite: the driver's own transaction handling is switched off, every writing transaction begins
IMMEDIATE (a read-then-write transaction would get SQLITE_BUSY at once), WAL with synchronous=FULL
(an acknowledged commit survives a power cut). Never on a network drive.
"""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from datetime import UTC, datetime
from typing import Any

from flask_sqlalchemy import SQLAlchemy
from sqlalchemy import DateTime, Dialect, Engine, MetaData, event
from sqlalchemy.orm import DeclarativeBase, Session, scoped_session
from sqlalchemy.types import TypeDecorator

BUSY_TIMEOUT_MS = 30_000

NAMING = {
    "ix": "ix_%(table_name)s_%(column_0_N_name)s",
    "uq": "uq_%(table_name)s_%(column_0_N_name)s",
    "ck": "ck_%(table_name)s_%(constraint_name)s",
    "fk": "fk_%(table_name)s_%(column_0_N_name)s_%(referred_table_name)s",
    "pk": "pk_%(table_name)s",
}


class Base(DeclarativeBase):
    """What every mapped class stands on; its metadata names all constraints."""

    metadata = MetaData(naming_convention=NAMING)


AnySession = Session | scoped_session[Any]
"""A session as services take it: the request's, or a plain one."""

db = SQLAlchemy(model_class=Base)

_writing: ContextVar[bool] = ContextVar("writing", default=False)


class UtcTime(TypeDecorator[datetime]):
    """An aware datetime in UTC; SQLite keeps it naive."""

    impl = DateTime(timezone=True)
    cache_ok = True

    def process_bind_param(self, value: datetime | None, dialect: Dialect) -> datetime | None:
        if value is None:
            return None
        if value.tzinfo is None:
            raise ValueError("a time needs its zone")
        return value.astimezone(UTC).replace(tzinfo=None) if dialect.name == "sqlite" else value.astimezone(UTC)

    def process_result_value(self, value: datetime | None, dialect: Dialect) -> datetime | None:
        if value is None:
            return None
        return value.replace(tzinfo=UTC) if value.tzinfo is None else value.astimezone(UTC)


@contextmanager
def as_writer() -> Iterator[None]:
    """Transactions begun inside take SQLite's write lock from the start."""
    token = _writing.set(True)
    try:
        yield
    finally:
        _writing.reset(token)


def engine_url(url: str) -> str:
    """The SQLAlchemy URL for a database URL as people write it."""
    for prefix in ("postgres://", "postgresql://"):
        if url.startswith(prefix):
            return "postgresql+psycopg://" + url.removeprefix(prefix)
    return url


def set_up_engine(engine: Engine) -> None:
    """Attach the SQLite rules to an engine; other databases need none."""
    if engine.dialect.name != "sqlite" or event.contains(engine, "connect", _on_connect):
        return
    event.listen(engine, "connect", _on_connect)
    event.listen(engine, "begin", _on_begin)


def _on_connect(connection: Any, _record: object) -> None:
    connection.isolation_level = None
    for pragma in (
        "journal_mode=WAL",
        "synchronous=FULL",
        f"busy_timeout={BUSY_TIMEOUT_MS}",
        "foreign_keys=ON",
    ):
        connection.execute(f"PRAGMA {pragma}")


def _on_begin(connection: Any) -> None:
    connection.exec_driver_sql("BEGIN IMMEDIATE" if _writing.get() else "BEGIN")
