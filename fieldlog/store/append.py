"""Appending to the ledger: the one way anything gets into a survey.

Entries are checked outside the lock. Inside, one transaction locks the survey's counter, drops
what it already holds, numbers only what is new, inserts, projects and commits; the lock is held to
the commit, so that numbers become visible in order and without a gap.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any, Literal

from sqlalchemy import insert, select, update

from fieldlog import __version__
from fieldlog.errors import Refusal
from fieldlog.ledger import clock, names
from fieldlog.ledger.entry import (
    Entry,
    EntryError,
    check_shape,
    hash_of,
    raw_bytes,
    write_text,
)
from fieldlog.ledger.merge import merge
from fieldlog.sheet.schema import problems
from fieldlog.sheet.subjects import PHONE_KINDS, label_in
from fieldlog.store.db import AnySession
from fieldlog.store.projection import entries_of, project_records
from fieldlog.store.tables import DeviceCounter, LedgerEntry, SetAside, SurveyCounter

Status = Literal["stored", "already", "set_aside", "forked"]

PROBLEM_MAX = 500
CHUNK = 500
"""Names a query asks for at once; SQLite allows some thousands of variables."""


@dataclass(frozen=True)
class Prepared:
    """An entry text as received, and what keeps it out of the ledger, if anything does."""

    n: int
    text: str
    sha256: str
    problem: str = ""

    def entry(self, device: str) -> Entry:
        return Entry(device, self.n, self.text)


@dataclass(frozen=True)
class Result:
    """The answer to one entry."""

    n: int
    status: Status
    seq: int | None = None
    problem: str = ""


class GapError(Refusal, ValueError):
    """A batch that begins beyond what has been received of its device."""

    def __init__(self, received_through: int) -> None:
        super().__init__(
            f"entries after {received_through} are missing", "first", f"Send again from {received_through + 1}"
        )
        self.received_through = received_through


class ForeignStoreError(Refusal, ValueError):
    """No such survey here."""


def prepare(survey: str, n: int, text: str, *, kinds: frozenset[str] = PHONE_KINDS) -> Prepared:
    """Check one text without the database: its shape, its kind and its values."""
    sha256 = hash_of(text)
    try:
        body = check_shape(text, survey)
        if body["kind"] not in kinds:
            raise EntryError(f"a phone does not say anything of the kind {body['kind']}", "kind")
        wrong = problems(body["kind"], body["set"], creates=not body.get("record"))
        if wrong:
            raise EntryError("; ".join(f"{field} {what}" for field, what in wrong.items()), "set")
    except Refusal as refusal:
        return Prepared(n, text, sha256, _plain(str(refusal)))
    return Prepared(n, text, sha256)


def _plain(problem: str) -> str:
    """A problem that any database can hold, of a length that a phone can show."""
    return problem.replace("\x00", "").encode("utf-8", errors="replace").decode("utf-8")[:PROBLEM_MAX]


def open_survey(session: AnySession) -> str:
    """Make room for a new survey; its id. Nothing is said about it yet."""
    survey = names.new_survey_id()
    session.execute(insert(SurveyCounter).values(survey=survey, seq=0, store_device=names.new_device(), hlc=""))
    return survey


def admit_survey(session: AnySession, survey: str) -> None:
    """Make room for a survey that was made elsewhere and comes with its ledger; nothing where it is here."""
    if session.get(SurveyCounter, survey) is None:
        session.execute(insert(SurveyCounter).values(survey=survey, seq=0, store_device=names.new_device(), hlc=""))


def base_device(session: AnySession, survey: str) -> str | None:
    """The id under which this store speaks in a survey."""
    return session.scalar(select(SurveyCounter.store_device).where(SurveyCounter.survey == survey))


def hashes_of(session: AnySession, survey: str, device: str) -> dict[int, str]:
    """n -> SHA-256 of every entry of a device that is here, in the ledger or set aside."""
    held: dict[int, str] = {}
    for table in (LedgerEntry, SetAside):
        found = session.execute(select(table.n, table.sha256).where(table.survey == survey, table.device == device))
        held.update((n, sha256) for n, sha256 in found)
    return held


def lock_survey(session: AnySession, survey: str) -> SurveyCounter:
    """Take the survey's lock until the transaction ends."""
    locked = session.execute(
        update(SurveyCounter).where(SurveyCounter.survey == survey).values(seq=SurveyCounter.seq)
    )
    if locked.rowcount != 1:  # type: ignore[attr-defined]
        raise ForeignStoreError(f"there is no survey {survey} here", mend="Ask the lead for the address of its store")
    counter = session.get(SurveyCounter, survey, populate_existing=True)
    assert counter is not None
    return counter


def append(
    session: AnySession, survey: str, device: str, batch: Sequence[Prepared], *, received_at: datetime | None = None,
    accepted_by: str | None = None,
) -> tuple[list[Result], int]:
    """Append a device's consecutive entries; answers in order, and how far it is now received.

    Inside `write()`. Repeating a batch changes nothing. `accepted_by`: who accepted it from a file. GapError where the batch begins beyond
    what has been received.
    """
    counter = lock_survey(session, survey)
    known = session.get(DeviceCounter, (survey, device))
    through = known.received_through if known else 0
    if batch and batch[0].n > through + 1:
        raise GapError(through)
    held = _held(session, survey, device, batch)
    now = received_at or datetime.now(UTC)
    record_kinds = _kinds_of_named_records(session, survey, device, batch)
    results: list[Result] = []
    fresh: list[tuple[int, Entry, str]] = []
    aside: list[dict[str, Any]] = []
    for item in batch:
        if item.n in held:
            sha256, seq, problem = held[item.n]
            status: Status = "forked" if sha256 != item.sha256 else ("already" if seq else "set_aside")
            results.append(Result(item.n, status, seq, problem))
            continue
        problem = item.problem or _misplaced(item.entry(device), record_kinds)
        if problem:
            aside.append(
                {
                    "survey": survey, "device": device, "n": item.n, "text": raw_bytes(item.text),
                    "sha256": item.sha256, "problem": problem, "received_at": now,
                }
            )
            results.append(Result(item.n, "set_aside", None, problem))
        else:
            entry = item.entry(device)
            seq = counter.seq + len(fresh) + 1
            fresh.append((seq, entry, item.sha256))
            record_kinds[entry.record] = entry.kind
            results.append(Result(item.n, "stored", seq))
    if aside:
        session.execute(insert(SetAside), aside)
    _insert(session, survey, counter, fresh, now, accepted_by)
    through = max([through, *(item.n for item in batch)])
    if known:
        known.received_through = through
    else:
        session.add(DeviceCounter(survey=survey, device=device, received_through=through))
    session.flush()
    return results, through


