"""Shapes to SVG text. Mirrored in static/js/draw/svg.js, which makes elements instead.

Colours come from static/css/rose.css by the class of each group; the presentation attributes of
PAINT are what a copy without that style sheet shows. No style attribute and no script: the
content security policy forbids both.
"""

from __future__ import annotations

from collections.abc import Mapping
from html import escape
from itertools import groupby
from typing import Any, Final

from fieldlog.draw.marks import Shape
from fieldlog.draw.rose import Rose

PAINT: Final[Mapping[str, Mapping[str, str]]] = {
    "rose-petal": {"fill": "#e4d5ba"},
    "rose-rim": {"fill": "none", "stroke": "#7b7062"},
    "rose-tick": {"stroke": "#7b7062"},
    "rose-north": {"stroke": "#1c1915", "stroke-width": "2"},
    "rose-letter": {"fill": "#1c1915"},
    "rose-threshold": {"fill": "none", "stroke": "#7b7062", "stroke-dasharray": "3 3"},
    "rose-dot": {"fill": "#1c1915"},
    "rose-end": {"fill": "#fffdf8", "stroke": "#1c1915"},
    "rose-marked": {"fill": "none", "stroke": "#8e3516", "stroke-width": "1.5"},
    "rose-crossed-out": {"fill": "none", "stroke": "#1c1915"},
    "rose-mean": {"fill": "#1c1915", "stroke": "#fffdf8"},
    "rose-mean-hollow": {"fill": "#fffdf8", "stroke": "#1c1915", "stroke-width": "1.5"},
    "rose-interval": {"fill": "none", "stroke": "#1c1915", "stroke-width": "2"},
    "rose-mode": {"stroke": "#1c1915", "stroke-width": "3"},
    "rose-expected": {"fill": "none", "stroke": "#1c1915", "stroke-width": "1.5"},
    "rose-wind": {"fill": "#1c1915", "stroke": "#1c1915", "stroke-width": "1.5"},
    "rose-figure": {"fill": "#1c1915", "font-weight": "700"},
    "rose-empty": {"fill": "#574f44"},
}


def svg(rose: Rose, *, identifier: str = "", classes: str = "") -> str:
    """The rose as an SVG element with its text twin.

    `identifier` makes the ids of title and description unique on a page that shows several;
    `classes` are added to the element's own "rose rose-full" (or rose-middle, rose-small).
    """
    prefix = escape(identifier or "rose")
    size = number(rose.size)
    head = (
        f'<svg xmlns="http://www.w3.org/2000/svg" class="{escape(f"rose rose-{rose.detail} {classes}".strip())}" '
        f'viewBox="0 0 {size} {size}" width="{size}" height="{size}" role="img" '
        f'aria-labelledby="{prefix}-title {prefix}-text">'
        f'<title id="{prefix}-title">{escape(rose.title)}</title>'
        f'<desc id="{prefix}-text">{escape(rose.text)}</desc>'
    )
    groups: list[str] = []
    for role, shapes in groupby(rose.shapes, key=lambda shape: shape["role"]):
        paint = "".join(f' {name}="{escape(value)}"' for name, value in PAINT[role].items())
        groups.append(f'<g class="{escape(role)}"{paint}>{"".join(map(element, shapes))}</g>')
    return f"{head}{''.join(groups)}</svg>"


def element(shape: Shape) -> str:
    """One shape as an SVG element without paint."""
    if shape["kind"] == "text":
        return (f'<text x="{number(shape["x"])}" y="{number(shape["y"])}" font-size="{number(shape["size"])}" '
                f'text-anchor="middle" dominant-baseline="central">{escape(shape["text"])}</text>')
    if shape["kind"] == "path":
        return f'<path d="{path_data(shape["commands"])}"/>'
    numbers = "".join(f' {name}="{number(v)}"' for name, v in shape.items() if name not in ("kind", "role"))
    return f"<{shape['kind']}{numbers}/>"


def path_data(commands: list[list[Any]]) -> str:
    """Commands as the text of a path's `d`."""
    return "".join(f"{letter}{' '.join(number(v) for v in numbers)}" for letter, *numbers in commands)


def number(value: float) -> str:
    """Hundredths of a pixel are enough; no trailing zeros."""
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
