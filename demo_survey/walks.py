"""GPX 1.1 files: two walked days, and the sites as waypoints."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime, timedelta
from xml.sax.saxutils import escape

import numpy as np

from fieldlog.sheet.times import wire_time

METRES_PER_DEGREE = 111_320.0
POINT_EVERY_S = 30
HEAD = (
    '<?xml version="1.0" encoding="UTF-8"?>\n'
    '<gpx version="1.1" creator="invented for the demonstration survey" xmlns="http://www.topografix.com/GPX/1/1">\n'
)

Stop = tuple[float, float, float, datetime]
"""Latitude, longitude, altitude and time of a place where someone stood."""
Point = list[object]
"""[lat, lon, altitude, time], as a track's entry holds it."""


def moved(lat: float, lon: float, east_m: float, north_m: float) -> tuple[float, float]:
    """The place some metres away; good enough over the size of a site."""
    return lat + north_m / METRES_PER_DEGREE, lon + east_m / (METRES_PER_DEGREE * float(np.cos(np.radians(lat))))


def walk(stops: Sequence[Stop], random: np.random.RandomState) -> list[Point]:
    """Points every half minute from ten minutes before the first stop to ten after the last."""
    first, last = stops[0], stops[-1]
    out = [
        (*moved(first[0], first[1], -240, -210), first[2] - 4, first[3] - timedelta(minutes=10)),
        *stops,
        (*moved(last[0], last[1], -160, -300), last[2] - 6, last[3] + timedelta(minutes=10)),
    ]
    times = np.array([stop[3].timestamp() for stop in out])
    grid = np.arange(times[0], times[-1], POINT_EVERY_S)
    places = np.array([stop[:3] for stop in out])
    lat, lon, altitude = (np.interp(grid, times, places[:, axis]) for axis in range(3))
    noise = random.normal(0, 1.5 / METRES_PER_DEGREE, (2, len(grid)))
    return [
        [round(float(a), 6), round(float(b), 6), round(float(h), 1),
         wire_time(out[0][3] + timedelta(seconds=int(t - times[0])))]
        for a, b, h, t in zip(lat + noise[0], lon + noise[1], altitude, grid, strict=True)
    ]


def track_gpx(name: str, segments: Sequence[Sequence[Point]]) -> str:
    """A track, one segment for each part of the day."""
    lines = [f"{HEAD}  <trk>\n    <name>{escape(name)}</name>\n"]
    for points in segments:
        lines.append("    <trkseg>\n")
        lines += [
            f'      <trkpt lat="{lat}" lon="{lon}"><ele>{altitude}</ele><time>{time}</time></trkpt>\n'
            for lat, lon, altitude, time in points
        ]
        lines.append("    </trkseg>\n")
    return "".join([*lines, "  </trk>\n</gpx>\n"])


def waypoints_gpx(sites: Sequence[dict[str, object]]) -> str:
    """The sites as waypoints: name, and what stands there as the description."""
    lines = (
        f'  <wpt lat="{site["lat_deg"]}" lon="{site["lon_deg"]}"><name>{escape(str(site["name"]))}</name>'
        f'<desc>{escape(str(site["dune_pattern"]))}</desc></wpt>\n'
        for site in sites
    )
    return "".join([HEAD, *lines, "</gpx>\n"])
