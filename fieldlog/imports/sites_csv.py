"""Sites from CSV: a header line with name, latitude and longitude, and any other columns of the site sheet.

Columns are named as in the data dictionary or by their labels. Commas or semicolons or tabs between
cells; a decimal comma is understood where it is no separator. Vocabulary by value or label.
"""

from __future__ import annotations

import csv
import io
from typing import Final

from fieldlog.errors import Refusal
from fieldlog.imports.found import Found, ImportFileError, RefusedRow, Values
from fieldlog.sheet.csv_text import unguarded
from fieldlog.sheet.fields import Field
from fieldlog.sheet.subjects import SITE
from fieldlog.sheet.vocabulary import VOCABULARIES
from fieldlog.surveys.forms import values_from

BYTES_MAX: Final = 4 * 1024 * 1024
LEFT_OUT: Final = frozenset({"crossed_out"})
"""Fields that an import does not say."""

ALIASES: Final = {"lat": "lat_deg", "latitude": "lat_deg", "lon": "lon_deg", "long": "lon_deg", "lng": "lon_deg",
                  "longitude": "lon_deg", "site": "name"}
_MEND: Final = "The first line names the columns: name, latitude, longitude"


def read_sites(data: bytes) -> Found:
    """The sites of a CSV file, each row by itself: a row that is wrong is refused and says why.

    ImportFileError where the file is too large, no text, or its header lacks a needed column.
    """
    if len(data) > BYTES_MAX:
        raise ImportFileError(f"the file is larger than {BYTES_MAX // 1024 // 1024} MB", "CSV", "Split it")
    text = _text(data)
    separator = _separator(text.partition("\n")[0])
    lines = csv.reader(io.StringIO(text, newline=""), delimiter=separator, strict=True)
    found = Found()
    try:
        header = next(lines, [])
        columns = _columns(header, found)
        for cells in lines:
            if any(cell.strip() for cell in cells):
                _row(found, f"line {lines.line_num}", cells, columns, len(header))
    except csv.Error as error:
        raise ImportFileError(f"the file is no CSV ({error})", f"line {lines.line_num}", "Save it as CSV again") from error
    return found


def _text(data: bytes) -> str:
    if b"\x00" in data:
        raise ImportFileError("the file is no text", "CSV", "Save the table as CSV (UTF-8)")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise ImportFileError("the file is not in UTF-8", "CSV", "Save the table as CSV (UTF-8)") from error


def _separator(first: str) -> str:
    return max(",;\t", key=first.count)


def _columns(header: list[str], found: Found) -> dict[int, Field]:
    """Position -> field; columns that are none are said."""
    labels = {field.label.casefold(): field.name for field in SITE.said}
    columns: dict[int, Field] = {}
    unknown = []
    for index, cell in enumerate(header):
        plain = cell.strip().casefold()
        name = ALIASES.get(plain) or labels.get(plain) or plain.replace(" ", "_")
        field = SITE.by_name.get(name)
        if field is None or field.name in LEFT_OUT:
            unknown.append(cell.strip())
        elif field in columns.values():
            raise ImportFileError(f"the column {field.name} stands twice", "line 1", "Take one out")
        else:
            columns[index] = field
    missing = [f.name for f in SITE.said if f.required and f not in columns.values()]
    if missing:
        raise ImportFileError(f"there is no column {', '.join(missing)}", "line 1", _MEND)
    if any(unknown):
        found.notes.append(f"Columns that are none of a site's are left out: {', '.join(filter(None, unknown))}.")
    return columns


def _row(found: Found, where: str, cells: list[str], columns: dict[int, Field], width: int) -> None:
    if len(cells) > width:
        found.refused.append(RefusedRow(where, f"{len(cells)} cells under {width} columns: put quotes around text"))
        return
    form = {
        field.name: _said(field, unguarded(cells[index])) for index, field in columns.items() if index < len(cells)
    }
    try:
        values: Values = {name: value for name, value in values_from(SITE, form, form).items() if value is not None}
    except Refusal as refusal:
        found.refused.append(RefusedRow(where, str(refusal)))
        return
    found.sites.append((f"{where} ({values['name']})" if "name" in values else where, values))


def _said(field: Field, cell: str) -> str:
    """A vocabulary's label as its value; anything else as it stands."""
    if field.vocabulary:
        plain = cell.strip().casefold()
        return next((w.value for w in VOCABULARIES[field.vocabulary] if plain in (w.value, w.label.casefold())), cell)
    return cell
