"""Bearings drawn as lines on the ground, true to the ellipsoid at the place where they were read.

A crest line runs both ways from its place, a slip-face tick from its place down-dip. The place is
where the observer stood, or what was sighted from there. Longitudes run on past 180 degrees, so
that a line over the antimeridian stays whole.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Final

from fieldlog.exports.rows import Row
from fieldlog.science.geodesy import Place, destination

Coordinates = list[tuple[float, float]]
"""Longitude and latitude of the points of a geometry."""

SCHEMATIC_CREST_M: Final = 50.0
"""Length of a crest line where no length was sighted."""

TICK_M: Final = 15.0
"""Length of a slip-face tick: a mark to see, nothing measured."""


def place_of(row: Row) -> Place | None:
    """The place that the bearings of an observation belong to; None without coordinates."""
    if row["lat_deg"] is None or row["lon_deg"] is None:
        return None
    if row["sighted_bearing_deg"] is not None and row["sighted_distance_m"]:
        return destination(row["lat_deg"], row["lon_deg"], row["sighted_bearing_deg"], row["sighted_distance_m"])
    return Place(row["lat_deg"], row["lon_deg"])


def crest_length_m(row: Row) -> tuple[float, bool]:
    """Length to draw a crest with, and whether it is only schematic."""
    return (row["crest_chord_m"], False) if row["crest_chord_m"] else (SCHEMATIC_CREST_M, True)


def crest_line(row: Row) -> Coordinates | None:
    """The crest through its place: one end, the place, the other end. None without place or bearing."""
    place = place_of(row)
    if place is None or row["crest_deg"] is None:
        return None
    half = crest_length_m(row)[0] / 2
    ends = [destination(place.lat_deg, place.lon_deg, row["crest_deg"] + turn, half) for turn in (180.0, 0.0)]
    return unrolled([ends[0], place, ends[1]])


def slip_face_tick(row: Row) -> Coordinates | None:
    """From the place in the direction that the slip face faces. None without place or bearing."""
    place = place_of(row)
    if place is None or row["slip_face_deg"] is None:
        return None
    return unrolled([place, destination(place.lat_deg, place.lon_deg, row["slip_face_deg"], TICK_M)])


def track_line(points: Sequence[Sequence[float]]) -> Coordinates | None:
    """The line of a track's points; None for fewer than two."""
    return unrolled(Place(point[0], point[1]) for point in points) if len(points) > 1 else None


def unrolled(places: Iterable[Place]) -> Coordinates:
    """Longitude and latitude, each longitude within 180 degrees of the one before."""
    out: Coordinates = []
    for place in places:
        lon = place.lon_deg
        if out:
            lon += 360.0 * round((out[-1][0] - lon) / 360.0)
        out.append((lon, place.lat_deg))
    return out
