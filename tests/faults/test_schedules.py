"""The short form of `make faults`: random schedules on both databases, the same ones every time; and the same
run over code that was broken on purpose, which it must find."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from typing import Any

import pytest
from flask import Flask

from fieldlog.errors import Refusal
from fieldlog.handover import service as handover
from fieldlog.handover import views
from fieldlog.store import append as appending
from fieldlog.store import projection, transaction
from fieldlog.store.append import Prepared
from tests.faults.schedules import run

SEED = 20260708


def test_nothing_is_lost_and_nothing_doubled(app: Flask) -> None:
    met: Counter[str] = Counter()
    run(lambda: app, range(SEED, SEED + 25), met)
    assert len(met) >= 14, met


def numbers_are_burnt(monkeypatch: pytest.MonkeyPatch) -> None:
    """Numbers as a database sequence gives them: a batch that brings nothing new takes one too."""
    plain = appending.lock_survey

    def lock(session: Any, survey: str) -> Any:
        counter = plain(session, survey)
        counter.seq += 1
        return counter

    monkeypatch.setattr(appending, "lock_survey", lock)


def last_writer_wins(monkeypatch: pytest.MonkeyPatch) -> None:
    """The store shows the newest value and forgets that there was another."""
    plain = projection.merge
    monkeypatch.setattr(projection, "merge", lambda entries: replace(plain(entries), two_versions={}))


def answered_before_the_commit(monkeypatch: pytest.MonkeyPatch) -> None:
    """Every fifth batch is answered and then not kept."""
    calls = iter(range(1_000_000))

    @contextmanager
    def write() -> Iterator[Any]:
        with transaction.write() as session:
            yield session
            if next(calls) % 5 == 4:
                session.rollback()

    monkeypatch.setattr(views, "write", write)


def stops_at_the_first_error(monkeypatch: pytest.MonkeyPatch) -> None:
    """One bad entry refuses its whole batch."""
    plain = handover.check_batch

    def check(*arguments: Any) -> list[Prepared]:
        prepared = plain(*arguments)
        for item in prepared:
            if item.problem:
                raise Refusal(item.problem)
        return prepared

    monkeypatch.setattr(handover, "check_batch", check)


@pytest.mark.parametrize("database_url", ["sqlite"], indirect=True)
@pytest.mark.parametrize(
    ("break_it", "found"),
    [
        (numbers_are_burnt, "I4"), (last_writer_wins, "I8|I7"), (answered_before_the_commit, "I2|I3|I5|I9|I10"),
        (stops_at_the_first_error, "I9"),
    ],
    ids=lambda value: value if isinstance(value, str) else value.__name__,
)
def test_code_broken_on_purpose_is_found(app: Flask, monkeypatch: pytest.MonkeyPatch, break_it: Any, found: str) -> None:
    break_it(monkeypatch)
    with pytest.raises(AssertionError, match=found):
        run(lambda: app, range(SEED, SEED + 25), Counter())
