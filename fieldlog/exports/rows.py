"""One stream of typed rows for all formats, drawn wholly from the sheets and the projected tables."""

from __future__ import annotations

import json
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from typing import Any
from zoneinfo import ZoneInfo

from fieldlog import __version__
from fieldlog.exports.columns import columns_of, local_column, name_column
from fieldlog.ledger.names import name_to_uuid
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.times import wire_time

Row = dict[str, Any]


@dataclass(frozen=True)
class Version:
    """One of several values of a field. The first of them stands in the row, provisionally."""

    record: str
    kind: str
    field: str
    entry: str
    value: Any
    stands: bool


@dataclass(frozen=True)
class SurveyRows:
    """A survey as streams of rows.

    `survey` is its row; `names` maps the records of its sites and crew to their names; `versions`
    are its open two versions; `fetch` gives the rows of a projected table by kind, one at a time,
    in an order that does not change.
    """

    survey: Mapping[str, Any]
    names: Mapping[str, str]
    versions: tuple[Version, ...]
    fetch: Callable[[str], Iterable[Mapping[str, Any]]]

    def stream(self, kind: str) -> Iterator[Row]:
        """The rows of one kind with every column of `columns_of(kind)`; times stay aware datetimes."""
        zone = ZoneInfo(self.survey["time_zone"])
        doubtful = _doubtful(self.versions)
        fields = SHEETS[kind].fields
        references = [f.name for f in fields if f.refers_to in ("site", "crew")]
        times = [f.name for f in fields if f.type == "time"]
        wanted = [column.name for column in columns_of(kind)]
        for found in self.fetch(kind):
            row = dict(found)
            row["uuid"] = str(name_to_uuid(row["record"]))
            for name in references:
                row[name_column(name)] = self.names.get(row[name]) if row[name] else None
            for name in times:
                row[local_column(name)] = local_time(row[name], zone)
            row["two_versions"] = doubtful.get(row["record"])
            row["made_by_name"] = self.names.get(row["made_by"])
            row["app_version"] = __version__
            yield {name: row[name] for name in wanted}


def local_time(when: datetime | None, zone: ZoneInfo) -> str | None:
    """A time in a zone, with its offset: 2026-03-04T09:06:07+04:00."""
    return None if when is None else when.astimezone(zone).isoformat(timespec="seconds")


def said(value: Any) -> str:
    """A value as an entry says it, as text."""
    if value is None:
        return "(nothing)"
    if isinstance(value, dict) and "absent" in value:
        return f"({value['absent']})"
    return value if isinstance(value, str) else json.dumps(value, ensure_ascii=False)


def plain(value: Any) -> Any:
    """A typed value as JSON and CSV hold it: times as UTC text, everything else as it is."""
    return wire_time(value) if isinstance(value, datetime) else value


def _doubtful(versions: Iterable[Version]) -> dict[str, str]:
    """Record -> "field: other value | other value; field: ..."."""
    others: dict[str, dict[str, list[str]]] = {}
    for version in versions:
        if not version.stands:
            others.setdefault(version.record, {}).setdefault(version.field, []).append(said(version.value))
    return {
        record: "; ".join(f"{field}: {' | '.join(values)}" for field, values in fields.items())
        for record, fields in others.items()
    }
