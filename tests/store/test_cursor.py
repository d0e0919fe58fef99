"""A survey's numbers become visible in order: no reader skips a slow writer."""

from __future__ import annotations

import threading
from typing import Any

import pytest
from flask import Flask
from sqlalchemy import text

from fieldlog.handover.service import changes
from fieldlog.ledger.names import new_device
from fieldlog.store.append import append
from fieldlog.store.db import db
from fieldlog.store.transaction import write
from tests.factories import Survey, send


@pytest.fixture
def survey(app: Flask) -> Any:
    with app.app_context():
        yield Survey()


def test_a_reader_never_passes_a_slow_writer(app: Flask, survey: Survey) -> None:
    """A takes numbers 4-6 and dawdles before its commit; B wants to append meanwhile; a reader asks
    all the time. What it has seen, put together, is 1..m without a hole."""
    numbered, go_on = threading.Event(), threading.Event()

    def slow() -> None:
        with app.app_context(), write() as session:
            append(session, survey.id, new_device(), survey.batch(range(1, 4)))
            numbered.set()
            assert go_on.wait(20)

    def fast() -> None:
        with app.app_context():
            send(survey, new_device(), survey.batch(range(1, 3)))

    threads = [threading.Thread(target=slow), threading.Thread(target=fast)]
    threads[0].start()
    assert numbered.wait(20)
    threads[1].start()
    seen: list[int] = []
    for round_ in range(40):
        found = changes(db.session, survey.id, after=seen[-1] if seen else 0, limit=2)
        seen.extend(seq for seq, *_ in found.entries)
        db.session.rollback()
        if round_ == 20:
            assert seen == [1, 2, 3]
            go_on.set()
            for thread in threads:
                thread.join(20)
    assert seen == [1, 2, 3, 4, 5, 6, 7, 8]


def test_a_writer_that_gives_up_leaves_no_hole(survey: Survey) -> None:
    class GaveUpError(Exception):
        pass

    with pytest.raises(GaveUpError), write() as session:
        append(session, survey.id, new_device(), survey.batch(range(1, 4)))
        raise GaveUpError
    send(survey, new_device(), survey.batch(range(1, 3)))
    assert [seq for seq, *_ in changes(db.session, survey.id, 0, 100).entries] == [1, 2, 3, 4, 5]


def test_sqlite_commits_to_the_disk(survey: Survey) -> None:
    """SQLite documentation, PRAGMA synchronous: 2 is FULL; WAL with NORMAL may lose a commit at power loss."""
    if db.engine.dialect.name != "sqlite":
        assert db.session.execute(text("SHOW synchronous_commit")).scalar() == "on"
        return
    assert db.session.execute(text("PRAGMA synchronous")).scalar() == 2
    assert db.session.execute(text("PRAGMA journal_mode")).scalar() == "wal"
    assert db.session.execute(text("PRAGMA busy_timeout")).scalar() == 30000
