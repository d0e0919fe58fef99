"""The rose: bearings and their summary to shapes. Mirrored in static/js/draw/rose.js.

North is up. Every reading is a dot at its bearing on the rim, stacked inward where dots would
overlap. Petals behind them have their area in proportion to their share of the readings, on one
scale for every rose: all readings in one petal would reach the rim. The arrow (or, for axes, the
bar) has the mean resultant length on a scale where the rim is 1; inside the threshold ring, the
length that the Rayleigh test needs at the 5 % level, it is hollow. What counts, dunes or readings,
is the summary's choice.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final, Protocol

from fieldlog.draw import marks
from fieldlog.draw.marks import Shape
from fieldlog.draw.reading_aloud import Petals, spoken, title, whole
from fieldlog.draw.stack import stack, turn
from fieldlog.errors import Refusal

PETAL_DEG: Final = 20.0
"""A multiple of the usual reading steps (1, 2, 5, 10), so that no petal is favoured by rounding."""

FEWEST_FOR_PETALS: Final = 8

LETTER_CLEARANCE_DEG: Final = 12.0


class RoseError(Refusal, ValueError):
    """What was asked for cannot be drawn."""


class Summary(Protocol):
    """What the rose needs of fieldlog.science.summary.Summary; angles in degrees, None where the
    value does not exist."""

    @property
    def mean_direction_deg(self) -> float | None: ...
    @property
    def resultant_length(self) -> float | None: ...
    @property
    def threshold_resultant(self) -> float | None: ...
    @property
    def ci95_low_deg(self) -> float | None: ...
    @property
    def ci95_high_deg(self) -> float | None: ...
    @property
    def modes(self) -> Any: ...
    @property
    def outcome(self) -> str: ...
    @property
    def finding(self) -> str: ...


@dataclass(frozen=True)
class Rose:
    """The shapes in drawing order, in a square of `size`; `title` and `text` are its text twin."""

    size: float
    detail: str
    shapes: list[Shape]
    title: str
    text: str


@dataclass(frozen=True)
class Layout:
    """Lengths for a square of `reference`; those after `dots` are distances outward from the rim."""

    detail: str
    reference: float
    rim: float
    dots: tuple[float, ...]
    tick: tuple[float, float]
    tick_every_deg: int
    interval: tuple[float, float]
    mode: tuple[float, float] | None
    expected: tuple[float, float] | None
    letters: tuple[str, ...]
    letter: tuple[float, float]
    label: float


LAYOUTS: Final = (
    Layout("full", 320, 110, (4.2, 3.6), (4, 8), 30, (12, 3), (16, 23), (25, 37),
           ("N", "E", "S", "W"), (42, 14), 20),
    Layout("middle", 120, 45, (2.6, 2.2), (2, 4.5), 30, (6, 1.6), (8.5, 13), (8, 15), (), (0, 0), 0),
    Layout("small", 64, 27, (1.7, 1.5), (1.5, 4), 360, (3.2, 0), None, None, (), (0, 0), 0),
)
"""From the one with most marks down; a size takes the first that is at most 1.6 times as large."""


def rose(
    readings_deg: Sequence[float],
    summary: Summary,
    *,
    axial: bool,
    size: float,
    crossed_out_deg: Sequence[float] = (),
    expected_deg: float | None = None,
    marked: Sequence[int] = (),
) -> Rose:
    """The rose of a sample.

    `readings_deg`: degrees from true north, directions (towards) or, with `axial`, axes; any length,
    none included. `summary`: their summary. `size`: side of the square in CSS pixels; small roses
    have fewer marks. `crossed_out_deg`: readings to show as crosses. `expected_deg`: the expected
    facing, towards; its source wind is flagged on the other side. `marked`: positions in
    `readings_deg` to ring. Raises RoseError for a bearing that is not a finite number.
    """
    for name, values in (("reading", readings_deg), ("crossed-out reading", crossed_out_deg)):
        for i, value in enumerate(values):
            if not math.isfinite(value):
                raise RoseError(f"{value} is not a bearing", f"{name} {i + 1}", "Give degrees as a number.")
    layout = next((one for one in LAYOUTS if size * 1.6 >= one.reference), LAYOUTS[-1])
    drawing = _Drawing(layout, size, axial)
    petals = petal_counts(readings_deg, axial)
    drawing.petals(petals, len(readings_deg))
    drawing.ground(summary.threshold_resultant if len(readings_deg) else None)
    drawing.letters(expected_deg)
    # A hollow arrow would blank the dots that it lies on, a solid one would be broken up by them.
    solid = shows_direction(summary)
    if not solid:
        drawing.mean(summary, "rose-mean-hollow")
    rings = drawing.dots(readings_deg, crossed_out_deg, frozenset(marked))
    if solid:
        drawing.mean(summary, "rose-mean")
    drawing.shapes.extend(rings)
    drawing.outside(summary, expected_deg)
    drawing.label(summary, len(readings_deg) > 0)
    text = spoken(readings_deg, summary, petals, axial, crossed_out_deg=crossed_out_deg, expected_deg=expected_deg)
    return Rose(size, layout.detail, drawing.shapes, title(len(readings_deg), summary, axial), text)


def petal_counts(readings_deg: Sequence[float], axial: bool) -> Petals:
    """(middle bearing, count) of each petal, from north clockwise; axes from 0 to 180. A reading on
    the border of two petals counts half in each."""
    period = 180.0 if axial else 360.0
    n = round(period / PETAL_DEG)
    counts = [0.0] * n
    for reading in readings_deg:
        place = turn(reading + PETAL_DEG / 2, period) / PETAL_DEG
        k = math.floor(place)
        if place == k:
            counts[k - 1] += 0.5
            counts[k] += 0.5
        else:
            counts[k % n] += 1.0
    return [(k * PETAL_DEG, count) for k, count in enumerate(counts)]


class _Drawing:
    """Adds marks to one list, scaled to the size asked for."""

    def __init__(self, layout: Layout, size: float, axial: bool) -> None:
        self.layout = layout
        self.scale = size / layout.reference
        self.middle = size / 2
        self.rim = layout.rim * self.scale
        self.ends = (0.0, 180.0) if axial else (0.0,)
        self.axial = axial
        self.shapes: list[Shape] = []

    def band(self, pair: tuple[float, float]) -> tuple[float, float]:
        return self.rim + pair[0] * self.scale, self.rim + pair[1] * self.scale

    def petals(self, petals: Petals, n: int) -> None:
        if n < FEWEST_FOR_PETALS:
            return
        for bearing, count in petals:
            if count:
                radius = self.rim * math.sqrt(count / n)
                for end in self.ends:
                    self.shapes.append(marks.petal("rose-petal", self.middle, bearing + end, PETAL_DEG / 2, radius))

    def ground(self, threshold: float | None) -> None:
        centre = (self.middle, self.middle)
        self.shapes.append(marks.circle("rose-rim", centre, self.rim))
        for bearing in range(0, 360, self.layout.tick_every_deg):
            role = "rose-tick" if bearing else "rose-north"
            self.shapes.append(marks.spoke(role, self.middle, bearing, *self.band(self.layout.tick)))
        if threshold is not None and threshold <= 1:
            self.shapes.append(marks.circle("rose-threshold", centre, self.rim * threshold))

    def letters(self, expected: float | None) -> None:
        """N E S W, but none where the expected facing or its wind stands."""
        distance, height = self.layout.letter
        for i, letter in enumerate(self.layout.letters):
            if expected is not None and abs(turn(expected - 90.0 * i + 90.0, 180.0) - 90.0) < LETTER_CLEARANCE_DEG:
                continue
            place = marks.at(self.middle, 90.0 * i, self.rim + distance * self.scale)
            self.shapes.append(marks.lettering("rose-letter", place, height * self.scale, letter))

    def dots(self, readings: Sequence[float], crossed_out: Sequence[float], marked: frozenset[int]) -> list[Shape]:
        """Dots and crosses; returns the rings of marked readings, which go over everything."""
        period = 180.0 if self.axial else 360.0
        sizes = [dot * self.scale for dot in self.layout.dots]
        both = [*readings, *crossed_out]
        stacked = stack(both, period, self.rim, sizes)
        dot, n = stacked.dot, len(readings)
        role = "rose-end" if self.axial else "rose-dot"
        rings: list[Shape] = []
        for i, bearing in enumerate(both):
            radius = self.rim - stacked.levels[i] * stacked.step
            for end in self.ends:
                place = marks.at(self.middle, turn(bearing, period) + end, radius)
                if i < n:
                    self.shapes.append(marks.circle(role, place, dot))
                else:
                    self.shapes.append(marks.cross("rose-crossed-out", place, dot))
                if i < n and i in marked:
                    rings.append(marks.circle("rose-marked", place, dot * 1.9))
        return rings

    def mean(self, summary: Summary, role: str) -> None:
        direction, length = summary.mean_direction_deg, summary.resultant_length
        if direction is None or length is None:
            return
        draw = marks.bar if self.axial else marks.arrow
        self.shapes.append(draw(role, self.middle, direction, self.rim * min(length, 1.0), self.rim))

    def outside(self, summary: Summary, expected: float | None) -> None:
        low, high = summary.ci95_low_deg, summary.ci95_high_deg
        if low is not None and high is not None:
            distance, cap = self.layout.interval
            span = turn(high - low, 180.0 if self.axial else 360.0)
            for end in self.ends:
                self.shapes.append(marks.arc("rose-interval", self.middle, low + end, span,
                                             self.rim + distance * self.scale, cap=cap * self.scale))
        if self.layout.mode:
            for mode in summary.modes or ():
                for end in self.ends:
                    bearing = mode_direction(mode) + end
                    self.shapes.append(marks.spoke("rose-mode", self.middle, bearing, *self.band(self.layout.mode)))
        if self.layout.expected and expected is not None:
            inner, outer = self.band(self.layout.expected)
            self.shapes.append(marks.triangle("rose-expected", self.middle, expected, inner, outer))
            self.shapes.append(marks.flag("rose-wind", self.middle, expected + 180.0, inner, outer))

    def label(self, summary: Summary, any_readings: bool) -> None:
        """The mean in figures, where a mean may be announced: behind the arrow, beside the bar."""
        if not self.layout.label:
            return
        height = self.layout.label * self.scale
        if not any_readings:
            place = marks.at(self.middle, 180.0, self.rim * 0.5)
            self.shapes.append(marks.lettering("rose-empty", place, height * 0.8, "no readings yet"))
        elif shows_direction(summary) and summary.outcome == "one" and summary.mean_direction_deg is not None:
            limit = 180 if self.axial else 360
            aside = 90.0 if self.axial else 180.0
            place = marks.at(self.middle, summary.mean_direction_deg + aside, self.rim * 0.42)
            figures = f"{whole(summary.mean_direction_deg, limit)}\N{DEGREE SIGN}"
            self.shapes.append(marks.lettering("rose-figure", place, height, figures))


def shows_direction(summary: Summary) -> bool:
    """Whether the resultant reaches what the Rayleigh test needs."""
    length, threshold = summary.resultant_length, summary.threshold_resultant
    return length is not None and threshold is not None and length >= threshold


def mode_direction(mode: Any) -> float:
    """The direction of one mode, given as a mapping or as an object."""
    return float(mode["direction_deg"] if isinstance(mode, dict) else mode.direction_deg)
