"""The one place that commits."""

from __future__ import annotations

import threading
from collections.abc import Iterator
from contextlib import contextmanager, nullcontext
from typing import Any

from sqlalchemy.orm import scoped_session

from fieldlog.store.db import as_writer, db

_one_writer = threading.RLock()
"""SQLite has one writer anyway; waiting here is fairer and faster than its polling."""


@contextmanager
def write() -> Iterator[scoped_session[Any]]:
    """One writing transaction: committed when the block ends, rolled back when it raises.

    What the request read before is let go first, so that nothing read outside the lock is written
    back inside it.
    """
    session = db.session
    session.rollback()
    on_sqlite = session.get_bind().dialect.name == "sqlite"
    with _one_writer if on_sqlite else nullcontext(), as_writer():
        try:
            yield session
            session.commit()
        except BaseException:
            session.rollback()
            raise
