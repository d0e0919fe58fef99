"""Times as the wire writes them: UTC, ISO 8601 with seconds, ending with Z."""

from __future__ import annotations

import re
from datetime import UTC, datetime
from typing import Final

FORM: Final = re.compile(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d{1,3})?Z")


def read_time(text: str) -> datetime:
    """A time of the wire form, aware; ValueError where it is not one."""
    if FORM.fullmatch(text) is None:
        raise ValueError(f"not a UTC time like 2026-03-04T05:06:07Z: {text!r}")
    return datetime.fromisoformat(text)


def wire_time(when: datetime) -> str:
    """A time as the wire writes it: with milliseconds only where there are any."""
    return iso_millis(when).replace(".000Z", "Z")


def iso_millis(when: datetime) -> str:
    """UTC as 2026-03-04T05:06:07.123Z."""
    return when.astimezone(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")
