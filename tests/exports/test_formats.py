"""Every format opens in GDAL (pyogrio) or its own library and holds what the store holds."""

from __future__ import annotations

import csv
import json
import sqlite3
import struct
from pathlib import Path

import gpxpy
import numpy as np
import pyogrio
import pytest
from pyproj import Geod

from fieldlog.exports.layers import LAYERS
from fieldlog.exports.service import ExportError, format_of
from fieldlog.science.summary import summarise
from tests.exports.conftest import AWKWARD, Exported, Table, layer

WGS84 = Geod(ellps="WGS84")


def line(wkb: bytes) -> list[tuple[float, float]]:
    """Coordinates of a little-endian WKB line (OGC 06-103r4, 8.2)."""
    order, kind, count = struct.unpack_from("<BII", wkb)
    assert (order, kind % 1000) == (1, 2)
    flat = struct.unpack_from(f"<{2 * count}d", wkb, 9)
    return list(zip(flat[::2], flat[1::2], strict=True))


def lines_of_csv(file: Path) -> Table:
    with file.open(encoding="utf-8", newline="") as text:
        return list(csv.DictReader(text))


def test_all_formats_hold_every_observation_under_the_same_ids(demo: Exported) -> None:
    records = {row["record"] for row in demo.rows}
    assert len(records) == 371
    assert {row["record"] for row in lines_of_csv(demo.files[".csv"])} == records
    for ending, name in ((".geojson", None), (".gpkg", "observations")):
        _, rows = layer(demo.files[ending], name)
        assert {row["record"] for row in rows} == records
    gpx = gpxpy.parse(demo.files[".gpx"].read_text(encoding="utf-8"))
    walked = {row["record"] for row in demo.rows if row["lat_deg"] is not None and not row["crossed_out"]}
    assert {point.comment for point in gpx.waypoints if point.type == "observation"} == walked


def test_true_azimuths_are_the_stores_in_every_format(demo: Exported) -> None:
    stored = {row["record"]: row for row in demo.rows}
    _, packed = layer(demo.files[".gpkg"], "observations")
    plain = lines_of_csv(demo.files[".csv"])
    features = json.loads(demo.files[".geojson"].read_text(encoding="utf-8"))["features"]
    tables = (packed, plain, [feature["properties"] for feature in features])
    for column in ("crest_deg", "slip_face_deg"):
        for table in tables:
            for row in table:
                value = row[column]
                if stored[row["record"]][column] is None:
                    assert value in ("", None) or np.isnan(value)
                else:
                    assert float(value) == stored[row["record"]][column]


def test_lines_on_the_ground_run_at_the_true_azimuth(demo: Exported) -> None:
    """Azimuth of each drawn line by PROJ's geodesics (pyproj), from where the reading belongs to."""
    geometry, rows = layer(demo.files[".gpkg"], "slip_face_ticks")
    assert len(rows) > 200
    for wkb, row in zip(geometry, rows, strict=True):
        (lon1, lat1), (lon2, lat2) = line(wkb)
        azimuth, _, length = WGS84.inv(lon1, lat1, lon2, lat2)
        assert abs((azimuth - row["slip_face_deg"] + 180) % 360 - 180) < 1e-4
        assert length == pytest.approx(row["length_m"], abs=1e-5)
    geometry, rows = layer(demo.files[".gpkg"], "crest_lines")
    for wkb, row in zip(geometry, rows, strict=True):
        ends = line(wkb)
        azimuth, _, _ = WGS84.inv(*ends[1], *ends[2])
        assert abs((azimuth - row["crest_deg"] + 90) % 180 - 90) < 1e-4


def test_the_statistics_are_those_of_the_readings_in_the_file(demo: Exported) -> None:
    """Worked out again from the observations layer alone."""
    _, observed = layer(demo.files[".gpkg"], "observations")
    _, said = layer(demo.files[".gpkg"], "site_statistics")
    row = next(r for r in said if r["site_name"] == "Tamrel Combs" and r["measure"] == "slip_face_deg" and r["main_sample"])
    taken = [
        r for r in observed
        if r["site_name"] == "Tamrel Combs" and not r["crossed_out"] and not r["check_of"] and r["face"] == row["face"]
        and r["bedform_order"] == row["bedform_order"] and r["dune_type"] == row["dune_type"] and not np.isnan(r["slip_face_deg"])
    ]
    summary = summarise(
        [r["slip_face_deg"] for r in taken], bedforms=[int(r["bedform"]) for r in taken], step_deg=1, target_deg=row["target_deg"],
        subject="Slip faces",
    )
    assert row["n_readings"] == summary.n == len(taken)
    assert row["mean_deg"] == pytest.approx(summary.mean_direction_deg, rel=1e-9)
    assert row["ci95_low_deg"] == pytest.approx(summary.ci95_low_deg, rel=1e-9)
    assert row["finding"] == summary.finding


