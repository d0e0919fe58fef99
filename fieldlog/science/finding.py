"""The one place that decides what a sample shows, and says it in one sentence.

The same words on phone, day sheet, command line and report: static/js/science/finding.js mirrors
this module.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

from fieldlog.science.angles import apart, reduced_one
from fieldlog.science.modes import Mode

OUTCOMES: Final = ("one", "two_opposed", "two", "three_or_more", "spread", "too_few")
NAMED: Final = {
    "two_opposed": "two opposed directions",
    "two": "two directions",
    "three_or_more": "three or more directions",
}
LEVEL: Final = 0.05
LEVEL_MULTIPLIED: Final = 0.025
"""For doubled and trebled angles, which are looked at as well as the plain ones."""
OPPOSED_FROM_DEG: Final = 150.0
SPREAD_FROM: Final = 10
"""Below this number, no direction found is no finding of absence: the tests have little power."""


@dataclass(frozen=True)
class Pattern:
    """Rayleigh p and resultant length of the angles, doubled and trebled (p None below two)."""

    p: tuple[float | None, float | None, float | None]
    length: tuple[float, float, float]


def decide(n: int, fewest: int, pattern: Pattern, modes: Sequence[Mode] | None, *, axial: bool) -> str:
    """The outcome of a sample of n independent directions.

    Modes, where they were sought (20 or more), decide first. Otherwise doubled and trebled angles
    decide where they are significant at 2.5 % and longer than the plain resultant (one direction
    always has the longest), then the Rayleigh test at 5 %. Of 2,000 seeded samples of 30 readings
    each the outcome is right in the shares that `make bench` prints as circular.outcome_right_min.
    """
    if n < fewest:
        return "too_few"
    if modes is not None and len(modes) >= 2:
        if len(modes) >= 3:
            return "three_or_more"
        opposed = apart(modes[0].direction_deg, modes[1].direction_deg) >= OPPOSED_FROM_DEG
        return "two_opposed" if opposed and not axial else "two"
    one, doubled, trebled = (p is not None and p <= level for p, level in zip(pattern.p, _LEVELS, strict=True))
    length = pattern.length
    if trebled and length[2] > max(length[0], length[1]):
        return "three_or_more"
    if doubled and length[1] > length[0]:
        return "two" if axial else "two_opposed"
    if one:
        return "one"
    if doubled:
        return "two" if axial else "two_opposed"
    if trebled:
        return "three_or_more"
    return "spread" if n >= SPREAD_FROM else "too_few"


_LEVELS: Final = (LEVEL, LEVEL_MULTIPLIED, LEVEL_MULTIPLIED)


@dataclass(frozen=True)
class Facts:
    """What the sentence needs; degrees as shown (axes already halved back)."""

    outcome: str
    readings: int
    bedforms: int | None
    fewest: int
    axial: bool
    subject: str
    mean_deg: float | None
    half_width_deg: float | None
    directions_deg: Sequence[float]
    target_deg: float | None
    enough: bool | None
    needed: int | None


def finding(facts: Facts) -> str:
    """One plain sentence."""
    counts = _counts(facts)
    if facts.readings == 0:
        return "No readings."
    if facts.outcome == "one":
        return f"{_lead(facts)} {_mean(facts)}: {counts}, one direction{_reach(facts)}."
    if facts.outcome == "too_few":
        return _too_few(facts, counts)
    if facts.outcome == "spread":
        return f"{counts} {'is' if facts.readings == 1 else 'are'} spread all round: no direction shows."
    ways = join([str(whole(d, facts.axial)) for d in sorted(facts.directions_deg)])
    where = f" {ways} deg" if ways else " more than one way"
    return f"{_lead(facts)}{where}: {counts}, {NAMED[facts.outcome]}; no single mean."


def whole(angle_deg: float, axial: bool) -> int:
    """Whole degrees, 0 <= x < 360 (180 for axes): 359.7 reads 0."""
    limit = 180 if axial else 360
    return math.floor(reduced_one(angle_deg, limit) + 0.5) % limit


def join(parts: Sequence[str]) -> str:
    """"a", "a and b", "a, b and c"."""
    return parts[0] if len(parts) == 1 else ", ".join(parts[:-1]) + " and " + parts[-1] if parts else ""


def counted(n: int, singular: str) -> str:
    """"1 dune", "6 dunes"."""
    return f"{n} {singular}" if n == 1 else f"{n} {singular}s"


def degrees(value: float) -> str:
    """A target as the lead wrote it: 10, 7.5."""
    tenths = math.floor(value * 10 + 0.5) / 10
    return str(int(tenths)) if tenths == int(tenths) else f"{tenths:.1f}"


def _counts(facts: Facts) -> str:
    said = counted(facts.readings, "reading")
    return said if facts.bedforms is None else f"{said} on {counted(facts.bedforms, 'dune')}"


def _lead(facts: Facts) -> str:
    subject = facts.subject[:1].upper() + facts.subject[1:]
    if facts.axial:
        return f"{subject} trend"
    return f"{subject} face" if "face" in facts.subject.lower() else f"{subject} point towards"


def _mean(facts: Facts) -> str:
    if facts.mean_deg is None:
        return "no mean"
    mean = whole(facts.mean_deg, facts.axial)
    if facts.half_width_deg is None:
        return f"about {mean} deg, without an interval"
    # Rounded up, so that the sentence never claims more than was reached.
    return f"{mean} +/- {math.ceil(facts.half_width_deg - 1e-9)} deg"


def _reach(facts: Facts) -> str:
    if facts.target_deg is None or facts.enough is None:
        return ""
    target = f"+/- {degrees(facts.target_deg)} deg"
    if facts.enough:
        return f"; enough for {target}"
    have = facts.readings if facts.bedforms is None else facts.bedforms
    if facts.needed is None:
        return f"; {target} is out of reach" if facts.half_width_deg is not None else f"; not enough for {target}"
    more = counted(facts.needed - have, "more reading" if facts.bedforms is None else "more dune")
    return f"; not yet enough for {target}: about {more}, {facts.needed} in all"


def _too_few(facts: Facts, counts: str) -> str:
    units = facts.readings if facts.bedforms is None else facts.bedforms
    if units < facts.fewest:
        unit = "readings" if facts.bedforms is None else "dunes"
        return f"{counts} {'is' if facts.readings == 1 else 'are'} too few to say: read at least {facts.fewest} {unit}."
    return f"{counts} {'does' if facts.readings == 1 else 'do'} not show a direction."
