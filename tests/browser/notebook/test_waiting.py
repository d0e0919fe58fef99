"""How long a phone waits before it tries again, by the pure function."""

from __future__ import annotations

from mirror import javascript


def test_waits_grow_from_two_seconds_to_five_minutes() -> None:
    longest = javascript("handover/backoff.js", *[["longestWaitMillis", failures] for failures in (1, 2, 3, 8, 9, 1000)])
    assert longest == [2_000, 4_000, 8_000, 256_000, 300_000, 300_000]
