"""Draw the app's icons: a small rose. `python -m fieldlog.draw.icons` writes them into static/icons/.

One geometry, written as SVG and drawn by Pillow at four times the size for the PNGs.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from pathlib import Path
from typing import Final

PAPER: Final = "#f8f3e8"
INK: Final = "#1c1915"
ACCENT: Final = "#8e3516"
RIM: Final = 0.34
MEAN_DEG: Final = 214.0
READINGS_DEG: Final = (186.0, 199.0, 207.0, 214.0, 221.0, 229.0, 243.0)
PNG_SIZES: Final = {"icon-192.png": 192, "icon-512.png": 512}

Point = tuple[float, float]


def _at(direction_deg: float, radius: float) -> Point:
    """A point in the unit square, north up."""
    angle = math.radians(direction_deg)
    return 0.5 + radius * math.sin(angle), 0.5 - radius * math.cos(angle)


def _ticks() -> Iterator[tuple[Point, Point]]:
    for direction_deg in range(0, 360, 30):
        yield _at(direction_deg, RIM), _at(direction_deg, RIM - (0.06 if direction_deg % 90 == 0 else 0.035))


def _arrow_head() -> list[Point]:
    tip = _at(MEAN_DEG, 0.25)
    base = _at(MEAN_DEG, 0.13)
    across = math.radians(MEAN_DEG + 90)
    dx, dy = 0.065 * math.sin(across), -0.065 * math.cos(across)
    return [tip, (base[0] + dx, base[1] + dy), (base[0] - dx, base[1] - dy)]


def svg() -> str:
    """The icon as SVG text, 100 units wide."""

    def fmt(*numbers: float) -> list[str]:
        return [f"{100 * number:.2f}" for number in numbers]

    parts = [f'<rect width="100" height="100" fill="{PAPER}"/>']
    parts.append(f'<circle cx="50" cy="50" r="{100 * RIM:g}" fill="none" stroke="{INK}" stroke-width="2.4"/>')
    for start, end in _ticks():
        x1, y1, x2, y2 = fmt(*start, *end)
        parts.append(f'<path d="M{x1} {y1}L{x2} {y2}" stroke="{INK}" stroke-width="1.8"/>')
    for direction_deg in READINGS_DEG:
        x, y = fmt(*_at(direction_deg, RIM))
        parts.append(f'<circle cx="{x}" cy="{y}" r="2.9" fill="{INK}"/>')
    x, y = fmt(*_at(MEAN_DEG, 0.15))
    parts.append(f'<path d="M50 50L{x} {y}" stroke="{ACCENT}" stroke-width="4"/>')
    head = "L".join(" ".join(fmt(*point)) for point in _arrow_head())
    parts.append(f'<path d="M{head}Z" fill="{ACCENT}"/>')
    return f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 100 100">{"".join(parts)}</svg>\n'


def write_png(path: Path, size: int) -> None:
    """The icon as PNG in a small palette."""
    from PIL import Image, ImageDraw

    big = 4 * size
    image = Image.new("RGB", (big, big), PAPER)
    draw = ImageDraw.Draw(image)

    def px(point: Point) -> Point:
        return point[0] * big, point[1] * big

    def disc(centre: Point, radius: float, **how: object) -> None:
        x, y = px(centre)
        r = radius * big
        draw.ellipse((x - r, y - r, x + r, y + r), **how)  # type: ignore[arg-type]

    disc((0.5, 0.5), RIM + 0.012, outline=INK, width=round(0.024 * big))
    for start, end in _ticks():
        draw.line((*px(start), *px(end)), fill=INK, width=round(0.018 * big))
    for direction_deg in READINGS_DEG:
        disc(_at(direction_deg, RIM), 0.029, fill=INK)
    draw.line((*px((0.5, 0.5)), *px(_at(MEAN_DEG, 0.15))), fill=ACCENT, width=round(0.04 * big))
    draw.polygon([px(point) for point in _arrow_head()], fill=ACCENT)
    small = image.resize((size, size), Image.Resampling.LANCZOS)
    small.quantize(8, dither=Image.Dither.NONE).save(path, optimize=True)


def main() -> None:
    """Write the icons of the phone app anew."""
    folder = Path(__file__).resolve().parents[2] / "static" / "icons"
    folder.mkdir(exist_ok=True)
    (folder / "icon.svg").write_text(svg(), encoding="utf-8")
    for name, size in PNG_SIZES.items():
        write_png(folder / name, size)


if __name__ == "__main__":
    main()
