"""Observations without coordinates, placed along a track by the time at which they were made."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from typing import Any, Final

from fieldlog.imports.found import FoundTrack, RefusedRow, Values
from fieldlog.science.geodesy import PlaceError, along_track
from fieldlog.science.magnetic import MagneticError, declination
from fieldlog.sheet.times import read_time

FIX_ACCURACY_M: Final = 5.0
"""What a fix of a track is taken to be good to under an open sky (common practice, no source)."""

WALKING_M_PER_S: Final = 1.4
"""How fast somebody on foot gets away from the straight line (common practice, no source)."""

GAP_MAX_S: Final = 600.0
"""Nothing is placed in a longer gap of a track."""


@dataclass(frozen=True)
class Placement:
    """One observation that a track places: its row, what will be said of it, and by which track."""

    row: Mapping[str, Any]
    values: Values
    track: str
    gap_s: float


def accuracy_m(gap_s: float) -> float:
    """Accuracy to state in a gap of the track, metres: the fix's own, and how far one can walk out of
    the line and come back to it meanwhile (half the gap away, half the gap back).

    >>> accuracy_m(30)
    26.0
    """
    return round(FIX_ACCURACY_M + WALKING_M_PER_S * gap_s / 2, 1)


def place(
    rows: Iterable[Mapping[str, Any]], tracks: Sequence[FoundTrack]
) -> tuple[list[Placement], list[RefusedRow]]:
    """Place each of `rows` (observations without coordinates) that a track covers in time.

    A row that no track covers is left as it is; one that lies in a long gap or that two tracks place
    is refused. A track's altitude is not taken over: GPX does not say above what it is.
    """
    timed = [(track, _timed(track)) for track in tracks]
    placements: list[Placement] = []
    refused: list[RefusedRow] = []
    for row in rows:
        when: datetime = row["observed_at"]
        covering = [(track, points) for track, points in timed if points and points[0][3] <= when <= points[-1][3]]
        where = f"observation {row['record']}"
        if len(covering) > 1:
            names = ", ".join(track.name for track, _ in covering)
            refused.append(RefusedRow(where, f"several tracks cover its time: {names}. Import the one that it belongs to"))
        elif covering:
            track, points = covering[0]
            found = along_track(points, when)
            if found.gap_s > GAP_MAX_S:
                refused.append(RefusedRow(where, f"the track {track.name} has a gap of {found.gap_s / 60:.0f} min there"))
            else:
                placements.append(Placement(row, _values(row, found.lat_deg, found.lon_deg, found.gap_s), track.name, found.gap_s))
    return placements, refused


def _timed(track: FoundTrack) -> list[tuple[float, float, float | None, datetime]]:
    """The track's points that have a time, by time."""
    timed = [(lat, lon, altitude, read_time(when)) for lat, lon, altitude, when in track.points if when is not None]
    return sorted(timed, key=lambda point: point[3])


def _values(row: Mapping[str, Any], lat: float, lon: float, gap_s: float) -> Values:
    values: Values = {
        "lat_deg": round(lat, 7), "lon_deg": round(lon, 7), "fix_method": "track", "accuracy_m": accuracy_m(gap_s),
    }
    if row["north"] == "magnetic" and row["declination_deg"] is None:
        try:
            found = declination(lat, lon, None, row["observed_at"])
        except (MagneticError, PlaceError):
            return values
        values |= {"declination_deg": found.declination_deg, "declination_model": found.model}
    return values
