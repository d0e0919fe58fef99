"""The observations as GeoJSON (RFC 7946): WGS 84, longitude first, altitude above the ellipsoid third.

An observation without coordinates is a feature with geometry null.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any, TypedDict

from fieldlog.exports.columns import columns_of
from fieldlog.exports.rows import Row, SurveyRows, plain


class Point(TypedDict):
    """A GeoJSON Point."""

    type: str
    coordinates: list[float]


def write_geojson(rows: SurveyRows, target: Path) -> None:
    """Write one feature an observation; its id is the observation's UUID."""
    names = [column.name for column in columns_of("observation")]
    with target.open("w", encoding="utf-8", newline="\n") as file:
        file.write('{"type": "FeatureCollection", "features": [')
        for index, row in enumerate(rows.stream("observation")):
            feature: dict[str, Any] = {
                "type": "Feature",
                "id": row["uuid"],
                "geometry": point(row),
                "properties": {name: plain(row[name]) for name in names},
            }
            file.write(",\n" if index else "\n")
            file.write(json.dumps(feature, ensure_ascii=False, allow_nan=False))
        file.write("\n]}\n")


def point(row: Row) -> Point | None:
    """Where the observer stood."""
    if row["lat_deg"] is None or row["lon_deg"] is None:
        return None
    place = [row["lon_deg"], row["lat_deg"]]
    return {"type": "Point", "coordinates": place if row["altitude_m"] is None else [*place, row["altitude_m"]]}
