"""The circular statistics: what their intervals, tests and outcomes are worth, and what they cost."""

from __future__ import annotations

from tests.bench import coverage, decisions, levels, needing, speed
from tests.bench.trials import Numbers


def measure() -> Numbers:
    """All of the group."""
    found: Numbers = {}
    for part in (speed, levels, needing, decisions, coverage):
        print(f"{part.__name__.rpartition('.')[2]}:", flush=True)
        found |= part.measure()
    return found
