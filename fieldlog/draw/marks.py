"""The few forms that a rose is made of, in the plane of the page: x to the right, y down,
bearings clockwise from the top. Mirrored in static/js/draw/marks.js."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any, Final

Shape = dict[str, Any]
"""One mark: `kind` circle, line, path or text, a `role` (its class), and numbers.

circle cx cy r; line x1 y1 x2 y2; text x y size text, centred on its point; path commands, a list of
["M", x, y], ["L", x, y], ["A", rx, ry, 0, large, sweep, x, y] and ["Z"].
"""

Point = tuple[float, float]

SHAFT: Final = 0.017
HEAD: Final = 0.075
HEAD_LENGTH: Final = 0.14
"""Half-widths and length of the arrow, in radii of the rim."""


def at(middle: float, bearing_deg: float, radius: float, aside: float = 0.0) -> Point:
    """The point at `radius` along a bearing and `aside` to the right of it."""
    angle = math.radians(bearing_deg)
    sine, cosine = math.sin(angle), math.cos(angle)
    return middle + radius * sine + aside * cosine, middle - radius * cosine + aside * sine


def circle(role: str, centre: Point, radius: float) -> Shape:
    """A circle."""
    return {"kind": "circle", "role": role, "cx": centre[0], "cy": centre[1], "r": radius}


def spoke(role: str, middle: float, bearing_deg: float, inner: float, outer: float) -> Shape:
    """A line along a bearing, from one distance from the middle to another."""
    (x1, y1), (x2, y2) = at(middle, bearing_deg, inner), at(middle, bearing_deg, outer)
    return {"kind": "line", "role": role, "x1": x1, "y1": y1, "x2": x2, "y2": y2}


def lettering(role: str, point: Point, size: float, text: str) -> Shape:
    """Text centred on a point."""
    return {"kind": "text", "role": role, "x": point[0], "y": point[1], "size": size, "text": text}


def polygon(role: str, points: Sequence[Point]) -> Shape:
    """A closed path through the points."""
    commands: list[list[Any]] = [["L", x, y] for x, y in points]
    commands[0][0] = "M"
    return {"kind": "path", "role": role, "commands": [*commands, ["Z"]]}


def petal(role: str, middle: float, bearing_deg: float, half_width_deg: float, radius: float) -> Shape:
    """A sector around a bearing."""
    start = at(middle, bearing_deg - half_width_deg, radius)
    end = at(middle, bearing_deg + half_width_deg, radius)
    commands = [["M", middle, middle], ["L", *start], ["A", radius, radius, 0, 0, 1, *end], ["Z"]]
    return {"kind": "path", "role": role, "commands": commands}


def arc(role: str, middle: float, low_deg: float, span_deg: float, radius: float, *, cap: float) -> Shape:
    """An arc clockwise from `low_deg`, a short cap across each end."""
    high = low_deg + span_deg
    commands = [
        ["M", *at(middle, low_deg, radius - cap)],
        ["L", *at(middle, low_deg, radius + cap)],
        ["M", *at(middle, low_deg, radius)],
        ["A", radius, radius, 0, 1 if span_deg > 180 else 0, 1, *at(middle, high, radius)],
        ["M", *at(middle, high, radius - cap)],
        ["L", *at(middle, high, radius + cap)],
    ]
    return {"kind": "path", "role": role, "commands": commands}


def arrow(role: str, middle: float, bearing_deg: float, length: float, rim: float) -> Shape:
    """An arrow from the centre; a short one is all head."""
    head = min(HEAD_LENGTH * rim, length)
    half = HEAD * rim * head / (HEAD_LENGTH * rim)
    shaft = min(SHAFT * rim, half)
    outline = [(0.0, -shaft), (length - head, -shaft), (length - head, -half), (length, 0.0),
               (length - head, half), (length - head, shaft), (0.0, shaft)]
    return polygon(role, [at(middle, bearing_deg, along, aside) for along, aside in outline])


def bar(role: str, middle: float, bearing_deg: float, length: float, rim: float) -> Shape:
    """A bar through the centre, as long to either side, a crosspiece at both ends."""
    cross = min(SHAFT * rim * 1.6, length)
    shaft, half = min(SHAFT * rim, length), min(HEAD * rim, length)
    right = [(-length, half), (-length + cross, half), (-length + cross, shaft),
             (length - cross, shaft), (length - cross, half), (length, half)]
    left = [(along, -aside) for along, aside in reversed(right)]
    return polygon(role, [at(middle, bearing_deg, along, aside) for along, aside in right + left])


def cross(role: str, centre: Point, reach: float) -> Shape:
    """A small cross, as what is crossed out is drawn."""
    x, y = centre
    commands = [["M", x - reach, y - reach], ["L", x + reach, y + reach],
                ["M", x - reach, y + reach], ["L", x + reach, y - reach]]
    return {"kind": "path", "role": role, "commands": commands}


def triangle(role: str, middle: float, bearing_deg: float, inner: float, outer: float) -> Shape:
    """A triangle that points outward."""
    half = (outer - inner) * 0.6
    return polygon(role, [at(middle, bearing_deg, outer), at(middle, bearing_deg, inner, half),
                          at(middle, bearing_deg, inner, -half)])


def flag(role: str, middle: float, bearing_deg: float, inner: float, outer: float) -> Shape:
    """An upright flag whose staff is centred between `inner` and `outer` along a bearing."""
    x, y = at(middle, bearing_deg, (inner + outer) / 2)
    half = (outer - inner) / 2
    commands = [["M", x, y + half], ["L", x, y - half], ["L", x + 1.3 * half, y - 0.5 * half], ["L", x, y]]
    return {"kind": "path", "role": role, "commands": commands}
