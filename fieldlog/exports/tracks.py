"""Tracks whole: a ledger entry holds at most 1,000 points, so long tracks come in parts."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from datetime import datetime

from fieldlog.exports.rows import Row
from fieldlog.sheet.times import read_time


def whole_tracks(rows: Iterable[Row]) -> Iterator[Row]:
    """Tracks with the points of all their parts; record and provenance are the first part's.

    `rows` must give parts in the order in which their devices wrote them. A part goes on the one
    before it where name, crew and device are the same and its number is the next. Crossed-out parts
    are left out.
    """
    whole: Row | None = None
    for row in rows:
        if row["crossed_out"]:
            continue
        if whole is not None and _goes_on(whole, row):
            whole["points"] = whole["points"] + row["points"]
            whole["part"] = row["part"]
            continue
        if whole is not None:
            yield whole
        whole = dict(row)
    if whole is not None:
        yield whole


def _goes_on(whole: Row, row: Row) -> bool:
    same = all(whole[name] == row[name] for name in ("name", "crew", "made_on"))
    return same and whole["part"] is not None and row["part"] == whole["part"] + 1


def point_time(when: str | None) -> datetime | None:
    """A point's time; None where it has none, or a device wrote one that cannot be read."""
    try:
        return read_time(when) if when else None
    except ValueError:
        return None