def _insert(
    session: AnySession, survey: str, counter: SurveyCounter, fresh: list[tuple[int, Entry, str]], now: datetime,
    accepted_by: str | None,
) -> None:
    if not fresh:
        return
    rows = [
        {
            "survey": survey, "seq": seq, "device": entry.device, "n": entry.n, "kind": entry.kind,
            "record": entry.record, "text": entry.text, "sha256": sha256, "received_at": now,
            "accepted_by": accepted_by,
        }
        for seq, entry, sha256 in fresh
    ]
    session.execute(insert(LedgerEntry), rows)
    now_ms = int(now.timestamp() * 1000)
    for _seq, entry, _sha256 in fresh:
        counter.hlc = clock.receive(counter.hlc, entry.body["hlc"], now_ms)
    counter.seq += len(fresh)
    session.flush()
    project_records(session, survey, [(seq, entry) for seq, entry, _ in fresh])


def _held(
    session: AnySession, survey: str, device: str, batch: Sequence[Prepared]
) -> dict[int, tuple[str, int | None, str]]:
    """What is here already of the batch's numbers: n -> hash, seq (None: set aside), problem."""
    if not batch:
        return {}
    low, high = batch[0].n, batch[-1].n
    held: dict[int, tuple[str, int | None, str]] = {}
    for n, sha256, seq in session.execute(
        select(LedgerEntry.n, LedgerEntry.sha256, LedgerEntry.seq).where(
            LedgerEntry.survey == survey, LedgerEntry.device == device, LedgerEntry.n.between(low, high)
        )
    ):
        held[n] = (sha256, seq, "")
    for n, sha256, problem in session.execute(
        select(SetAside.n, SetAside.sha256, SetAside.problem).where(
            SetAside.survey == survey, SetAside.device == device, SetAside.n.between(low, high)
        )
    ):
        held[n] = (sha256, None, problem)
    return held


def _kinds_of_named_records(
    session: AnySession, survey: str, device: str, batch: Iterable[Prepared]
) -> dict[str, str]:
    """Kind of every record that the batch's changes name and that is here."""
    named = sorted({e.record for item in batch if not item.problem and not (e := item.entry(device)).creates})
    kinds: dict[str, str] = {}
    for start in range(0, len(named), CHUNK):
        found = session.execute(
            select(LedgerEntry.record, LedgerEntry.kind).where(
                LedgerEntry.survey == survey, LedgerEntry.record.in_(named[start : start + CHUNK])
            )
        )
        kinds.update(found.all())
    return kinds


def _misplaced(entry: Entry, record_kinds: Mapping[str, str]) -> str:
    """What is wrong with the record that a change names; "" where nothing is."""
    if entry.creates:
        return ""
    kind = record_kinds.get(entry.record)
    if kind is None:
        return f"record: changes {entry.record}, which is not here. Mend that one first"
    if kind != entry.kind:
        return f"kind: {entry.record} is of the kind {kind}, not {entry.kind}"
    return ""


def say(
    session: AnySession,
    survey: str,
    *,
    by: str | None,
    kind: str,
    values: Mapping[str, Any],
    record: str | None = None,
    now: datetime | None = None,
) -> str:
    """Say something as the store itself (a lead's or an import's word); the record's id.

    Inside `write()`. `by` is the crew record of whoever says it; None only for a crew member who
    introduces themselves. With `record`, only `values` that differ from what stands are said, over
    all their heads. Refusal names the field that is wrong by its label.
    """
    counter = lock_survey(session, survey)
    now = now or datetime.now(UTC)
    device = counter.store_device
    known = session.get(DeviceCounter, (survey, device))
    n = (known.received_through if known else 0) + 1
    over: dict[str, list[str]] = {}
    saw: list[str] = []
    said = dict(values)
    if record is not None:
        merged = merge(entries_of(session, survey, [record]).get(record, []))
        if merged.created is None or merged.created.kind != kind:
            raise Refusal(f"there is no {kind} {record} in this survey")
        said = {
            field: value
            for field, value in said.items()
            if field in merged.two_versions or merged.values.get(field) != value
        }
        if not said:
            return record
        over = {field: list(merged.heads.get(field, ())) for field in said}
        saw = list(merged.frontier)
    wrong = problems(kind, said, creates=record is None)
    if wrong:
        field, what = next(iter(wrong.items()))
        raise Refusal(what, label_in(kind, field))
    counter.hlc = clock.tick(counter.hlc, int(now.timestamp() * 1000))
    text = write_text(
        app=__version__, by=by or names.entry_name(device, n), survey=survey, kind=kind, values=said,
        hlc=counter.hlc, made_at=now, record=record, over=over, saw=saw, offset_ms=0,
    )
    append(session, survey, device, [Prepared(n, text, hash_of(text))], received_at=now)
    return record or names.entry_name(device, n)
