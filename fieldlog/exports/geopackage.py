"""The survey as a GeoPackage (OGC 12-128), written by GDAL: one file that any GIS opens.

WGS 84 (EPSG:4326); times are UTC and say so; a list is JSON text. Nothing of the ledger is in it.
"""

from __future__ import annotations

import json
import struct
from collections.abc import Iterable, Iterator, Sequence
from datetime import UTC, datetime
from itertools import islice
from pathlib import Path
from typing import Any, Final

import numpy as np

from fieldlog import __version__
from fieldlog.exports.columns import Column
from fieldlog.exports.layers import LAYERS, Feature, Layer
from fieldlog.exports.lines import Coordinates
from fieldlog.exports.rows import SurveyRows

CHUNK: Final = 20_000
"""Features held in memory at once."""

CRS: Final = "EPSG:4326"
_GDAL_UTC: Final = 100
"""GDAL's flag of a time in UTC."""
_WKB: Final = {"Point": 1, "LineString": 2}


def write_geopackage(rows: SurveyRows, target: Path) -> None:
    """Write all layers; `target` must not exist yet."""
    for layer in LAYERS:
        _write_layer(layer, layer.rows(rows), rows.survey["name"], target)


def _write_layer(layer: Layer, features: Iterable[Feature], survey: str, target: Path) -> None:
    """Write a layer chunk by chunk; one without features is there, empty."""
    from pyogrio import raw

    for index, chunk in enumerate(_chunks(features)):
        arrays, masks = zip(*(_array(column, [row[column.name] for _, row in chunk]) for column in layer.columns), strict=True)
        geometry = None
        if layer.geometry is not None:
            geometry = np.empty(len(chunk), dtype=object)
            geometry[:] = [wkb(layer.geometry, coordinates) for coordinates, _ in chunk]
        raw.write(
            str(target),
            geometry,
            list(arrays),
            [column.name for column in layer.columns],
            field_mask=list(masks),
            layer=layer.name,
            driver="GPKG",
            geometry_type=layer.geometry,
            crs=CRS if layer.geometry else None,
            append=target.exists(),
            gdal_tz_offsets={
                column.name: np.full(len(chunk), _GDAL_UTC) for column in layer.columns if column.type == "time"
            },
            **({} if index else {"layer_options": {"DESCRIPTION": layer.about, "IDENTIFIER": layer.name}}),
            **({} if target.exists() else {"dataset_metadata": {"survey": survey, "written_by": f"Ergbook {__version__}"}}),
        )


def _chunks(features: Iterable[Feature]) -> Iterator[list[Feature]]:
    """Lists of at most CHUNK features; one empty list where there are none."""
    waiting = iter(features)
    chunk = list(islice(waiting, CHUNK))
    yield chunk
    while chunk := list(islice(waiting, CHUNK)):
        yield chunk


def _array(column: Column, values: Sequence[Any]) -> tuple[Any, Any]:
    """The values of a column for GDAL, and which of them are missing (None where the type says it itself)."""
    if column.type == "real":
        return np.array([np.nan if value is None else value for value in values], dtype="float64"), None
    if column.type == "time":
        return np.array([_naive(value) for value in values], dtype="datetime64[ms]"), None
    if column.type in ("integer", "flag"):
        missing = np.array([value is None for value in values], dtype=bool)
        kind = "int64" if column.type == "integer" else "bool"
        return np.array([0 if value is None else value for value in values], dtype=kind), missing
    texts = np.empty(len(values), dtype=object)
    texts[:] = [_text(column, value) for value in values]
    return texts, None


def _naive(value: datetime | None) -> datetime | None:
    return None if value is None else value.astimezone(UTC).replace(tzinfo=None)


def _text(column: Column, value: Any) -> str | None:
    if value is None or column.type != "json":
        return None if value is None else str(value)
    return json.dumps(value, ensure_ascii=False)


def wkb(geometry: str, coordinates: Coordinates | None) -> bytes | None:
    """A point's or a line's well-known binary, little-endian; None for none."""
    if coordinates is None:
        return None
    flat = [number for pair in coordinates for number in pair]
    count = b"" if geometry == "Point" else struct.pack("<I", len(coordinates))
    return struct.pack("<BI", 1, _WKB[geometry]) + count + struct.pack(f"<{len(flat)}d", *flat)
