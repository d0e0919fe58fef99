"""From a merged record to the row that the tables hold. Mirrored in static/js/ledger/project.js."""

from __future__ import annotations

from typing import Any

from fieldlog.ledger.merge import Merged
from fieldlog.sheet.derive import derive
from fieldlog.sheet.fields import ABSENCES, Field, Sheet, absent_column
from fieldlog.sheet.subjects import SHEETS
from fieldlog.sheet.times import corrected, read_time


def project(merged: Merged) -> dict[str, Any]:
    """The row of one record: the sheet's columns with Python values (times as aware UTC datetimes, those
    of a device's clock corrected by its offset), derived columns, and made_by, made_on, made_at of its creating entry, which must be there.

    Fields that the sheet does not know stay in the ledger and out of the row.
    """
    created = merged.created
    if created is None:
        raise ValueError("a record without its creating entry has no row yet")
    sheet = SHEETS[created.kind]
    row = _columns(sheet, merged)
    row["record"] = created.name
    row["made_by"] = created.body["by"]
    row["made_on"] = created.device
    row["made_at"] = read_time(created.body["made_at"])
    return row


def _columns(sheet: Sheet, merged: Merged) -> dict[str, Any]:
    row: dict[str, Any] = {}
    for field in sheet.said:
        value = merged.values.get(field.name)
        absent = None
        if isinstance(value, dict):
            absent, value = value.get("absent"), None
        row[field.name] = _native(field, value)
        if field.measure:
            row[absent_column(field.name)] = absent if absent in ABSENCES else None
    for field in sheet.fields:
        if field.is_derived and field.type == "time":
            row[field.name] = row[field.derived_from[0]]
    for field in sheet.said:
        if field.clocked and row[field.name] is not None:
            row[field.name] = corrected(row[field.name], merged.offsets_ms.get(field.name))
    row.update(derive(sheet, row))
    for field in sheet.fields:
        if field.is_derived and field.measure:
            row[absent_column(field.name)] = None
    return row


def _native(field: Field, value: Any) -> Any:
    if value is None:
        return None
    if field.type == "time":
        return read_time(value)
    if field.type in ("number", "direction", "orientation"):
        return float(value)
    return value
