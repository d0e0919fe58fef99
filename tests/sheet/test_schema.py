"""The wire schema is drawn from the sheet: every field refuses what it should, in words."""

from __future__ import annotations

from typing import Any

import pytest

from fieldlog.sheet.fields import Field
from fieldlog.sheet.schema import problems
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.vocabulary import VOCABULARIES

RECORD = "0123456789abcde-1"
GOOD: dict[str, Any] = {
    "number": 1, "integer": 1, "direction": 359.9, "orientation": 179.9, "text": "ok", "flag": True,
    "time": "2026-03-04T05:06:07.5Z", "reference": RECORD, "names": ["a"], "points": [[1, 2, None, None]],
}
BAD: dict[str, list[Any]] = {
    "number": ["1", True, float("inf")], "integer": [1.5, "1"], "direction": [360, -1, "90"], "orientation": [180],
    "text": [5, "a\x00", "\ud800"], "flag": ["yes", 1], "time": ["2026-03-04", "2026-03-04Z", "2026-03-04T05:06:07+03:00", 5],
    "reference": ["x", "0123456789abcde-0"], "names": ["a", [5]], "points": [[], [[91, 0, None, None]], [[1, 2]]],
    "choice": ["no_such_word", 5],
}
FIELDS = [(kind, field) for kind, sheet in SHEETS.items() for field in sheet.said]


def good_value(field: Field) -> Any:
    if field.vocabulary:
        return VOCABULARIES[field.vocabulary][0].value
    if field.minimum is not None:
        return field.minimum
    return GOOD[field.type]


@pytest.mark.parametrize(("kind", "field"), FIELDS, ids=lambda v: getattr(v, "name", v))
def test_each_field_takes_a_good_value_and_null_and_refuses_bad_ones(kind: str, field: Field) -> None:
    assert problems(kind, {field.name: good_value(field)}, creates=False) == {}
    if not field.required:
        assert problems(kind, {field.name: None}, creates=False) == {}
    for bad in BAD[field.type]:
        assert set(problems(kind, {field.name: bad}, creates=False)) == {field.name}, bad


@pytest.mark.parametrize(("kind", "field"), [(k, f) for k, f in FIELDS if f.measure], ids=lambda v: getattr(v, "name", v))
def test_a_measure_may_be_absent_for_a_known_reason(kind: str, field: Field) -> None:
    assert problems(kind, {field.name: {"absent": "none_here"}}, creates=False) == {}
    assert set(problems(kind, {field.name: {"absent": "tired"}}, creates=False)) == {field.name}


def test_a_bearing_of_400_is_refused_in_words() -> None:
    assert problems("observation", {"crest_read_deg": 400}, creates=False) == {
        "crest_read_deg": "400 is outside 0 to below 360 deg"
    }


def test_impossible_coordinates_are_refused() -> None:
    assert set(problems("site", {"name": "x", "lat_deg": 91, "lon_deg": -181}, creates=True)) == {"lat_deg", "lon_deg"}


def test_a_required_field_is_needed_at_creation_and_never_taken_away() -> None:
    assert problems("site", {"name": "x", "lat_deg": 1}, creates=True) == {"lon_deg": "is needed"}
    assert problems("site", {"name": None}, creates=False) == {"name": "is needed"}


def test_unknown_fields_pass() -> None:
    assert problems("observation", {"moon_phase": 0.5}, creates=False) == {}
