"""What was saved and what its author had seen: version vectors, apart from the code under test."""

from __future__ import annotations

import json
from collections import defaultdict
from dataclasses import dataclass, field
from typing import Any


@dataclass
class Saved:
    """One entry: its values, and the names of everything of its record that its author had seen."""

    record: str
    values: dict[str, Any]
    seen: frozenset[str]
    text: str


@dataclass
class Oracle:
    saved: dict[str, Saved] = field(default_factory=dict)

    def note(self, name: str, record: str, values: dict[str, Any], seen: frozenset[str], text: str) -> None:
        self.saved[name] = Saved(record, values, seen, text)

    def two_versions(self, kept: set[str]) -> set[tuple[str, str]]:
        """(record, field) of every field with several values that nobody has chosen between, of the entries `kept`."""
        by_record: dict[str, dict[str, Saved]] = defaultdict(dict)
        for name in kept & set(self.saved):
            by_record[self.saved[name].record][name] = self.saved[name]
        return {(record, f) for record, entries in by_record.items() for f in _open(entries)}


def _open(entries: dict[str, Saved]) -> set[str]:
    live: dict[str, dict[str, Any]] = defaultdict(dict)
    for name, one in entries.items():
        for f, value in one.values.items():
            if not any(f in other.values and name in other.seen for other in entries.values()):
                live[f][name] = value
    found = {f for f, values in live.items() if len({json.dumps(v, sort_keys=True) for v in values.values()}) > 1}
    crosses = [name for name, value in live.get("crossed_out", {}).items() if value]
    edits = {name for f, values in live.items() if f != "crossed_out" for name in values}
    for cross in crosses:
        for edit in edits - {cross}:
            if edit not in entries[cross].seen and cross not in entries[edit].seen:
                found.add("crossed_out")
    return found
