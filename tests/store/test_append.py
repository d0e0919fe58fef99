"""Appending: once, in order, without a hole, and one bad entry stops no other."""

from __future__ import annotations

import threading
from typing import Any

import pytest
from flask import Flask
from sqlalchemy import select

from fieldlog.errors import Refusal
from fieldlog.ledger.entry import write_text
from fieldlog.ledger.names import new_device
from fieldlog.store.append import GapError, prepare, say
from fieldlog.store.db import db
from fieldlog.store.rebuild import check
from fieldlog.store.tables import LedgerEntry, SetAside, TwoVersions, observations, sites
from fieldlog.store.transaction import write
from tests.factories import WHEN, Survey, send


@pytest.fixture
def survey(app: Flask) -> Any:
    with app.app_context():
        yield Survey()


def test_a_batch_is_stored_once_however_often_it_comes(survey: Survey) -> None:
    device = new_device()
    assert send(survey, device, survey.batch(range(1, 6))) == ["stored"] * 5
    assert send(survey, device, survey.batch(range(1, 6))) == ["already"] * 5
    assert send(survey, device, survey.batch(range(4, 8))) == ["already", "already", "stored", "stored"]
    rows = db.session.execute(select(observations.c.crest_deg).order_by(observations.c.first_seq)).scalars().all()
    assert rows == [1, 2, 3, 4, 5, 6, 7]
    assert list(check(db.session)) == []


def test_a_batch_beyond_what_was_received_is_told_what_is_missing(survey: Survey) -> None:
    with pytest.raises(GapError) as caught:
        send(survey, new_device(), survey.batch(range(3, 5)))
    assert caught.value.received_through == 0


def test_a_bad_entry_is_set_aside_and_stops_no_other(survey: Survey) -> None:
    device = new_device()
    batch = survey.batch(range(1, 500))
    batch[250] = prepare(survey.id, 251, survey.text(251, {"site": survey.site, "observed_at": "2026-03-04T05:06:07Z",
                                                           "crest_read_deg": 400}))
    statuses = send(survey, device, batch)
    assert statuses.count("stored") == 498
    assert statuses[250] == "set_aside"
    kept = db.session.execute(select(SetAside)).scalar_one()
    assert "crest_read_deg 400 is outside 0 to below 360 deg" in kept.problem
    assert kept.text.decode() == batch[250].text
    assert send(survey, device, batch)[250] == "set_aside"
    assert list(check(db.session)) == []


def test_the_same_number_with_another_text_is_forked_and_overwrites_nothing(survey: Survey) -> None:
    device = new_device()
    send(survey, device, survey.batch(range(1, 3)))
    assert send(survey, device, [prepare(survey.id, 2, survey.text(77))]) == ["forked"]
    texts = db.session.scalars(select(LedgerEntry.text).where(LedgerEntry.device == device)).all()
    assert survey.text(77) not in texts


def test_what_only_the_lead_may_say_is_set_aside_when_a_phone_says_it(survey: Survey) -> None:
    text = write_text(app="0.1.0", by=survey.lead, survey=survey.id, kind="site",
                      values={"name": "X", "lat_deg": 1, "lon_deg": 1}, hlc="000000000001.0000", made_at=WHEN)
    assert send(survey, new_device(), [prepare(survey.id, 1, text)]) == ["set_aside"]


def test_an_edit_of_a_record_that_is_not_here_is_set_aside(survey: Survey) -> None:
    text = survey.text(1, {"note": "x"}, record=f"{new_device()}-1", over={}, saw=[])
    assert send(survey, new_device(), [prepare(survey.id, 1, text)]) == ["set_aside"]


def test_unknown_fields_stay_in_the_ledger(survey: Survey) -> None:
    text = survey.text(1, {"site": survey.site, "observed_at": "2026-03-04T05:06:07Z", "moon_phase": 0.4})
    assert send(survey, new_device(), [prepare(survey.id, 1, text)]) == ["stored"]
    assert "moon_phase" in db.session.scalars(select(LedgerEntry.text).order_by(LedgerEntry.seq.desc())).first()


def test_concurrent_changes_of_one_field_stand_as_two_versions(survey: Survey) -> None:
    one, other = new_device(), new_device()
    send(survey, one, survey.batch(range(1, 2)))
    record = f"{one}-1"
    change = {"record": record, "over": {"crest_read_deg": [record]}, "saw": [record]}
    send(survey, one, [prepare(survey.id, 2, survey.text(2, {"crest_read_deg": 20}, **change))])
    send(survey, other, [prepare(survey.id, 1, survey.text(3, {"crest_read_deg": 30}, **change))])
    row = db.session.execute(select(TwoVersions)).scalar_one()
    assert [version["value"] for version in row.versions] == [30, 20]
    assert list(check(db.session)) == []


def test_the_store_says_only_what_differs(survey: Survey) -> None:
    with write() as session:
        say(session, survey.id, by=survey.lead, kind="site", record=survey.site,
            values={"name": "Uno", "lat_deg": 20.0, "lon_deg": 10.0})
    last = db.session.scalars(select(LedgerEntry.text).order_by(LedgerEntry.seq.desc())).first()
    assert last is not None
    assert '"set":{"name":"Uno"}' in last
    assert db.session.execute(select(sites.c.name)).scalar_one() == "Uno"
    with pytest.raises(Refusal, match="outside"), write() as session:
        say(session, survey.id, by=survey.lead, kind="site", record=survey.site, values={"lat_deg": 91})
    assert list(check(db.session)) == []


def test_many_writers_leave_consecutive_numbers(app: Flask, survey: Survey) -> None:
    """Eight phones at once, on every database: seq is 1..m and nothing is lost or doubled."""
    failures: list[BaseException] = []

    def phone() -> None:
        try:
            with app.app_context():
                device = new_device()
                for first in range(1, 41, 10):
                    send(survey, device, survey.batch(range(first, first + 10)))
        except BaseException as error:
            failures.append(error)

    threads = [threading.Thread(target=phone) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert failures == []
    db.session.rollback()
    numbers = db.session.scalars(select(LedgerEntry.seq).order_by(LedgerEntry.seq)).all()
    assert numbers == list(range(1, 3 + 8 * 40 + 1))
    assert list(check(db.session)) == []


@pytest.mark.parametrize(
    "text", ["", "{", "[]", '{"v":0}', '{"v":1e999}', "\ud800", "\x00", "[" * 100_000, '{"v":0,"set":{"note":"\\u0000"}}']
)
def test_no_text_whatever_stops_a_hand_over(survey: Survey, text: str) -> None:
    device = new_device()
    batch = [*survey.batch(range(1, 3)), prepare(survey.id, 3, text), *survey.batch(range(4, 6))]
    assert send(survey, device, batch) == ["stored", "stored", "set_aside", "stored", "stored"]
    assert send(survey, device, batch) == ["already", "already", "set_aside", "already", "already"]
