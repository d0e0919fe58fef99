"""`ergbook check` sees a changed cell, a dropped row and a flipped byte, and exits 1."""

from __future__ import annotations

from typing import Any

import pytest
from flask import Flask
from sqlalchemy import text

from fieldlog.ledger.names import new_device
from fieldlog.store.db import db
from fieldlog.store.rebuild import check, rebuild
from fieldlog.store.transaction import write
from tests.factories import Survey, send


@pytest.fixture
def survey(app: Flask) -> Any:
    with app.app_context():
        made = Survey()
        send(made, new_device(), made.batch(range(1, 11)))
        yield made


@pytest.mark.parametrize(
    ("damage", "told"),
    [
        ("UPDATE observation SET crest_deg = 1.25 WHERE crest_read_deg = 7", "stands as 1.25"),
        ("DELETE FROM observation WHERE crest_read_deg = 7", "the row is missing"),
        ("UPDATE ledger_entry SET text = replace(text, 'One', 'Ono')", "does not match its hash"),
        ("DELETE FROM ledger_entry WHERE seq = 9", "is missing"),
        ("UPDATE survey_counter SET seq = seq + 1", "the survey's counter says"),
        ("UPDATE site SET record = '000000000000000-1'", "the row is missing"),
    ],
)
def test_damage_is_found(survey: Survey, damage: str, told: str) -> None:
    assert list(check(db.session)) == []
    with write() as session:
        session.execute(text(damage))
    faults = [str(fault) for fault in check(db.session)]
    assert any(told in fault for fault in faults), faults


def test_rebuilding_mends_the_tables(survey: Survey) -> None:
    with write() as session:
        session.execute(text("UPDATE observation SET crest_deg = 1.25"))
        session.execute(text("DELETE FROM site"))
    with write() as session:
        rebuild(session, survey.id)
    assert list(check(db.session)) == []
