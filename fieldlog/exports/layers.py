"""The layers of the GeoPackage: what each is, its columns, and its rows with their geometry."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any, Final

from fieldlog.exports import lines, statistics
from fieldlog.exports.columns import Column, columns_of, pick, text
from fieldlog.exports.lines import Coordinates
from fieldlog.exports.rows import Row, SurveyRows, said
from fieldlog.exports.tracks import point_time, whole_tracks
from fieldlog.ledger.names import name_to_uuid
from fieldlog.sheet.vocabulary import VOCABULARIES

Feature = tuple[Coordinates | None, Row]


@dataclass(frozen=True)
class Layer:
    """One layer. `geometry` is Point, LineString, or None for a plain table; `rows` makes its
    features from a survey."""

    name: str
    geometry: str | None
    about: str
    columns: tuple[Column, ...]
    rows: Callable[[SurveyRows], Iterator[Feature]]


def _whole(name: str, typed: str, label: str, about: str = "", unit: str = "") -> Column:
    return Column(name=name, type=typed, label=label, help=about, unit=unit)


_OBSERVED: Final = columns_of("observation")
_FRAME: Final = pick(
    _OBSERVED, "record", "uuid", "site", "site_name", "observed_at", "observed_at_local", "bedform", "bedform_order",
    "face", "dune_type",
)
_CREST: Final = (
    *_FRAME, *pick(_OBSERVED, "crest_deg", "crest_place", "check_of", "two_versions"),
    _whole("length_m", "real", "Length drawn", "The length sighted, or a fixed one where none was.", "m"),
    _whole("schematic", "flag", "Schematic", "True where the length drawn is no measurement."),
)
_TICK: Final = (
    *_FRAME, *pick(_OBSERVED, "slip_face_deg", "slip_face_dip_deg", "slip_face_state", "check_of", "two_versions"),
    _whole("length_m", "real", "Length drawn", "A mark to see, no measurement.", "m"),
    _whole("schematic", "flag", "Schematic", "Always true."),
)
_TRACK: Final = (
    *(column for column in columns_of("track") if column.name not in ("points", "part", "crossed_out")),
    _whole("points_n", "integer", "Points"),
    _whole("first_time", "time", "First time", "UTC; empty where no point has a time."),
    _whole("last_time", "time", "Last time", "UTC."),
)
_VERSION: Final = (
    text("record", "Record"), text("uuid", "UUID"), text("kind", "Kind", "The sheet that the record is of."),
    text("field", "Field"), text("entry", "Entry", "The ledger entry that said it."), text("value", "Value"),
    _whole("stands", "flag", "Stands for now", "True for the version that the layers show until the lead chooses."),
)
_DICTIONARY: Final = (
    text("layer", "Layer"), text("column", "Column"), text("type", "Type"), text("label", "Label"),
    text("unit", "Unit"), _whole("minimum", "real", "Minimum"),
    _whole("maximum", "real", "Maximum", "For angles the first value that is too large."),
    text("words", "Words", "value = label: definition, one a line, where the values are of a vocabulary."),
    text("help", "What it is"),
)


def _observations(rows: SurveyRows) -> Iterator[Feature]:
    for row in rows.stream("observation"):
        yield _point(row), row


def _sites(rows: SurveyRows) -> Iterator[Feature]:
    for row in rows.stream("site"):
        yield _point(row), row


def _crest_lines(rows: SurveyRows) -> Iterator[Feature]:
    for row in rows.stream("observation"):
        line = None if row["crossed_out"] else lines.crest_line(row)
        if line is not None:
            length, schematic = lines.crest_length_m(row)
            yield line, {**row, "length_m": length, "schematic": schematic}


def _slip_face_ticks(rows: SurveyRows) -> Iterator[Feature]:
    for row in rows.stream("observation"):
        line = None if row["crossed_out"] else lines.slip_face_tick(row)
        if line is not None:
            yield line, {**row, "length_m": lines.TICK_M, "schematic": True}


def _tracks(rows: SurveyRows) -> Iterator[Feature]:
    for row in whole_tracks(rows.stream("track")):
        times = [when for point in row["points"] if (when := point_time(point[3])) is not None]
        more = {"points_n": len(row["points"]), "first_time": min(times, default=None), "last_time": max(times, default=None)}
        yield lines.track_line(row["points"]), {**row, **more}


def _statistics(rows: SurveyRows) -> Iterator[Feature]:
    for site, row in statistics.site_statistics(rows):
        yield _point(site), row


def _photo_points(rows: SurveyRows) -> Iterator[Feature]:
    """Photos, each where its observation was made."""
    taken = list(rows.stream("photo"))
    wanted = {row["observation"] for row in taken}
    places = {row["record"]: _point(row) for row in rows.stream("observation") if row["record"] in wanted}
    for row in taken:
        yield places.get(row["observation"]), row


def _two_versions(rows: SurveyRows) -> Iterator[Feature]:
    for version in rows.versions:
        yield None, {
            "record": version.record, "uuid": str(name_to_uuid(version.record)), "kind": version.kind,
            "field": version.field, "entry": version.entry, "value": said(version.value), "stands": version.stands,
        }


def _dictionary(rows: SurveyRows) -> Iterator[Feature]:
    for layer in LAYERS:
        for column in layer.columns:
            yield None, _entry(layer.name, column)


def _entry(layer: str, column: Column) -> dict[str, Any]:
    words = [f"{w.value} = {w.label}: {w.definition}" for w in VOCABULARIES.get(column.vocabulary or "", ())]
    return {
        "layer": layer, "column": column.name, "type": column.type, "label": column.label, "unit": column.unit or None,
        "minimum": column.minimum, "maximum": column.maximum, "words": "\n".join(words) or None,
        "help": column.help or None,
    }


def _point(row: Row) -> Coordinates | None:
    return None if row["lat_deg"] is None or row["lon_deg"] is None else [(row["lon_deg"], row["lat_deg"])]


LAYERS: Final = (
    Layer("observations", "Point", "Every observation, crossed-out ones too, where the observer stood.", _OBSERVED, _observations),
    Layer("sites", "Point", "The sites as planned.", columns_of("site"), _sites),
    Layer("tracks", "LineString", "Where devices went, parts joined.", _TRACK, _tracks),
    Layer("crest_lines", "LineString",
          "Crests at their true orientation, centred at their place, of the length sighted where there is one.", _CREST, _crest_lines),
    Layer("slip_face_ticks", "LineString", "From the place towards where the slip face faces, true.", _TICK, _slip_face_ticks),
    Layer("site_statistics", "Point", "What each sample of each site says, with its uncertainty.", statistics.COLUMNS, _statistics),
    Layer("photo_points", "Point", "Photos where they were taken, with the bearing looked along.", columns_of("photo"), _photo_points),
    Layer("two_versions", None, "Fields with several values that nobody has chosen between yet.", _VERSION, _two_versions),
    Layer("data_dictionary", None, "Every column of every layer.", _DICTIONARY, _dictionary),
)
