"""Handing over: bytes on the wire and work at the store."""

from __future__ import annotations

from tests.bench import appending, wire
from tests.bench.trials import Numbers


def measure() -> Numbers:
    """All of the group."""
    return {**wire.measure(), **appending.measure()}
