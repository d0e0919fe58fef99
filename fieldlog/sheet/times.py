"""Times as the wire writes them: UTC, ISO 8601 with seconds, ending with Z."""

from __future__ import annotations

import re
from datetime import UTC, datetime, timedelta
from typing import Final

FORM: Final = re.compile(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d{1,3})?Z")


CLOCK_OFF_MS: Final = 60_000
"""A device's clock that is off by less is taken as right: what is learnt over a slow line is itself off by seconds."""


def read_time(text: str) -> datetime:
    """A time of the wire form, aware; ValueError where it is not one."""
    if FORM.fullmatch(text) is None:
        raise ValueError(f"not a UTC time like 2026-03-04T05:06:07Z: {text!r}")
    return datetime.fromisoformat(text)


def corrected(when: datetime, offset_ms: int | None) -> datetime:
    """A time of a device's clock by base's clock; `offset_ms` is base's less the device's, None where unknown."""
    if offset_ms is None or abs(offset_ms) <= CLOCK_OFF_MS:
        return when
    try:
        return when + timedelta(milliseconds=offset_ms)
    except OverflowError:
        return when


def wire_time(when: datetime) -> str:
    """A time as the wire writes it: with milliseconds only where there are any."""
    return iso_millis(when).replace(".000Z", "Z")


def iso_millis(when: datetime) -> str:
    """UTC as 2026-03-04T05:06:07.123Z."""
    return when.astimezone(UTC).isoformat(timespec="milliseconds").replace("+00:00", "Z")
