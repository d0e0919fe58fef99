"""True bearings, the same in both languages (tests/browser runs the same vectors in JavaScript)."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.sheet.derive import derive, round_half_up
from fieldlog.sheet.observation import OBSERVATION

CASES = json.loads((Path(__file__).parents[1] / "vectors" / "derive.json").read_text(encoding="utf-8"))


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["what"])
def test_vectors(case: dict[str, Any]) -> None:
    assert derive(OBSERVATION, case["row"]) == case["expected"]


@given(st.floats(0, 359.9), st.floats(-180, 180))
def test_true_bearings_stay_in_their_half_open_range(read: float, declination: float) -> None:
    row = {"north": "magnetic", "declination_deg": declination, "crest_read_deg": read, "slip_face_read_deg": read}
    derived = derive(OBSERVATION, row)
    assert derived["crest_deg"] is not None
    assert derived["slip_face_deg"] is not None
    assert 0 <= derived["crest_deg"] < 180
    assert 0 <= derived["slip_face_deg"] < 360


def test_west_declinations_round_to_the_nearest_too() -> None:
    assert round_half_up(-15.131, 2) == -15.13
    assert round_half_up(-15.13, 2) == -15.13
