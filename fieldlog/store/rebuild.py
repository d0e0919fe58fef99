"""Rebuilding the tables from the ledger, and comparing them with what stands."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from itertools import groupby
from typing import Any

from sqlalchemy import delete, func, insert, select

from fieldlog.ledger.entry import Entry, hash_of
from fieldlog.store.db import AnySession
from fieldlog.store.projection import row_of, versions_of
from fieldlog.store.tables import (
    TABLES,
    DeviceCounter,
    LedgerEntry,
    SetAside,
    SurveyCounter,
    TwoVersions,
)

Progress = Callable[[int, int], None]
CHUNK = 500


@dataclass(frozen=True)
class Fault:
    """One thing in which the database contradicts its ledger."""

    survey: str
    where: str
    what: str

    def __str__(self) -> str:
        return f"survey {self.survey}, {self.where}: {self.what}"


def check(session: AnySession, progress: Progress | None = None) -> Iterator[Fault]:
    """Compare everything with what the ledger adds up to; yields each fault, nothing where all is well."""
    for survey in session.scalars(select(SurveyCounter.survey).order_by(SurveyCounter.survey)):
        yield from _check_ledger(session, survey)
        yield from _check_numbering(session, survey)
        yield from _check_tables(session, survey, progress)


def rebuild_all(session: AnySession) -> None:
    """Rebuild every survey. Inside `write()`."""
    for survey in session.scalars(select(SurveyCounter.survey)).all():
        rebuild(session, survey)


def rebuild(session: AnySession, survey: str) -> None:
    """Empty one survey's projected tables and fill them from the ledger. Inside `write()`."""
    for table in TABLES.values():
        session.execute(delete(table).where(table.c.survey == survey))
    session.execute(delete(TwoVersions).where(TwoVersions.survey == survey))
    for made in _records(session, survey):
        if made is None:
            continue
        kind, row, doubtful = made
        session.execute(insert(TABLES[kind]).values(**row))
        if doubtful:
            session.execute(insert(TwoVersions), doubtful)


def _check_ledger(session: AnySession, survey: str) -> Iterator[Fault]:
    """Hashes, and seq 1, 2, 3 ... up to the survey's counter."""
    expected = 0
    columns = (LedgerEntry.seq, LedgerEntry.device, LedgerEntry.n, LedgerEntry.kind, LedgerEntry.record,
               LedgerEntry.text, LedgerEntry.sha256)
    rows = session.execute(
        select(*columns).where(LedgerEntry.survey == survey).order_by(LedgerEntry.seq)
        .execution_options(yield_per=2000)
    )
    for seq, device, n, kind, record, text, sha256 in rows:
        expected += 1
        if seq != expected:
            yield Fault(survey, f"ledger seq {expected}", "is missing")
            expected = seq
        if hash_of(text) != sha256:
            yield Fault(survey, f"ledger seq {seq}", f"the text of {device}-{n} does not match its hash")
            continue
        entry = Entry(device, n, text)
        if (entry.kind, entry.record) != (kind, record):
            yield Fault(survey, f"ledger seq {seq}", "kind or record differ from the entry's text")
    counter = session.scalar(select(SurveyCounter.seq).where(SurveyCounter.survey == survey))
    if counter != expected:
        yield Fault(survey, "ledger", f"ends at {expected}, the survey's counter says {counter}")


def _check_numbering(session: AnySession, survey: str) -> Iterator[Fault]:
    """Every device's entries are 1..k, in the ledger or set aside."""
    counts: dict[str, int] = {}
    highest: dict[str, int] = {}
    for table in (LedgerEntry, SetAside):
        for device, count, high in session.execute(
            select(table.device, func.count(), func.max(table.n)).where(table.survey == survey).group_by(table.device)
        ):
            counts[device] = counts.get(device, 0) + count
            highest[device] = max(highest.get(device, 0), high)
    through: dict[str, int] = dict(
        session.execute(
            select(DeviceCounter.device, DeviceCounter.received_through).where(DeviceCounter.survey == survey)
        ).all()
    )
    for device in sorted(counts.keys() | through.keys()):
        if not counts.get(device, 0) == highest.get(device, 0) == through.get(device, 0):
            yield Fault(
                survey, f"device {device}",
                f"{counts.get(device, 0)} entries, the highest {highest.get(device, 0)}, "
                f"counted as received through {through.get(device, 0)}",
            )


