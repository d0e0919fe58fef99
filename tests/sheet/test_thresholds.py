"""A survey may set when a check asks, on base and on the phone alike."""

from __future__ import annotations

from dataclasses import asdict, replace

from fieldlog.sheet.check import questions
from fieldlog.sheet.question import Thresholds, thresholds_of
from fieldlog.sheet.subjects import ASKS, SURVEY
from tests.mirror import javascript

ROW = {"record": "000000000000000-1", "site": "000000000000000-2", "observed_at": "2026-03-04T05:06:07Z", "slip_face_dip_deg": 27.0}


def test_every_threshold_is_a_field_of_the_survey_and_in_the_phones_list() -> None:
    asked = {field.name.removeprefix(ASKS) for field in SURVEY.fields if field.name.startswith(ASKS)}
    assert asked == set(asdict(Thresholds()))
    assert javascript("sheet/question.js", ["THRESHOLDS"]) == [asdict(Thresholds())]


def test_what_a_survey_does_not_set_stays_as_usual() -> None:
    assert thresholds_of({}) == Thresholds()
    row = {"ask_gentlest_deg": None, "ask_repeat_s": 0, "name": "x"}
    assert thresholds_of(row) == replace(Thresholds(), repeat_s=0)
    assert javascript("sheet/question.js", ["thresholdsOf", row]) == [asdict(thresholds_of(row))]


def test_a_set_threshold_decides() -> None:
    assert [q.code for q in questions([ROW])] == ["dip"]
    assert questions([ROW], thresholds=thresholds_of({"ask_gentlest_deg": 25})) == []
