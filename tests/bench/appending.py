"""What a hand-over costs the store: against a plain bulk insert, and with a million entries in the ledger."""

from __future__ import annotations

import statistics
import tempfile
import time
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from sqlalchemy import insert, select

from fieldlog.handover.schema import ENTRY_BYTES_MAX
from fieldlog.handover.service import check_batch
from fieldlog.ledger.entry import write_text
from fieldlog.ledger.names import new_device
from fieldlog.store.append import append
from fieldlog.store.db import db
from fieldlog.store.tables import LedgerEntry, SurveyCounter, observations
from fieldlog.store.transaction import write
from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings
from tests.bench.readings import readings
from tests.bench.trials import Numbers, generator
from tests.factories import Survey

COUNT, BATCH, ROUNDS = 1000, 500, 5
MANY = 1_000_000


def measure() -> Numbers:
    """Seconds for 1,000 observations, their ratio to a bulk insert, and how it grows with the ledger."""
    with tempfile.TemporaryDirectory() as folder:
        app = create_app(Settings(data_dir=Path(folder), database_url=f"sqlite:///{folder}/store.sqlite"))
        with app.app_context():
            survey = Survey()
            top = _median(lambda: _hand_over(survey, _texts(survey)))
            bottom = _median(lambda: _bulk_insert(survey))
            small = _median(lambda: _hand_over(survey, _texts(survey)))
            _fill(survey)
            large = _median(lambda: _hand_over(survey, _texts(survey)))
            db.session.remove()
            db.engine.dispose()
    return {
        "handover.store_over_bulk_insert": top / bottom,
        "handover.store_over_bulk_insert.top": top, "handover.store_over_bulk_insert.bottom": bottom,
        "handover.entries_slope": large / small,
        "handover.entries_slope.top": large, "handover.entries_slope.bottom": small,
    }


def _median(act: Callable[[], float]) -> float:
    act()
    return statistics.median(act() for _ in range(ROUNDS))


def _texts(survey: Survey) -> list[str]:
    now = datetime.now(UTC)
    return [
        write_text(app="0.1.0", by=survey.lead, survey=survey.id, kind="observation", values=values, hlc=f"{i:012x}.0000", made_at=now)
        for i, values in enumerate(readings(generator("appending"), COUNT, survey.site))
    ]


def _hand_over(survey: Survey, texts: list[str]) -> float:
    """Check, append and project them as a phone's batches; seconds, commits included."""
    device = new_device()
    begun = time.perf_counter()
    for first in range(0, COUNT, BATCH):
        batch = check_batch(survey.id, first + 1, texts[first : first + BATCH], ENTRY_BYTES_MAX)
        with write() as session:
            append(session, survey.id, device, batch)
    return time.perf_counter() - begun


def _bulk_insert(survey: Survey) -> float:
    """The same rows into the same two tables by plain Core inserts; they are taken out again."""
    newest = db.session.scalar(select(SurveyCounter.seq).where(SurveyCounter.survey == survey.id)) or 0
    entries = [dict(row) for row in db.session.execute(
        select(LedgerEntry.__table__).where(LedgerEntry.survey == survey.id, LedgerEntry.seq > newest - COUNT)).mappings()]
    rows = [dict(row) for row in db.session.execute(
        select(observations).where(observations.c.survey == survey.id, observations.c.first_seq > newest - COUNT)).mappings()]
    assert len(entries) == len(rows) == COUNT
    other = new_device()
    for entry, row in zip(entries, rows, strict=True):
        entry.update(seq=entry["seq"] + 10 * MANY, device=other, record=f"{other}-{entry['n']}")
        row.update(record=f"{other}-{entry['n']}")
    begun = time.perf_counter()
    with write() as session:
        session.execute(insert(LedgerEntry.__table__), entries)
        session.execute(insert(observations), rows)
    took = time.perf_counter() - begun
    with write() as session:
        session.execute(LedgerEntry.__table__.delete().where(LedgerEntry.device == other))
        session.execute(observations.delete().where(observations.c.record.like(f"{other}-%")))
    return took


def _fill(survey: Survey) -> None:
    """A million entries into the ledger, changes of one record each, by the shortest way."""
    text = write_text(app="0.1.0", by=survey.lead, survey=survey.id, kind="observation", values={"note": "x"}, hlc=f"{1:012x}.0000",
                      made_at=datetime.now(UTC), record=f"{'0' * 15}-1", over={}, saw=[])
    with write() as session:
        counter = session.get(SurveyCounter, survey.id)
        assert counter is not None
        for start in range(0, MANY, 20_000):
            rows: list[dict[str, Any]] = [
                {"survey": survey.id, "seq": counter.seq + start + i + 1, "device": "0" * 15, "n": start + i + 1, "kind": "observation",
                 "record": f"{'0' * 15}-{start + i + 1}", "text": text, "sha256": "0" * 64, "received_at": datetime.now(UTC)}
                for i in range(20_000)
            ]
            session.execute(insert(LedgerEntry), rows)
        counter.seq += MANY
