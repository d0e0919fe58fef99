"""The survey as GPX 1.1 for a handheld: sites and observations as waypoints, and tracks.

A waypoint's `type` is site or observation. GPX has no place without coordinates: what has none is
left out, and so is what is crossed out. A track that came in parts is one track again.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from datetime import datetime
from itertools import chain
from pathlib import Path
from typing import Any, Final

from gpxpy.gpx import GPX, GPXTrack, GPXTrackPoint, GPXTrackSegment, GPXWaypoint

from fieldlog import __version__
from fieldlog.exports.columns import Column, columns_of
from fieldlog.exports.csv_file import cell
from fieldlog.exports.rows import Row, SurveyRows
from fieldlog.exports.tracks import point_time, whole_tracks
from fieldlog.sheet.fields import ABSENCES, absent_column
from fieldlog.sheet.vocabulary import label_of

VERSION: Final = "1.1"
SITE, OBSERVATION = "site", "observation"
"""What the waypoints' `type` says."""

_NO_XML: Final = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
_NOT_TOLD: Final = frozenset({"site", "lat_deg", "lon_deg", "altitude_m", "observed_at", "name"})
"""Fields that the waypoint holds in elements of its own."""


def write_gpx(rows: SurveyRows, target: Path) -> None:
    """Write the waypoints, then the tracks."""
    gpx = GPX()
    gpx.creator = f"Ergbook {__version__}"
    gpx.name = xml_text(rows.survey["name"])
    gpx.waypoints.extend(chain(_sites(rows), _observations(rows)))
    gpx.tracks.extend(_track(row) for row in whole_tracks(rows.stream("track")))
    target.write_text(gpx.to_xml(VERSION), encoding="utf-8", newline="\n")


def xml_text(value: str) -> str:
    """Text without the characters that XML 1.0 cannot hold."""
    return _NO_XML.sub("\ufffd", value)


def _sites(rows: SurveyRows) -> Iterator[GPXWaypoint]:
    for row in rows.stream("site"):
        if not row["crossed_out"]:
            yield _waypoint(row, SITE, row["name"], None)


def _observations(rows: SurveyRows) -> Iterator[GPXWaypoint]:
    for row in rows.stream("observation"):
        if row["lat_deg"] is None or row["lon_deg"] is None or row["crossed_out"]:
            continue
        dune = "" if row["bedform"] is None else f" dune {row['bedform']}"
        yield _waypoint(row, OBSERVATION, f"{row['site_name'] or row['site']}{dune}", row["observed_at"])


def _waypoint(row: Row, kind: str, name: str, when: datetime | None) -> GPXWaypoint:
    return GPXWaypoint(
        latitude=row["lat_deg"], longitude=row["lon_deg"], elevation=row.get("altitude_m"), time=when,
        name=xml_text(name), description=xml_text("; ".join(_told(kind, row))), comment=row["record"], type=kind,
    )


def _told(kind: str, row: Row) -> Iterator[str]:
    """Every field that says something, with its label and unit."""
    for column in columns_of(kind):
        if column.source is None or column.name in _NOT_TOLD:
            continue
        absent = row.get(absent_column(column.name))
        if absent:
            yield f"{column.label}: {ABSENCES.get(absent, absent)}"
        elif row[column.name] not in (None, ""):
            yield f"{column.label}: {_value(column, row[column.name])} {column.unit}".rstrip()


def _value(column: Column, value: Any) -> Any:
    if column.vocabulary:
        return label_of(column.vocabulary, value)
    return f"{value:.10g}" if isinstance(value, float) else value if column.type == "text" else cell(column, value)


def _track(row: Row) -> GPXTrack:
    track = GPXTrack(name=xml_text(row["name"]), description=xml_text(row["crew_name"] or "") or None)
    points = [
        GPXTrackPoint(latitude=lat, longitude=lon, elevation=elevation, time=point_time(when))
        for lat, lon, elevation, when in row["points"]
    ]
    track.segments.append(GPXTrackSegment(points))
    return track