def test_a_geopackage_is_one_by_its_own_marks(demo: Exported) -> None:
    """OGC 12-128r19, requirement 2: application id GPKG; gpkg_contents lists every layer."""
    store = sqlite3.connect(demo.files[".gpkg"])
    (mark,) = store.execute("PRAGMA application_id").fetchone()
    contents = dict(store.execute("SELECT table_name, data_type FROM gpkg_contents").fetchall())
    store.close()
    assert mark == 0x47504B47
    assert contents == {made.name: "features" if made.geometry else "attributes" for made in LAYERS}
    names = {name for name, _ in pyogrio.list_layers(demo.files[".gpkg"])}
    assert names == {made.name for made in LAYERS}


def test_the_dictionary_names_every_column_of_every_layer(demo: Exported) -> None:
    _, told = layer(demo.files[".gpkg"], "data_dictionary")
    named = {(row["layer"], row["column"]) for row in told}
    for made in LAYERS:
        fields = pyogrio.read_info(demo.files[".gpkg"], layer=made.name)["fields"]
        assert {(made.name, field) for field in fields} <= named


def test_times_are_utc_in_the_geopackage(demo: Exported) -> None:
    _, rows = layer(demo.files[".gpkg"], "observations")
    stored = {row["record"]: row["observed_at"] for row in demo.rows}
    for row in rows[:50]:
        assert np.datetime64(row["observed_at"], "s") == np.datetime64(stored[row["record"]].replace(tzinfo=None), "s")


def test_csv_is_rfc_4180_and_no_cell_is_a_formula(awkward: Exported) -> None:
    data = awkward.files[".csv"].read_bytes()
    assert data.count(b"\r\n") == len(AWKWARD) + 1
    notes = {row["note"] for row in lines_of_csv(awkward.files[".csv"])}
    assert "'=HYPERLINK(\"x\")" in notes
    assert AWKWARD[1]["note"] in notes


def test_geojson_is_rfc_7946(awkward: Exported) -> None:
    """Sections 3.1.6, 3.2 and 4: longitude first, null geometry allowed, no crs member."""
    held = json.loads(awkward.files[".geojson"].read_text(encoding="utf-8"))
    assert set(held) == {"type", "features"}
    by_note = {feature["properties"]["note"]: feature for feature in held["features"]}
    assert by_note["no place"]["geometry"] is None
    assert by_note['=HYPERLINK("x")']["geometry"]["coordinates"] == [179.9999, 20.0]
    assert by_note["crossed out"]["properties"]["crossed_out"] == "wrong dune"
    assert len({feature["id"] for feature in held["features"]}) == len(AWKWARD)


def test_a_gpx_leaves_out_what_it_cannot_hold(awkward: Exported) -> None:
    points = gpxpy.parse(awkward.files[".gpx"].read_text(encoding="utf-8")).waypoints
    told = [point.description for point in points if point.type == "observation"]
    assert len(told) == 3
    assert not [text for text in told if "crossed out" in text or "no place" in text]
    assert any("\ufffd vertical tab" in text for text in told)
    assert any("none here" in text for text in told)


def test_a_line_over_the_antimeridian_stays_whole(awkward: Exported) -> None:
    geometry, rows = layer(awkward.files[".gpkg"], "crest_lines")
    drawn = {row["crest_deg"]: line(wkb) for wkb, row in zip(geometry, rows, strict=True)}
    assert 20 not in drawn  # crossed out
    assert 10 not in drawn  # no place
    longitudes = [lon for lon, _ in drawn[30.0]]
    assert max(longitudes) > 180
    assert max(longitudes) - min(longitudes) < 1


@pytest.mark.parametrize("name", ["survey.xls", "survey", "survey.gpkg.txt"])
def test_another_ending_is_refused_with_those_there_are(name: str) -> None:
    with pytest.raises(ExportError) as refused:
        format_of(name)
    assert ".gpkg" in refused.value.mend
