"""The observations as CSV: RFC 4180 (commas, CRLF, quotes doubled), UTF-8 without a mark, a header line.

A spreadsheet runs a cell that begins with = + - or @ as a formula, wherever it came from. Text
that begins so (or with a tab or a carriage return) therefore gets one apostrophe in front; so does such text that has apostrophes in front already. Taking one apostrophe away from
what matches `GUARDED` gives back exactly what was typed. Numbers are never touched.
"""

from __future__ import annotations

import csv
import json
import re
from pathlib import Path
from typing import Any, Final

from fieldlog.exports.columns import Column, columns_of
from fieldlog.exports.rows import SurveyRows, plain

RISKY: Final = re.compile(r"'*[=+\-@\t\r]")
GUARDED: Final = re.compile(r"''*[=+\-@\t\r]")


def write_csv(rows: SurveyRows, target: Path) -> None:
    """Write one line an observation."""
    columns = columns_of("observation")
    with target.open("w", encoding="utf-8", newline="") as file:
        lines = csv.writer(file, lineterminator="\r\n")
        lines.writerow([column.name for column in columns])
        for row in rows.stream("observation"):
            lines.writerow([cell(column, row[column.name]) for column in columns])


def cell(column: Column, value: Any) -> Any:
    """A value as a cell: nothing for None, true or false, times as UTC, lists as JSON."""
    if value is None:
        return ""
    if column.type == "flag":
        return "true" if value else "false"
    if column.type == "json":
        return json.dumps(value, ensure_ascii=False)
    if column.type == "text":
        return guarded(value)
    return plain(value)


def guarded(text: str) -> str:
    """Text that no spreadsheet takes for a formula."""
    return f"'{text}" if RISKY.match(text) else text


def unguarded(text: str) -> str:
    """The text that `guarded` was given."""
    return text[1:] if GUARDED.match(text) else text
