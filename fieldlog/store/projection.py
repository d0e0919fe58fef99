"""Keeping the projected tables in step with the ledger, record by record."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from sqlalchemy import delete, insert, select, update

from fieldlog.ledger.entry import Entry
from fieldlog.ledger.merge import Merged, merge
from fieldlog.ledger.project import project
from fieldlog.store.db import AnySession
from fieldlog.store.tables import TABLES, LedgerEntry, TwoVersions

CHUNK = 500


def numbered_entries_of(
    session: AnySession, survey: str, records: Sequence[str]
) -> dict[str, list[tuple[int, Entry]]]:
    """Record -> its entries with their seq, in order of seq."""
    found: dict[str, list[tuple[int, Entry]]] = defaultdict(list)
    for start in range(0, len(records), CHUNK):
        rows = session.execute(
            select(LedgerEntry.record, LedgerEntry.seq, LedgerEntry.device, LedgerEntry.n, LedgerEntry.text)
            .where(LedgerEntry.survey == survey, LedgerEntry.record.in_(records[start : start + CHUNK]))
            .order_by(LedgerEntry.seq)
        )
        for record, seq, device, n, text in rows:
            found[record].append((seq, Entry(device, n, text)))
    return found


def entries_of(session: AnySession, survey: str, records: Sequence[str]) -> dict[str, list[Entry]]:
    """Record -> its entries, in order of seq."""
    numbered = numbered_entries_of(session, survey, records)
    return {record: [entry for _, entry in rows] for record, rows in numbered.items()}


def row_of(survey: str, numbered: Iterable[tuple[int, Entry]]) -> tuple[str, dict[str, Any], Merged] | None:
    """Kind, table row and merge of one record from its numbered entries; None without its creation."""
    rows = list(numbered)
    merged = merge(entry for _, entry in rows)
    if merged.created is None:
        return None
    row = project(merged)
    row["survey"] = survey
    row["first_seq"] = next(seq for seq, entry in rows if entry.name == merged.created.name)
    row["last_seq"] = max(seq for seq, _ in rows)
    return merged.created.kind, row, merged


def versions_of(merged: Merged, survey: str, kind: str, record: str) -> list[dict[str, Any]]:
    """The rows of the two_versions table for one record."""
    return [
        {
            "survey": survey, "record": record, "field": field, "kind": kind,
            "versions": [{"entry": v.entry, "value": v.value} for v in versions],
        }
        for field, versions in sorted(merged.two_versions.items())
    ]


def project_records(session: AnySession, survey: str, fresh: Sequence[tuple[int, Entry]]) -> None:
    """Bring the tables up to date with entries that were just added to the ledger."""
    numbered: dict[str, list[tuple[int, Entry]]] = defaultdict(list)
    for seq, entry in fresh:
        numbered[entry.record].append((seq, entry))
    created = {entry.record for _, entry in fresh if entry.creates}
    changed = [record for record in numbered if record not in created]
    if changed:
        numbered.update(numbered_entries_of(session, survey, changed))
    inserts: dict[str, list[dict[str, Any]]] = defaultdict(list)
    for record, rows in numbered.items():
        made = row_of(survey, rows)
        if made is None:
            continue
        kind, row, merged = made
        if record in created:
            inserts[kind].append(row)
        else:
            _update(session, TABLES[kind], row)
            session.execute(
                delete(TwoVersions).where(TwoVersions.survey == survey, TwoVersions.record == record)
            )
        doubtful = versions_of(merged, survey, kind, record)
        if doubtful:
            session.execute(insert(TwoVersions), doubtful)
    for kind, new_rows in inserts.items():
        session.execute(insert(TABLES[kind]), new_rows)


def _update(session: AnySession, table: Any, row: Mapping[str, Any]) -> None:
    session.execute(
        update(table).where(table.c.survey == row["survey"], table.c.record == row["record"]).values(**row)
    )
