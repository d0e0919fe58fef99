"""What a hand-over does, apart from HTTP."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime

from sqlalchemy import select

from fieldlog.errors import Refusal
from fieldlog.ledger.entry import raw_bytes
from fieldlog.sheet.times import iso_millis
from fieldlog.store.append import Prepared, Result, append, prepare
from fieldlog.store.db import AnySession
from fieldlog.store.identity import identity
from fieldlog.store.tables import LedgerEntry, SurveyCounter


class WrongStoreError(Refusal, ValueError):
    """The batch was meant for another store, or for this one before it went back in time."""


@dataclass(frozen=True)
class Changes:
    """Consecutive entries of a survey: (seq, device, n, text), and the newest seq there is."""

    entries: list[tuple[int, str, int, str]]
    through: int
    last: int


def head(session: AnySession) -> dict[str, str]:
    """Who answers, and when."""
    me = identity(session)
    return {"store": me.store, "epoch": me.epoch, "time": iso_millis(datetime.now(UTC))}


def check_batch(survey: str, first: int, texts: Sequence[str], entry_bytes_max: int) -> list[Prepared]:
    """Check a batch's texts, outside any lock."""
    prepared = []
    for n, text in enumerate(texts, start=first):
        item = prepare(survey, n, text)
        size = len(raw_bytes(text))
        if not item.problem and size > entry_bytes_max:
            item = Prepared(n, text, item.sha256, f"the entry has {size} bytes, more than {entry_bytes_max}")
        prepared.append(item)
    return prepared


def receive(
    session: AnySession, survey: str, device: str, batch: Sequence[Prepared], *, store: str, epoch: str
) -> tuple[list[Result], int]:
    """Append a phone's batch. Inside `write()`. WrongStoreError where store or epoch differ."""
    me = identity(session)
    if store != me.store:
        raise WrongStoreError(
            "the phone joined another store", mend="Hand over at the address where the phone joined"
        )
    if epoch != me.epoch:
        raise WrongStoreError("the store was restored since the phone last asked", mend="The phone asks anew by itself")
    return append(session, survey, device, batch)


def changes(session: AnySession, survey: str, after: int, limit: int) -> Changes:
    """The survey's entries after a seq, without a gap, at most `limit`."""
    last = session.scalar(select(SurveyCounter.seq).where(SurveyCounter.survey == survey)) or 0
    rows = session.execute(
        select(LedgerEntry.seq, LedgerEntry.device, LedgerEntry.n, LedgerEntry.text)
        .where(LedgerEntry.survey == survey, LedgerEntry.seq > after, LedgerEntry.seq <= last)
        .order_by(LedgerEntry.seq)
        .limit(limit)
    ).all()
    entries = [(seq, device, n, text) for seq, device, n, text in rows]
    return Changes(entries, entries[-1][0] if entries else min(after, last), last)
