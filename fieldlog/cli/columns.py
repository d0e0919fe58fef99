"""Columns of numbers from a CSV file with a header, or from a plain list."""

from __future__ import annotations

import csv
import io
import math
import sys
from dataclasses import dataclass
from pathlib import Path

from fieldlog.errors import Refusal


class TableError(Refusal, ValueError):
    """A file that cannot be read as numbers."""


@dataclass(frozen=True)
class Table:
    """A header (empty for a plain list) and rows of cells, each with its line number."""

    header: list[str]
    rows: list[tuple[int, list[str]]]
    decimal_comma: bool


def read_table(path: str) -> Table:
    """Read a file or, for "-", standard input: UTF-8, separated by commas, semicolons or tabs."""
    try:
        data = sys.stdin.buffer.read() if path == "-" else Path(path).read_bytes()
        text = data.decode("utf-8-sig")
    except FileNotFoundError:
        raise TableError("there is no such file", path, "Check the path.") from None
    except IsADirectoryError:
        raise TableError("this is a folder", path, "Give a file.") from None
    except UnicodeDecodeError as error:
        raise TableError(f"byte {error.start + 1} is not UTF-8", path, "Save the file as UTF-8 text.") from None
    lines = text.splitlines()
    first = next((line for line in lines if line.strip()), "")
    if _is_number(_tokens(first)[0] if _tokens(first) else "0"):
        rows = [(i, _tokens(line)) for i, line in enumerate(lines, 1) if line.strip()]
        return Table([], rows, decimal_comma=False)
    if first.strip()[0] in "0123456789":
        line = lines.index(first) + 1
        raise TableError(f"{first.strip()!r} is not a number", f"line {line}", "Give degrees as numbers.")
    delimiter = max("\t;,", key=first.count)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter)
    header: list[str] = []
    held = []
    try:
        for cells in reader:
            if not any(cell.strip() for cell in cells):
                continue
            if not header:
                header = [cell.strip() for cell in cells]
            else:
                held.append((reader.line_num, cells))
    except csv.Error as error:
        raise TableError(f"the table cannot be read ({error})", f"line {reader.line_num}", "Check the quotes.") from None
    return Table(header, held, decimal_comma=delimiter == ";")


def column_index(table: Table, name: str | None, *, option: str, path: str) -> int:
    """The place of a column; without a name, the only one there is."""
    if not table.header:
        if name is not None:
            raise TableError(f"the file has no header, so no column {name!r}", path, f"Leave {option} out.")
        return 0
    if name is None:
        if len(table.header) == 1:
            return 0
        raise TableError("the file has several columns", path, f"Say which with {option}: {_listed(table)}.")
    if name not in table.header:
        raise TableError(f"there is no column {name!r}", path, f"Its columns are {_listed(table)}.")
    return table.header.index(name)


def numbers(table: Table, index: int) -> tuple[list[float], list[int], int]:
    """(values, their row numbers, rows whose cell is empty); raises TableError naming the line."""
    values, kept, empty = [], [], 0
    for i, (line, cells) in enumerate(table.rows):
        chosen = cells if not table.header else cells[index : index + 1]
        if table.header and (not chosen or not chosen[0].strip()):
            empty += 1
            continue
        for cell in chosen:
            values.append(_number(cell, line, comma=table.decimal_comma))
            kept.append(i)
    return values, kept, empty


def labels(table: Table, index: int, rows: list[int]) -> list[str | None]:
    """The cells of a column as text, None where empty."""
    found = []
    for i in rows:
        cells = table.rows[i][1]
        text = cells[index].strip() if index < len(cells) else ""
        found.append(text or None)
    return found


def _number(cell: str, line: int, *, comma: bool) -> float:
    text = cell.strip()
    try:
        value = float(text.replace(",", ".") if comma else text)
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise TableError(f"{text!r} is not a finite number", f"line {line}", "Give degrees as numbers.")
    return value


def _tokens(line: str) -> list[str]:
    return line.replace(",", " ").replace(";", " ").split()


def _is_number(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return False
    return True


def _listed(table: Table) -> str:
    return ", ".join(table.header)
