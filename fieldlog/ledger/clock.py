"""A hybrid logical clock: it gives reading order, and decides nothing.

Source: Kulkarni et al. (2014), "Logical Physical Clocks" (from memory): 48 bits of milliseconds
and a 16-bit counter. Mirrored in static/js/ledger/clock.js.
"""

from __future__ import annotations

import re
from typing import Final

FORM: Final = re.compile(r"[0-9a-f]{12}\.[0-9a-f]{4}")
LARGEST_LEAD_MS: Final = 10 * 60 * 1000
"""How far beyond its own time a clock lets a received stamp pull it."""


def stamp(millis: int, counter: int) -> str:
    """The stamp as text; texts compare as the stamps do."""
    return f"{millis:012x}.{counter:04x}"


def read_stamp(text: str) -> tuple[int, int]:
    """Milliseconds and counter; ValueError where the text is no stamp."""
    if FORM.fullmatch(text) is None:
        raise ValueError(f"not a clock stamp: {text!r}")
    return int(text[:12], 16), int(text[13:], 16)


def tick(last: str, now_ms: int) -> str:
    """The next stamp after `last` ("" for none), at wall time `now_ms`."""
    if not last:
        return stamp(now_ms, 0)
    millis, counter = read_stamp(last)
    if now_ms > millis:
        return stamp(now_ms, 0)
    return stamp(millis, counter + 1) if counter < 0xFFFF else stamp(millis + 1, 0)


def receive(last: str, seen: str, now_ms: int) -> str:
    """The clock's state after seeing another device's stamp, never more than ten minutes ahead."""
    millis, counter = read_stamp(seen)
    if millis > now_ms + LARGEST_LEAD_MS:
        millis, counter = now_ms + LARGEST_LEAD_MS, 0
    return max(last, stamp(millis, counter))
