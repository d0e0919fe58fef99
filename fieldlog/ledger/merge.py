"""What the entries of one record add up to, whatever the order in which they arrived.

Merging goes by what the editor had seen, never by a clock: the heads of a field are its entries
that no other entry lists in `over`. One head, or several with one value: that is the value.
Several values are two versions, kept until a person chooses; meanwhile the highest (hlc, device)
is shown as provisional. A standing cross out and a head of another field that did not see each
other are two versions too. Mirrored in static/js/ledger/merge.js.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from fieldlog.ledger.entry import Entry

CROSSED_OUT = "crossed_out"


@dataclass(frozen=True)
class Version:
    """One of several values of a field: the entry that said it, and the value."""

    entry: str
    value: Any


@dataclass(frozen=True)
class Merged:
    """A record: its creating entry (None while that has not arrived), values and open versions.

    `heads` holds the heads of every field, `frontier` the entries that no other has seen: what an
    editor lists in `over` and `saw`. `two_versions` maps a field to its versions, highest first.
    `offsets_ms` is what the entry whose value of a field is shown knew of its device's clock.
    """

    created: Entry | None
    values: dict[str, Any]
    heads: dict[str, tuple[str, ...]]
    frontier: tuple[str, ...]
    two_versions: dict[str, tuple[Version, ...]]
    offsets_ms: dict[str, int | None]


def merge(entries: Iterable[Entry]) -> Merged:
    """Merge all entries of one record; the answer does not depend on their order."""
    by_name = {entry.name: entry for entry in entries}
    ranked = sorted(by_name.values(), key=lambda entry: entry.order, reverse=True)
    heads = _heads(ranked)
    values = {field: rows[0].values[field] for field, rows in heads.items()}
    two_versions = {
        field: tuple(Version(row.name, row.values[field]) for row in rows)
        for field, rows in heads.items()
        if len({_canonical(row.values[field]) for row in rows}) > 1
    }
    unseen = _cross_out_against_edits(heads, by_name)
    if unseen:
        two_versions[CROSSED_OUT] = unseen
        values[CROSSED_OUT] = unseen[0].value
    seen = {name for entry in ranked for name in entry.saw}
    return Merged(
        created=next((entry for entry in ranked if entry.creates), None),
        values=values,
        heads={field: tuple(row.name for row in rows) for field, rows in heads.items()},
        frontier=tuple(sorted(name for name in by_name if name not in seen)),
        two_versions=two_versions,
        offsets_ms={field: rows[0].body.get("offset") for field, rows in heads.items()},
    )


def _heads(ranked: list[Entry]) -> dict[str, list[Entry]]:
    """Field -> its heads, highest (hlc, device) first."""
    replaced = {(field, name) for entry in ranked for field, over in entry.over.items() for name in over}
    heads: dict[str, list[Entry]] = {}
    for entry in ranked:
        for field in entry.values:
            if (field, entry.name) not in replaced:
                heads.setdefault(field, []).append(entry)
    return heads


def _cross_out_against_edits(heads: dict[str, list[Entry]], by_name: dict[str, Entry]) -> tuple[Version, ...]:
    """Standing cross outs and the edits that did not see them, highest first; () where none."""
    standing = [row for row in heads.get(CROSSED_OUT, ()) if row.values[CROSSED_OUT]]
    if not standing or len(by_name) < 3:
        return ()
    edits = {row.name: row for field, rows in heads.items() if field != CROSSED_OUT for row in rows}
    open_rows: dict[str, Entry] = {}
    for cross in standing:
        below_cross = _ancestors(cross, by_name)
        for edit in edits.values():
            if edit.name in below_cross or edit is cross:
                continue
            if cross.name not in _ancestors(edit, by_name):
                open_rows[cross.name] = cross
                open_rows[edit.name] = edit
    ranked = sorted(open_rows.values(), key=lambda entry: entry.order, reverse=True)
    return tuple(Version(row.name, row.values.get(CROSSED_OUT)) for row in ranked)


def _ancestors(entry: Entry, by_name: dict[str, Entry]) -> set[str]:
    """All entries that `entry` had seen, directly or through what those had seen."""
    seen: set[str] = set()
    waiting = list(entry.saw)
    while waiting:
        name = waiting.pop()
        if name in seen:
            continue
        seen.add(name)
        if name in by_name:
            waiting.extend(by_name[name].saw)
    return seen


def _canonical(value: Any) -> str:
    """One text for one value, in both languages: keys sorted, whole numbers without a point."""
    if isinstance(value, float) and value.is_integer():
        value = int(value)
    return json.dumps(value, sort_keys=True, ensure_ascii=False, separators=(",", ":"))
