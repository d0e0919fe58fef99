"""Who said what on which device: the ledger's lines."""

from __future__ import annotations

import itertools
from collections import defaultdict
from collections.abc import Mapping
from datetime import datetime
from typing import Any

from country import APP, BASE, CREW, SURVEY_ID
from fieldwork import day_of

from fieldlog.ledger import clock
from fieldlog.ledger.entry import Entry, write_text
from fieldlog.ledger.merge import merge
from fieldlog.ledger.names import entry_name

_CLOCK_MS = {person.device: person.clock_ms for person in CREW}


class Notebooks:
    """All devices of the survey. Each hands over once a day, in the evening, and then knows what the others said."""

    def __init__(self) -> None:
        self._entries: list[tuple[int, Entry]] = []
        self._of_record: dict[str, list[tuple[int, Entry]]] = defaultdict(list)
        self._stamp: dict[str, str] = {}
        self._number: dict[str, itertools.count[int]] = defaultdict(lambda: itertools.count(1))
        self._first_day: dict[str, int] = {}

    def say(
        self, device: str, by: str | None, kind: str, values: Mapping[str, Any], when: datetime,
        record: str | None = None,
    ) -> str:
        """One entry; the record's id. A change goes over what its device could see that day."""
        day = day_of(when)
        n = next(self._number[device])
        seen = [
            entry for said_on, entry in self._of_record[record or ""]
            if entry.device == device or said_on < day
        ]
        merged = merge(seen)
        last = max([self._stamp.get(device, ""), *(entry.body["hlc"] for entry in seen)])
        self._stamp[device] = clock.tick(last, int(when.timestamp() * 1000))
        knows_clock = self._first_day.setdefault(device, day) < day
        text = write_text(
            app=APP, by=by or entry_name(device, n), survey=SURVEY_ID, kind=kind, values=values,
            hlc=self._stamp[device], made_at=when, record=record,
            over={field: list(merged.heads.get(field, ())) for field in values}, saw=list(merged.frontier),
            offset_ms=_CLOCK_MS.get(device, 0) if knows_clock or device == BASE else None,
        )
        entry = Entry(device, n, text)
        self._entries.append((day, entry))
        self._of_record[entry.record].append((day, entry))
        return entry.record

    def handed_over(self) -> list[Entry]:
        """All entries as base receives them: evening by evening, phone by phone, base's own last."""
        return [
            entry for _, entry in sorted(
                self._entries, key=lambda row: (row[0], row[1].device == BASE, row[1].device, row[1].n)
            )
        ]