def _records(session: AnySession, survey: str) -> Iterator[tuple[str, dict[str, Any], list[dict[str, Any]]] | None]:
    """Kind, row and two_versions rows of every record of the survey, from the ledger alone."""
    rows = session.execute(
        select(LedgerEntry.record, LedgerEntry.seq, LedgerEntry.device, LedgerEntry.n, LedgerEntry.text)
        .where(LedgerEntry.survey == survey)
        .order_by(LedgerEntry.record, LedgerEntry.seq)
        .execution_options(yield_per=2000)
    )
    for record, group in groupby(rows, key=lambda row: row[0]):
        made = row_of(survey, ((seq, Entry(device, n, text)) for _, seq, device, n, text in group))
        if made is not None:
            kind, row, merged = made
            yield kind, row, versions_of(merged, survey, kind, record)


def _check_tables(session: AnySession, survey: str, progress: Progress | None) -> Iterator[Fault]:
    total = session.scalar(
        select(func.count(LedgerEntry.record.distinct())).where(LedgerEntry.survey == survey)
    ) or 0
    counts = dict.fromkeys(TABLES, 0)
    doubtful_count = 0
    chunk: list[tuple[str, dict[str, Any], list[dict[str, Any]]]] = []
    done = 0

    def compare() -> Iterator[Fault]:
        yield from _compare_rows(session, survey, chunk)
        yield from _compare_versions(session, survey, chunk)
        chunk.clear()

    try:
        for made in _records(session, survey):
            if made is None:
                continue
            counts[made[0]] += 1
            doubtful_count += len(made[2])
            chunk.append(made)
            done += 1
            if len(chunk) == CHUNK:
                yield from compare()
                if progress:
                    progress(done, total)
    except (ValueError, KeyError, TypeError) as error:
        yield Fault(survey, "ledger", f"cannot be projected: {error}")
        return
    yield from compare()
    if progress:
        progress(done, total)
    for kind, table in TABLES.items():
        standing = session.scalar(select(func.count()).select_from(table).where(table.c.survey == survey))
        if standing != counts[kind]:
            yield Fault(survey, f"table {kind}", f"{standing} rows, the ledger adds up to {counts[kind]}")
    standing = session.scalar(select(func.count()).select_from(TwoVersions).where(TwoVersions.survey == survey))
    if standing != doubtful_count:
        yield Fault(survey, "table two_versions", f"{standing} rows, the ledger adds up to {doubtful_count}")


def _compare_rows(
    session: AnySession, survey: str, chunk: list[tuple[str, dict[str, Any], list[dict[str, Any]]]]
) -> Iterator[Fault]:
    for kind, table in TABLES.items():
        rows = {row["record"]: row for k, row, _ in chunk if k == kind}
        if not rows:
            continue
        found = session.execute(select(table).where(table.c.survey == survey, table.c.record.in_(rows))).mappings()
        standing = {row["record"]: row for row in found}
        for record, row in rows.items():
            if record not in standing:
                yield Fault(survey, f"{kind} {record}", "the row is missing")
                continue
            for column, value in row.items():
                if standing[record][column] != value:
                    yield Fault(
                        survey, f"{kind} {record}, {column}",
                        f"stands as {standing[record][column]!r}, the ledger adds up to {value!r}",
                    )


def _compare_versions(
    session: AnySession, survey: str, chunk: list[tuple[str, dict[str, Any], list[dict[str, Any]]]]
) -> Iterator[Fault]:
    wanted = {(row["record"], row["field"]): row["versions"] for _, _, rows in chunk for row in rows}
    if not wanted:
        return
    found = session.execute(
        select(TwoVersions.record, TwoVersions.field, TwoVersions.versions).where(
            TwoVersions.survey == survey, TwoVersions.record.in_({record for record, _ in wanted})
        )
    )
    standing = {(record, field): versions for record, field, versions in found}
    for key, versions in wanted.items():
        if standing.get(key) != versions:
            yield Fault(survey, f"two versions of {key[1]} in {key[0]}", "differ from the ledger's")
