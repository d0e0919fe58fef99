"""True and magnetic mixed up, by instrument and day. Mirrored in static/js/sheet/north_check.js.

Two ways to see it, both only where the declination is large enough to matter: one instrument marked
both magnetic and true within a day; or an instrument's day whose readings lie off those of others at
the same sites by about the declination, in the direction that a wrong mark makes.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from datetime import datetime
from typing import Any
from zoneinfo import ZoneInfo

from fieldlog.sheet.crowd import MAD_TO_SD, mean_and_length, median, signed_turn
from fieldlog.sheet.question import Question, Thresholds, whole
from fieldlog.sheet.sample import counts, device, samples
from fieldlog.sheet.times import read_time

Row = Mapping[str, Any]

TRUE_NORTHS = ("true", "set")

MEDIAN_ERROR = 1.2533
"""Standard error of a median in those of a mean, for a normal distribution: sqrt(pi/2)."""


def north_questions(rows: Iterable[Row], *, thresholds: Thresholds, time_zone: str) -> Iterator[Question]:
    """Questions about each instrument's day; one question names all the observations that it concerns."""
    read = [row for row in rows if counts(row) and row.get("north") in ("magnetic", *TRUE_NORTHS)]
    days: dict[tuple[str, str], list[Row]] = {}
    for row in read:
        if row.get("observed_at") is not None:
            days.setdefault((_instrument(row), local_day(row["observed_at"], time_zone)), []).append(row)
    for (_, day), members in days.items():
        declination = _declination(members)
        step = max((row.get("reading_step_deg") or 1.0 for row in members), default=1.0)
        if declination is None or abs(declination) < max(
            thresholds.declination_deg, thresholds.declination_steps * step
        ):
            continue
        magnetic = [row for row in members if row["north"] == "magnetic"]
        true = [row for row in members if row["north"] in TRUE_NORTHS]
        name = f"Instrument {members[0]['instrument']}" if members[0].get("instrument") else "This phone's instrument"
        if magnetic and true:
            fewer = true if len(true) <= len(magnetic) else magnetic
            yield _about(fewer, "mixed_north", (
                f"{name} is marked magnetic {_times(len(magnetic))} and true {_times(len(true))} on {day}; the declination "
                f"is {_signed(declination)} deg. Which is right?"))
            continue
        marked_magnetic = bool(magnetic)
        expected = declination if marked_magnetic else -declination
        found = _offset(members, read, thresholds)
        if found is not None and _explains(expected, found, thresholds):
            n = len(found[2])
            marked, other = ("magnetic", "true") if marked_magnetic else ("true", "magnetic")
            yield _about(found[2], "wrong_north", (
                f"{name} on {day}: {n} readings lie {_signed(found[0])} deg off the others of their sites, about the "
                f"declination ({_signed(declination)} deg). Was it read from {other} north though marked {marked}?"))


def _offset(members: list[Row], read: list[Row], thresholds: Thresholds) -> tuple[float, float, list[Row]] | None:
    """Median offset of an instrument's day from the others at its sites, its standard error, and the
    rows that show it; None where there is too little to compare."""
    own = {row["record"] for row in members}
    offsets: list[float] = []
    shown: dict[str, Row] = {}
    others_n = 0
    by_record = {row["record"]: row for row in members}
    sites = list(dict.fromkeys(row.get("site") for row in members))
    for measure, period in (("slip_face_deg", 360.0), ("crest_deg", 180.0)):
        for site in sites:
            for sample in samples([row for row in read if row.get("site") == site], measure):
                others = [a for a, r in zip(sample.angles, sample.records, strict=True) if r not in own]
                if len(others) < thresholds.opposed_others:
                    continue
                mean, length = mean_and_length(others, period)
                if length < thresholds.opposed_resultant:
                    continue
                mine = [(a, r) for a, r in zip(sample.angles, sample.records, strict=True) if r in own]
                offsets.extend(signed_turn(mean, angle, period) for angle, _ in mine)
                shown.update((record, by_record[record]) for _, record in mine)
                others_n += len(others) if mine else 0
    if len(offsets) < thresholds.north_readings:
        return None
    middle = median(offsets)
    sd = MAD_TO_SD * median([abs(offset - middle) for offset in offsets])
    error = MEDIAN_ERROR * sd * math.sqrt(1 / len(offsets) + 1 / others_n)
    return middle, error, list(shown.values())


def _explains(expected: float, found: tuple[float, float, list[Row]], thresholds: Thresholds) -> bool:
    offset, error, _ = found
    return abs(offset - expected) <= abs(expected) / 3 and abs(offset) >= thresholds.north_errors * error


def _about(rows: list[Row], code: str, sentence: str) -> Question:
    records = [str(row["record"]) for row in rows]
    return Question(code, records[0], tuple(records[1:]), sentence)


def _declination(rows: list[Row]) -> float | None:
    known = [float(row["declination_deg"]) for row in rows if row.get("declination_deg") is not None]
    return median(known) if known else None


def _instrument(row: Row) -> str:
    return str(row.get("instrument") or device(row))


def _times(n: int) -> str:
    return "once" if n == 1 else f"{n} times"


def _signed(angle_deg: float) -> str:
    return f"{'-' if angle_deg < 0 else '+'}{whole(abs(angle_deg))}"


def local_day(when: datetime | str, time_zone: str) -> str:
    """The date at a time in a zone, as 2026-03-04."""
    moment = when if isinstance(when, datetime) else read_time(when)
    return moment.astimezone(ZoneInfo(time_zone)).date().isoformat()
