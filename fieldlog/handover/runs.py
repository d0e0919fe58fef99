"""Rows that follow on from each other, said once with how many there are."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any


def in_runs(rows: Iterable[dict[str, Any]], counting: tuple[str, ...]) -> list[dict[str, Any]]:
    """`rows` with those that differ from the one before by one in every `counting` key made one, with `count`.

    >>> in_runs([{"n": 1, "s": "x"}, {"n": 2, "s": "x"}, {"n": 4, "s": "x"}], ("n",))
    [{'n': 1, 's': 'x', 'count': 2}, {'n': 4, 's': 'x'}]
    """
    made: list[dict[str, Any]] = []
    for row in rows:
        last = made[-1] if made else None
        if last is not None and _follows(last, row, counting):
            last["count"] = last.get("count", 1) + 1
        else:
            made.append(dict(row))
    return made


def _follows(last: dict[str, Any], row: dict[str, Any], counting: tuple[str, ...]) -> bool:
    count = last.get("count", 1)
    same = {key: value for key, value in last.items() if key not in (*counting, "count")}
    return (
        all(key in row and key in last and row[key] == last[key] + count for key in counting)
        and {key: value for key, value in row.items() if key not in counting} == same
    )
