"""One set of vectors holds Python and JavaScript to the same summaries, sentences included."""

from __future__ import annotations

import pytest

from fieldlog.science.summary import summarise
from tests.mirror import javascript, vectors
from tests.science.same_answers import assert_same_summary, camel

CASES = vectors("circular")


@pytest.mark.parametrize("case", CASES, ids=[case["what"] for case in CASES])
def test_python_gives_the_vector(case: dict) -> None:
    got = summarise(case["angles_deg"], spacing=False, **case["options"]).as_json()
    assert_same_summary(got, case["expected"], case["what"])


def test_javascript_gives_every_vector() -> None:
    calls = [["summarise", case["angles_deg"], camel(case["options"])] for case in CASES]
    for case, got in zip(CASES, javascript("science/summary.js", *calls), strict=True):
        assert "error" not in got, f"{case['what']}: {got}"
        assert_same_summary(got, case["expected"], case["what"])


def test_both_refuse_what_is_not_a_number() -> None:
    (answer,) = javascript("science/summary.js", ["summarise", [1, None, 3]])
    assert answer["error"] == "reading 2: null is not a finite number. Give degrees as numbers."
    with pytest.raises(ValueError, match="reading 2: nan is not a finite number"):
        summarise([1, float("nan"), 3])
