"""Reading GPX of any device."""

from __future__ import annotations

import struct
from pathlib import Path

import numpy as np
import pyogrio
import pytest

from fieldlog.imports import gpx
from fieldlog.imports.found import ImportFileError
from fieldlog.imports.gpx import read_gpx
from tests.imports import files


def test_waypoints_are_sites_with_what_was_said_of_them() -> None:
    found = read_gpx(files.HANDHELD.encode())
    assert [values for _, values in found.sites] == [
        {"name": "Ridge foot", "lat_deg": -19.97, "lon_deg": 66.05, "note": "flag on a cairn"},
        {"name": "علامة", "lat_deg": -20.01, "lon_deg": 66.11, "note": "second site"},
        {"name": "Waypoint 3", "lat_deg": -20.02, "lon_deg": 66.12},
    ]
    assert not found.refused
    assert any("route" in note for note in found.notes)


def test_a_segment_is_a_track_with_its_times_in_utc() -> None:
    first, second = read_gpx(files.HANDHELD.encode()).tracks
    assert (first.name, second.name) == ("Morning, segment 1", "Morning, segment 2")
    assert first.points == [
        [-20.0, 66.0, 400.0, "2026-03-04T05:06:00Z"],
        [-20.0, 66.001, 402.0, "2026-03-04T05:07:00Z"],
        [-20.0, 66.002, 404.0, "2026-03-04T05:07:00Z"],
    ]
    assert second.points[0] == [-20.0, 66.01, None, "2026-03-04T06:00:00.250Z"]


def test_a_file_that_gdal_wrote(tmp_path: Path) -> None:
    """GDAL's GPX driver (gdal.org, GPX) as pyogrio brings it: other software that writes the format."""
    target = tmp_path / "gdal.gpx"
    points = np.array([struct.pack("<BIddd", 1, 1001, lon, lat, 300.0) for lon, lat in ((10.5, 20.25), (-70.0, -24.5))], dtype=object)
    pyogrio.raw.write(
        target, points, [np.array(["Well", "Col \u00e9"], dtype=object)], ["name"], geometry_type="Point Z",
        crs="EPSG:4326", driver="GPX", layer="waypoints",
    )
    assert [values for _, values in read_gpx(target.read_bytes()).sites] == [
        {"name": "Well", "lat_deg": 20.25, "lon_deg": 10.5},
        {"name": "Col \u00e9", "lat_deg": -24.5, "lon_deg": -70.0},
    ]


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16"])
def test_encodings_by_mark_or_declaration(encoding: str) -> None:
    text = files.HANDHELD.replace("UTF-8", "UTF-16" if encoding == "utf-16" else "UTF-8")
    assert read_gpx(text.encode(encoding)).sites[1][1]["name"] == "علامة"


def test_points_without_a_time_are_kept_and_counted() -> None:
    found = read_gpx(files.UNTIMED.encode())
    assert [point[3] for point in found.tracks[0].points] == [None, None]
    assert "no time that can be read in 2 of 2 points" in found.notes[0]


def test_impossible_coordinates_are_refused_one_by_one() -> None:
    found = read_gpx(files.IMPOSSIBLE.encode())
    assert [values["name"] for _, values in found.sites] == ["Somewhere"]
    assert [row.where for row in found.refused] == ["waypoint 1 (Over the pole)", "waypoint 2 (Nowhere)", "track Walk"]
    assert "latitude 91" in found.refused[0].why
    assert len(found.tracks[0].points) == 1


@pytest.mark.parametrize(
    ("data", "said"),
    [
        (b"name,latitude\nNorth,4\n", "not XML"),
        (b"", "not XML"),
        (b"\x00\x01\x02", "not XML"),
        (b"\xff\xfe\x00", "no text"),
        (b"<kml/>", "no GPX"),
        (files.HANDHELD[:700].encode(), "not whole XML"),
        (b'<gpx version="1.1" creator="x"></gpx>', "no waypoints and no tracks"),
        (b'<gpx version="1.1" creator="x"><wpt lat="north" lon="1"/></gpx>', "not valid GPX"),
        (b'<gpx version="1.1" creator="x"><wpt lon="1"/></gpx>', "not valid GPX"),
        (files.BOMB.encode(), "document type"),
        (files.OUTSIDE.encode(), "document type"),
        (files.BOMB.encode("utf-16"), "document type"),
        (b'<?xml version="1.0" encoding="unicode_escape"?><gpx/>', "encoding"),
    ],
)
def test_what_is_no_gpx_is_said(data: bytes, said: str) -> None:
    with pytest.raises(ImportFileError) as refused:
        read_gpx(data)
    assert said in str(refused.value)
    assert refused.value.mend


def test_a_file_too_large_is_said(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(gpx, "BYTES_MAX", 100)
    with pytest.raises(ImportFileError, match="larger"):
        read_gpx(files.HANDHELD.encode())
