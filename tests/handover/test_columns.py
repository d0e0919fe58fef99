"""Batches in columns: what the phone takes apart, base puts together byte for byte."""

from __future__ import annotations

import json
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fieldlog.handover.columns import ColumnsError, from_columns
from fieldlog.handover.runs import in_runs
from tests.faults.twin import singly
from tests.mirror import javascript

HEAD = {"v": 0, "device": "a" * 15, "store": "s", "epoch": "e", "first": 1, "app": "0.1.0"}
VALUES = st.recursive(
    st.none() | st.booleans() | st.integers(-(2**53), 2**53) | st.floats(allow_nan=False, allow_infinity=False) | st.text(max_size=12),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=5), inner, max_size=3),
    max_leaves=8,
)
BODIES = st.dictionaries(st.text(max_size=6), VALUES, max_size=5)


def text_of(body: Any) -> str:
    return json.dumps(body, ensure_ascii=False, separators=(",", ":"))


def test_every_text_comes_back_byte_for_byte() -> None:
    drawn: list[list[str]] = []

    @settings(max_examples=150, deadline=None, database=None, derandomize=True)
    @given(st.lists(BODIES, min_size=1, max_size=6))
    def draw(bodies: list[Any]) -> None:
        drawn.append([text_of(body) for body in bodies])

    draw()
    drawn.append([text_of({"a": i, "b": f"x{i}", "deep": [[i, None], {"c": '\\"\n'}]}) for i in range(300)])
    answers = javascript("handover/columns.js", *[["toColumns", HEAD, texts] for texts in drawn])
    for texts, body in zip(drawn, answers, strict=True):
        assert isinstance(body, str), (texts, body)
        assert from_columns(body, 2**24) == {**HEAD, "entries": texts}


@pytest.mark.parametrize("text", ['{ "spaced": 1}', "not json", '{"a":1}\n'])
def test_a_text_written_by_something_else_is_sent_plainly(text: str) -> None:
    assert javascript("handover/columns.js", ["toColumns", HEAD, [text]]) == [None]


GOOD = json.dumps({**HEAD, "shapes": ['{"a":\0}'], "rows": [0, 0]}) + "\n1\n2"


def test_alike_entries_make_one_shape() -> None:
    assert from_columns(GOOD, 1000)["entries"] == ['{"a":1}', '{"a":2}']


@pytest.mark.parametrize(
    "body",
    [
        GOOD + "\n3", GOOD[:-2], json.dumps(HEAD), "[]", json.dumps({**HEAD, "shapes": ["x"], "rows": [1]}),
        json.dumps({**HEAD, "shapes": ["x"], "rows": [-1]}), json.dumps({**HEAD, "shapes": [1], "rows": [0]}),
        json.dumps({**HEAD, "shapes": ["x" * 300], "rows": [0] * 300}),
    ],
)
def test_parts_that_do_not_fit_are_refused(body: str) -> None:
    with pytest.raises(ColumnsError):
        from_columns(body, 10_000)


@given(st.lists(st.tuples(st.integers(1, 6), st.booleans()), max_size=30))
@settings(max_examples=100, deadline=None, database=None)
def test_runs_are_the_rows_again(steps: list[tuple[int, bool]]) -> None:
    rows, n, seq = [], 0, 100
    for step, gap in steps:
        n, seq = n + 1, seq + (step if gap else 1)
        rows.append({"n": n, "status": "stored" if step != 3 else "set_aside", **({"seq": seq} if step != 3 else {"problem": "x"})})
    made = in_runs(rows, ("n", "seq"))
    assert singly(made) == rows
    assert javascript("handover/runs.js", ["singly", made]) == [rows]
