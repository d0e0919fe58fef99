"""The observations as CSV: RFC 4180 (commas, CRLF, quotes doubled), UTF-8 without a mark, a header line.

Text that a spreadsheet would take for a formula has an apostrophe in front (fieldlog.sheet.csv_text);
numbers are never touched.
"""

from __future__ import annotations

import csv
import json
from pathlib import Path
from typing import Any

from fieldlog.exports.columns import Column, columns_of
from fieldlog.exports.rows import SurveyRows, plain
from fieldlog.sheet.csv_text import guarded


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

