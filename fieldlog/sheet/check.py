"""What the checks ask about observations. They raise questions, never block.

Pure over rows with the sheet's column names (times as datetimes or as the wire writes them).
Thresholds are common practice of the trade, no source, unless said; each can be set. Mirrored in
static/js/sheet/check.js; tests/vectors/check.json holds both to the same questions.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping
from datetime import datetime
from itertools import pairwise
from typing import Any, Final, TypeVar

from fieldlog.science.nearby import moved, way
from fieldlog.sheet.crowd import mean_and_length, means_of_others, signed_turn, strays
from fieldlog.sheet.north_check import north_questions
from fieldlog.sheet.question import Question, Thresholds, whole
from fieldlog.sheet.sample import counts, device, dune, samples
from fieldlog.sheet.times import read_time

Row = Mapping[str, Any]
T = TypeVar("T")

DEFAULTS: Final = Thresholds()

TURNED_FACES: Final = frozenset({"secondary", "reversed_cap"})
"""Faces that are declared to look another way."""

MEASURES: Final = (("slip_face_deg", "Slip face", 360.0), ("crest_deg", "Crest", 180.0))


def questions(
    rows: Iterable[Row],
    *,
    sites: Iterable[Row] = (),
    thresholds: Thresholds = DEFAULTS,
    time_zone: str = "UTC",
) -> list[Question]:
    """All questions about `rows`, by the order of their records in `rows`.

    `rows`: a survey's observations; crossed-out ones are passed over. `sites`: the sites' rows, for
    the check of places. `time_zone`: the survey's, an IANA name, for what is done by day.
    """
    standing = [row for row in rows if not row.get("crossed_out")]
    by_site = {str(site["record"]): site for site in sites}
    found: list[Question] = []
    for row in standing:
        found.extend(_of_one(row, by_site.get(str(row.get("site"))), thresholds))
    for members in _by(standing, lambda row: row.get("site")):
        found.extend(_against_others(members, thresholds))
    found.extend(_repeats(standing, thresholds))
    found.extend(north_questions(standing, thresholds=thresholds, time_zone=time_zone))
    found.extend(_out_of_order(standing, thresholds))
    place = {str(row["record"]): i for i, row in enumerate(standing)}
    return sorted(found, key=lambda question: place[question.record])


def _of_one(row: Row, site: Row | None, thresholds: Thresholds) -> Iterator[Question]:
    """What one observation asks by itself."""
    record = str(row["record"])
    face = row.get("slip_face_deg")
    edge = "brink" if row.get("brink_deg") is not None else "crest"
    axis = row.get(f"{edge}_deg")
    if face is not None and axis is not None and row.get("dune_type") != "star":
        off = abs(abs(signed_turn(axis, face, 180.0)) - 90.0)
        if off > thresholds.square_deg:
            yield Question("not_square", record, (), (
                f"The slip face ({whole(face)} deg) is {whole(off)} deg off square to its {edge} "
                f"({whole(axis, 180)} deg). Is one of the two misread?"))
    dip = row.get("slip_face_dip_deg")
    if dip is not None and dip > thresholds.steepest_deg:
        yield Question("dip", record, (), (
            f"A dip of {dip:g} deg is steeper than dry sand rests ({thresholds.steepest_deg:g} deg). Misread?"))
    if dip is not None and dip < thresholds.gentlest_deg:
        yield Question("dip", record, (), (
            f"A dip of {dip:g} deg is gentle for a slip face ({thresholds.gentlest_deg:g} deg). Is it one?"))
    if site is not None:
        yield from _far(row, site, thresholds)


def _far(row: Row, site: Row, thresholds: Thresholds) -> Iterator[Question]:
    places = (row.get("lat_deg"), row.get("lon_deg"), site.get("lat_deg"), site.get("lon_deg"))
    radius = site.get("radius_m")
    if radius is None or any(value is None for value in places):
        return
    lat, lon, site_lat, site_lon = (float(value) for value in places if value is not None)
    bearing, length = row.get("sighted_bearing_deg"), row.get("sighted_distance_m")
    if bearing is not None and length is not None:
        lat, lon = moved(lat, lon, bearing, length)
    distance = way(lat, lon, site_lat, site_lon).distance_m
    if distance > radius + thresholds.accuracies * (row.get("accuracy_m") or 0.0):
        yield Question("far_from_site", str(row["record"]), (), (
            f"This place is {math.floor(distance + 0.5)} m from the middle of {site.get('name') or 'the site'}, "
            f"which reaches {math.floor(radius + 0.5)} m. Is it another site?"))


def _against_others(rows: list[Row], thresholds: Thresholds) -> Iterator[Question]:
    """What the readings of one site ask of each other, sample by sample."""
    for measure, label, period in MEASURES:
        for sample in samples(rows, measure):
            angles = sample.angles
            turned_round: set[int] = set()
            if period == 360.0 and sample.face not in TURNED_FACES and sample.dune_type != "reversing":
                for i in _turned_round(angles, thresholds):
                    turned_round.add(i)
                    others = _without(sample.records, i)
                    mean = mean_and_length(_without(angles, i), period)[0]
                    yield Question("opposed", sample.records[i], others, (
                        f"Slip face {whole(angles[i])} deg looks the other way than {len(others)} others of this site "
                        f"(mean {whole(mean)} deg). Read up the face, or a reversed face?"))
            if len(angles) < thresholds.outlier_readings:
                continue
            for stray in strays(angles, period, thresholds.outlier_spreads):
                angle = angles[stray.position]
                if stray.position not in turned_round:
                    off = abs(signed_turn(stray.crowd_deg, angle, period))
                    yield Question("outlier", sample.records[stray.position], (), (
                        f"{label} {whole(angle, int(period))} deg is {whole(off)} deg from where the nearest others of "
                        f"this site lie ({whole(stray.crowd_deg, int(period))} deg). Misread, or another face?"))


def _turned_round(angles: tuple[float, ...], thresholds: Thresholds) -> Iterator[int]:
    """Positions of slip faces that look the other way than enough others that agree."""
    if len(angles) <= thresholds.opposed_others:
        return
    for i, (mean, length) in enumerate(means_of_others(angles, 360.0)):
        off = 180.0 - abs(signed_turn(mean, angles[i], 360.0))
        if length >= thresholds.opposed_resultant and off <= thresholds.opposed_deg:
            yield i


def _repeats(rows: list[Row], thresholds: Thresholds) -> Iterator[Question]:
    """The same value on the same dune within a minute: saved twice?"""
    timed = [row for row in rows if row.get("observed_at") is not None and counts(row) and not row.get("transcribed")]
    for members in _by(timed, lambda row: (row.get("site"), device(row), dune(row))):
        ordered = sorted(members, key=lambda row: (_time(row), entry_number(row)))
        for i, row in enumerate(ordered):
            for before in reversed(ordered[:i]):
                if (_time(row) - _time(before)).total_seconds() > thresholds.repeat_s:
                    break
                same = _same_value(row, before)
                if same is not None:
                    yield Question("repeated", str(row["record"]), (str(before["record"]),), (
                        f"{same} again on the same dune within {thresholds.repeat_s:g} s. Saved twice?"))
                    break


def _same_value(row: Row, before: Row) -> str | None:
    for name, label in (("slip_face_read_deg", "Slip face"), ("crest_read_deg", "Crest")):
        if row.get(name) is not None and row.get(name) == before.get(name):
            return f"{label} {row[name]:g} deg"
    return None


def _out_of_order(rows: list[Row], thresholds: Thresholds) -> Iterator[Question]:
    """Saved later but observed earlier, on one device: a clock or a typed time that is wrong."""
    timed = [row for row in rows if row.get("observed_at") is not None and not row.get("transcribed")]
    for members in _by(timed, device):
        ordered = sorted(members, key=entry_number)
        for before, row in pairwise(ordered):
            back = (_time(before) - _time(row)).total_seconds()
            if back > thresholds.back_s:
                yield Question("out_of_order", str(row["record"]), (str(before["record"]),), (
                    f"Observed {math.floor(back / 60 + 0.5)} min before the observation that was saved just ahead of "
                    "it. Is the time right?"))


def entry_number(row: Row) -> int:
    """The number of the entry that made the record: its place in what the device said."""
    number = str(row["record"]).rpartition("-")[2]
    return int(number) if number.isdigit() else 0


def _time(row: Row) -> datetime:
    when = row["observed_at"]
    return when if isinstance(when, datetime) else read_time(when)


def _without(values: tuple[T, ...], i: int) -> tuple[T, ...]:
    return values[:i] + values[i + 1 :]


def _by(rows: Iterable[Row], key: Any) -> Iterator[list[Row]]:
    groups: dict[Any, list[Row]] = {}
    for row in rows:
        groups.setdefault(key(row), []).append(row)
    yield from groups.values()
