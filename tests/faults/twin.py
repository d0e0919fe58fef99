"""A phone at the protocol's level: what it has on its disk, and what it says and hears."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import UTC, datetime, timedelta
from typing import Any

from fieldlog.ledger import clock
from fieldlog.ledger.entry import Entry, write_text
from fieldlog.ledger.merge import Merged, merge
from fieldlog.ledger.names import entry_name

Send = Callable[[str, str, dict[str, Any] | None], "Answer | None"]
"""(method, path, body) -> the answer; None where there was none."""

START = datetime(2026, 7, 8, 5, 0, tzinfo=UTC)


@dataclass(frozen=True)
class Answer:
    status: int
    body: dict[str, Any]


@dataclass
class Twin:
    """Everything here is on the phone's disk: a crash loses only what was under way."""

    survey: str
    device: str
    crew: str
    store: str
    epoch: str
    own: list[str] = field(default_factory=list)
    heard: dict[str, Entry] = field(default_factory=dict)
    problems: dict[int, str] = field(default_factory=dict)
    acked: int = 0
    cursor: int = 0
    hlc: str = ""
    offset_ms: int | None = None
    clock_off: timedelta = timedelta()
    ticks: int = 0

    # What it holds

    def entries(self) -> dict[str, Entry]:
        """Everything known here, by name; what base set aside is no part of any record."""
        mine = (Entry(self.device, n, text) for n, text in enumerate(self.own, start=1) if n not in self.problems)
        return {**self.heard, **{entry.name: entry for entry in mine}}

    def records(self) -> dict[str, list[Entry]]:
        found: dict[str, list[Entry]] = {}
        for entry in self.entries().values():
            if entry.kind == "observation":
                found.setdefault(entry.record, []).append(entry)
        return found

    def merged(self) -> dict[str, Merged]:
        """Record -> what its entries add up to here, of those whose creation is here."""
        return {record: made for record, entries in self.records().items() if (made := merge(entries)).created}

    @property
    def unsent(self) -> int:
        return len(self.own) - self.acked

    # What it says

    def say(self, values: dict[str, Any], *, record: str | None = None) -> str:
        """Save one entry; its name."""
        self.ticks += 1
        now = START + timedelta(seconds=self.ticks) + self.clock_off
        self.hlc = clock.tick(self.hlc, max(0, int(now.timestamp() * 1000)))
        more: dict[str, Any] = {}
        if record is not None:
            made = merge(self.records()[record])
            more = {"record": record, "over": {f: list(made.heads.get(f, ())) for f in values}, "saw": list(made.frontier)}
        self.own.append(
            write_text(
                app="0.1.0", by=self.crew, survey=self.survey, kind="observation", values=values, hlc=self.hlc,
                made_at=now, offset_ms=self.offset_ms, **more,
            )
        )
        return entry_name(self.device, len(self.own))

    def poison(self, site: str) -> None:
        """Something that base cannot keep, as a faulty app would save it."""
        self.say({"site": site, "observed_at": "2026-07-08T05:06:07Z", "north": "true", "crest_read_deg": 400})
        self.problems[len(self.own)] = "not yet told"

    # What it does with a line

    def batch(self, size: int) -> dict[str, Any]:
        return {
            "v": 0, "device": self.device, "store": self.store, "epoch": self.epoch, "first": self.acked + 1, "app": "0.1.0",
            "entries": self.own[self.acked : self.acked + size],
        }

    def push(self, send: Send, size: int) -> bool:
        """Hand over up to `size` entries; whether an answer was written down."""
        if not self.unsent:
            return True
        answer = send("POST", "entries", self.batch(size))
        if answer is None:
            return False
        return self.take_answer(answer, send)

    def take_answer(self, answer: Answer, send: Send) -> bool:
        if answer.status == 409 and "received_through" in answer.body:
            self.acked = answer.body["received_through"]
        elif answer.status == 409:
            return self.ask_anew(send)
        elif answer.status == 200:
            for result in singly(answer.body["results"]):
                assert result["status"] != "forked", result
                if result["status"] == "set_aside":
                    self.problems[result["n"]] = result["problem"]
                else:
                    assert self.problems.pop(result["n"], None) is None
            self.acked = max(self.acked, answer.body["received_through"])
        else:
            return False
        return True

    def ask_anew(self, send: Send) -> bool:
        """The store went back in time: everything is offered again, everything is read again."""
        answer = send("GET", "/api/v1/health", None)
        if answer is None:
            return False
        self.new_epoch(answer.body["epoch"])
        return True

    def new_epoch(self, epoch: str) -> None:
        self.epoch, self.acked, self.cursor = epoch, 0, 0

    def pull(self, send: Send, size: int) -> bool:
        """Read up to `size` changes; whether an answer was written down."""
        answer = send("GET", f"changes?after={self.cursor}&limit={size}", None)
        if answer is None or answer.status != 200:
            return False
        if answer.body["epoch"] != self.epoch:
            self.new_epoch(answer.body["epoch"])
            return True
        entries = singly(answer.body["entries"])
        assert [entry["seq"] for entry in entries] == list(range(self.cursor + 1, self.cursor + 1 + len(entries))), "I4: a page of changes has a gap"
        for entry in entries:
            if "text" in entry:
                heard = Entry(entry["device"], entry["n"], entry["text"])
                before = self.heard.get(heard.name)
                assert before is None or before.text == heard.text, "an entry changed"
                self.heard[heard.name] = heard
            else:
                assert entry["device"] == self.device
        self.cursor = answer.body["through"]
        return True

    def learn_offset(self) -> None:
        """As after an exchange: base's clock less the own."""
        self.offset_ms = -int(self.clock_off.total_seconds() * 1000)


def singly(rows: list[dict[str, Any]]) -> list[dict[str, Any]]:
    """Rows said once with how many follow on, each by itself."""
    return [
        {**{key: value for key, value in row.items() if key != "count"}, "n": row["n"] + i, **({"seq": row["seq"] + i} if "seq" in row else {})}
        for row in rows for i in range(row.get("count", 1))
    ]


def standing(made: Merged) -> str:
    """The values and versions of a record, to be compared between replicas."""
    versions = {name: [v.entry for v in found] for name, found in made.two_versions.items()}
    return json.dumps([made.values, versions], sort_keys=True, ensure_ascii=False)
