"""GPX 1.0 and 1.1 (Topografix, GPX 1.1 Schema Documentation) of any device: waypoints and tracks.

A file must not bring a document type: that is where entities come from, which can be made to
grow without end. A time without a zone is UTC, as the standard says.
"""

from __future__ import annotations

import io
import math
import re
from datetime import UTC, datetime
from typing import Any, Final
from xml.etree import ElementTree as ET

import gpxpy
from gpxpy.gpx import GPX, GPXTrack, GPXTrackPoint, GPXWaypoint

from fieldlog.imports.found import Found, FoundTrack, ImportFileError, RefusedRow
from fieldlog.science.finding import counted
from fieldlog.sheet.times import wire_time

BYTES_MAX: Final = 16 * 1024 * 1024
DECIMALS: Final = 7
"""Of a degree: about a centimetre."""

NOT_SITES: Final = frozenset({"observation"})
"""Types of waypoints that an export of ours writes and that are no sites."""

_DECLARATION: Final = re.compile(r"\s*<\?xml[^>]*\?>")
_ENCODING: Final = re.compile(rb"^\s*<\?xml[^>]*encoding=[\"']([A-Za-z0-9._-]+)[\"']")
_ENCODINGS: Final = re.compile(r"utf-?8|utf-?16(le|be)?|us-ascii|iso-8859-\d+|windows-125\d", re.IGNORECASE)
_DOCUMENT_TYPE: Final = re.compile(r"<!(DOCTYPE|ENTITY)", re.IGNORECASE)


def read_gpx(data: bytes) -> Found:
    """Waypoints as sites, track segments as tracks.

    ImportFileError where the file is too large, not XML, not GPX, or holds nothing to import. A
    waypoint or track point at an impossible place is refused by itself; points without a time that
    can be read are kept and counted.
    """
    if len(data) > BYTES_MAX:
        raise ImportFileError(
            f"the file is larger than {BYTES_MAX // 1024 // 1024} MB", "GPX", "Export fewer tracks at a time"
        )
    gpx = _parse(_text(data))
    found = Found()
    for number, waypoint in enumerate(gpx.waypoints, start=1):
        _waypoint(found, number, waypoint)
    skipped = sum((w.type or "").strip().lower() in NOT_SITES for w in gpx.waypoints)
    if skipped:
        found.notes.append(f"Left out: {counted(skipped, 'waypoint')} of an exported survey's observations, which are no sites.")
    for number, track in enumerate(gpx.tracks, start=1):
        _track(found, number, track)
    if gpx.routes:
        found.notes.append(f"Left out: {counted(len(gpx.routes), 'route')}. A route is a plan, not where anybody went.")
    if not (gpx.waypoints or any(track.segments for track in gpx.tracks)):
        raise ImportFileError("there are no waypoints and no tracks in it", "GPX", "Choose another file")
    return found


def _text(data: bytes) -> str:
    """The file's text without its XML declaration, by its byte order mark or declared encoding."""
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        encoding = "utf-16"
    else:
        declared = _ENCODING.match(data.removeprefix(b"\xef\xbb\xbf"))
        encoding = declared[1].decode("ascii") if declared else "utf-8"
    if _ENCODINGS.fullmatch(encoding) is None:
        raise ImportFileError(f"the encoding {encoding} is not read here", "GPX", "Save it as UTF-8")
    try:
        text = data.decode("utf-8-sig" if encoding.lower() in ("utf-8", "utf8") else encoding)
    except (UnicodeError, LookupError) as error:
        raise ImportFileError(f"the file is no text in {encoding}", "GPX", "Save it as UTF-8") from error
    return _DECLARATION.sub("", text, count=1)


def _parse(text: str) -> GPX:
    if _DOCUMENT_TYPE.search(text):
        raise ImportFileError(
            "the file brings a document type of its own", "GPX", "GPX needs none: take the <!DOCTYPE ...> out"
        )
    try:
        # Without a document type there are no entities to expand.
        _, root = next(ET.iterparse(io.BytesIO(text.encode()), events=("start",)))  # noqa: S314
    except (ET.ParseError, StopIteration) as error:
        raise ImportFileError(f"the file is not XML ({error})", "GPX", "Export it again as GPX") from error
    if root.tag.rpartition("}")[2] != "gpx":
        raise ImportFileError(f"the file is no GPX: it begins with <{root.tag}>", "GPX", "Export it again as GPX")
    try:
        return gpxpy.parse(text)
    except gpxpy.gpx.GPXXMLSyntaxException as error:
        raise ImportFileError(f"the file is not whole XML ({error})", "GPX", "Export or copy it again") from error
    except (gpxpy.gpx.GPXException, ValueError, TypeError, AttributeError) as error:
        raise ImportFileError(f"the file is not valid GPX ({error})", "GPX", "Export it again as GPX 1.1") from error


def _waypoint(found: Found, number: int, waypoint: GPXWaypoint) -> None:
    if (waypoint.type or "").strip().lower() in NOT_SITES:
        return
    name = (waypoint.name or "").strip() or f"Waypoint {number}"
    where = f"waypoint {number} ({name})"
    if not possible(waypoint.latitude, waypoint.longitude):
        found.refused.append(RefusedRow(where, impossible(waypoint.latitude, waypoint.longitude)))
        return
    note = (waypoint.description or waypoint.comment or "").strip()
    values = {
        "name": name, "lat_deg": round(waypoint.latitude, DECIMALS), "lon_deg": round(waypoint.longitude, DECIMALS),
        **({"note": note} if note else {}),
    }
    found.sites.append((where, values))


def _track(found: Found, number: int, track: GPXTrack) -> None:
    name = (track.name or "").strip() or f"Track {number}"
    segments = [segment for segment in track.segments if segment.points]
    for index, segment in enumerate(segments, start=1):
        own_name = name if len(segments) == 1 else f"{name}, segment {index}"
        good = [point for point in segment.points if possible(point.latitude, point.longitude)]
        if len(good) < len(segment.points):
            bad = next(p for p in segment.points if not possible(p.latitude, p.longitude))
            count = len(segment.points) - len(good)
            found.refused.append(
                RefusedRow(f"track {own_name}", f"left out {counted(count, 'point')}: {impossible(bad.latitude, bad.longitude)}")
            )
        if not good:
            continue
        points = [_point(point) for point in good]
        untimed = sum(point[3] is None for point in points)
        if untimed:
            found.notes.append(
                f"Track {own_name}: no time that can be read in {untimed} of {counted(len(points), 'point')}; "
                "nothing can be placed by them."
            )
        found.tracks.append(FoundTrack(own_name, points))


def _point(point: GPXTrackPoint) -> list[Any]:
    altitude = point.elevation
    kept = altitude if altitude is not None and math.isfinite(altitude) else None
    return [round(point.latitude, DECIMALS), round(point.longitude, DECIMALS), kept, _time(point.time)]


def _time(when: datetime | None) -> str | None:
    if when is None:
        return None
    try:
        return wire_time(when.replace(tzinfo=UTC) if when.tzinfo is None else when)
    except (OverflowError, ValueError):
        return None


def possible(lat: float, lon: float) -> bool:
    """Whether these are a place on Earth; NaN is none."""
    return -90 <= lat <= 90 and -180 <= lon <= 180


def impossible(lat: float, lon: float) -> str:
    """What is wrong with a place."""
    return f"latitude {lat:g}, longitude {lon:g} is no place on Earth"
