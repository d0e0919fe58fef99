"""Entries from short cases, and random histories of one record on several devices."""

from __future__ import annotations

import json
import random
from datetime import datetime
from typing import Any

from fieldlog.ledger.entry import Entry
from fieldlog.ledger.merge import Merged, merge
from fieldlog.ledger.names import entry_name, split_name
from fieldlog.ledger.project import project
from fieldlog.sheet.times import wire_time

DEVICES = ("0" * 15, "1" * 15, "a" * 15, "f" + "z" * 14)

VALUES: dict[str, tuple[Any, ...]] = {
    "note": ("steep", "crête", "", None, "砂 \U0001f3dc"),
    "crest_read_deg": (0, 44.5, 359.9, {"absent": "none_here"}, {"absent": "not_measurable"}, None),
    "slip_face_read_deg": (12, 300.25, {"absent": "none_here"}, None),
    "declination_deg": (-11.25, 0.5, 2, None),
    "north": ("magnetic", "true", "grid", None),
    "transcribed": (True, False),
    "crossed_out": ("wrong dune", "", None),
    "unheard_of": ({"b": [1, {"d": 2, "c": None}], "a": 0.1}, {"a": 0.1, "b": [1, {"c": None, "d": 2}]}, "toString"),
    "constructor": (1, 2),
}


def entry_of(case: dict[str, Any]) -> Entry:
    """The entry of a short case: its name, `hlc` in milliseconds, and what the text says."""
    device, n = split_name(case["name"])
    said = {key: value for key, value in case.items() if key not in ("name", "hlc", "kind", "offset")}
    body = {
        "v": 0, "app": "0.1.0", "by": entry_name(DEVICES[0], 1), "survey": "0" * 10, "kind": case.get("kind", "site"),
        **said, "hlc": f"{case['hlc']:012x}.0000", "offset": case.get("offset"), "made_at": "2026-03-04T05:06:07.123Z",
    }
    return Entry(device, n, json.dumps(body, ensure_ascii=False))


def wire(entries: list[Entry]) -> list[dict[str, Any]]:
    """The entries as they travel to the other language."""
    return [{"device": entry.device, "n": entry.n, "text": entry.text} for entry in entries]


def added_up(merged: Merged) -> dict[str, Any]:
    """A merged record and its row as plain JSON values, as tests/ledger/added_up.js gives them."""
    row = project(merged) if merged.created else None
    return {
        "created": merged.created.name if merged.created else None,
        "values": merged.values,
        "heads": {field: list(names) for field, names in merged.heads.items()},
        "frontier": list(merged.frontier),
        "two_versions": {
            field: [{"entry": version.entry, "value": version.value} for version in versions]
            for field, versions in merged.two_versions.items()
        },
        "row": row and {
            field: wire_time(value) if isinstance(value, datetime) else value for field, value in row.items()
        },
    }


def random_history(seed: int) -> list[Entry]:
    """An observation created by one device, then changed by up to four that now and then meet.

    Clocks are up to a year off. Entries come back shuffled; one time in ten the creating entry is
    missing, as when a page of changes ends before it.
    """
    source = random.Random(seed)
    clocks = {device: source.randrange(1_700_000_000_000, 1_730_000_000_000) for device in DEVICES}
    first = entry_of({
        "name": entry_name(DEVICES[0], 1), "hlc": clocks[DEVICES[0]], "kind": "observation",
        "set": {"site": entry_name(DEVICES[1], 1), "observed_at": "2026-03-04T05:06:07Z", **_values(source)},
    })
    counters = dict.fromkeys(DEVICES, 1)
    seen = {device: [first] for device in DEVICES}
    for _ in range(source.randrange(9)):
        device = source.choice(DEVICES)
        if source.random() < 0.4:
            other = source.choice(DEVICES)
            known = {entry.name for entry in seen[device]}
            seen[device] += [entry for entry in seen[other] if entry.name not in known]
        merged = merge(seen[device])
        values = _values(source)
        counters[device] += 1
        clocks[device] += source.choice((0, 1, 5_000))
        seen[device].append(entry_of({
            "name": entry_name(device, counters[device]), "hlc": clocks[device], "kind": "observation", "set": values,
            "record": first.name, "over": {field: list(merged.heads.get(field, ())) for field in values},
            "saw": list(merged.frontier),
        }))
    everything = list({entry.name: entry for entries in seen.values() for entry in entries}.values())
    if len(everything) > 1 and source.random() < 0.1:
        everything.remove(first)
    source.shuffle(everything)
    return everything


def _values(source: random.Random) -> dict[str, Any]:
    fields = source.sample(sorted(VALUES), source.randrange(1, 4))
    return {field: source.choice(VALUES[field]) for field in fields}
