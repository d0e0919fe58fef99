"""The photos: drawn, not taken. Sand, sky and stones with grain noise, seeded."""

from __future__ import annotations

import io
import zlib
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from PIL import Image, ImageDraw

WIDTH, HEIGHT = 400, 300
QUALITY = 62
SAME_PICTURE = 12.0
"""Mean difference of two pictures, in grey levels of 255, up to which they show the same."""

Points = list[tuple[float, float]]
LIT, SHADE, FLOOR = (222, 178, 122), (150, 104, 70), (205, 170, 126)


def jpeg(name: str, standing: Path) -> bytes:
    """The photo called `name` as JPEG.

    Encoders differ between releases of the picture library, and the ledger names a photo by its
    bytes: a file that already shows this very picture is therefore kept as it stands.
    """
    drawn = _drawing(name)
    if standing.exists():
        kept = standing.read_bytes()
        with Image.open(io.BytesIO(kept)) as image:
            shown = np.asarray(image.convert("RGB"), dtype=float)
        if shown.shape == drawn.shape and np.abs(shown - drawn).mean() < SAME_PICTURE:
            return kept
    out = io.BytesIO()
    Image.fromarray(drawn.astype(np.uint8)).save(out, "JPEG", quality=QUALITY)
    return out.getvalue()


def _drawing(name: str) -> NDArray[np.float64]:
    """Height x width x 3, 0 to 255."""
    random = np.random.RandomState(zlib.crc32(name.encode()))
    image = Image.new("RGB", (WIDTH, HEIGHT), FLOOR)
    draw = ImageDraw.Draw(image)
    if name.startswith("hesk"):
        _stones(draw, random)
    else:
        _sky(draw)
        {"tamrel": _ridge, "belq": _star, "turnback": _cap, "lomar": _line}[name.split("-", maxsplit=1)[0]](draw)
    grain = random.normal(0, 9, (HEIGHT, WIDTH, 1)) + random.normal(0, 3, (HEIGHT, WIDTH, 3))
    grain[: HEIGHT // 4] *= 0.4
    return np.clip(np.asarray(image, dtype=float) + grain, 0, 255)


def _sky(draw: ImageDraw.ImageDraw) -> None:
    for y in range(150):
        draw.line([(0, y), (WIDTH, y)], fill=(150 + y // 3, 186 + y // 4, 222))


def _curve(*knots: tuple[float, float]) -> Points:
    """Points every four pixels along a smooth way through the knots."""
    xs = np.arange(knots[0][0], knots[-1][0] + 1, 4.0)
    ys = np.interp(xs, [k[0] for k in knots], [k[1] for k in knots])
    padded = np.pad(ys, 6, mode="edge")
    return list(zip(xs.tolist(), np.convolve(padded, np.ones(13) / 13, "valid").tolist(), strict=True))


def _ridge(draw: ImageDraw.ImageDraw) -> None:
    crest = _curve((0, 170), (120, 95), (250, 120), (400, 80))
    foot = _curve((0, 215), (130, 205), (260, 225), (400, 190))
    draw.polygon([(0, HEIGHT), *crest, (WIDTH, HEIGHT)], fill=LIT)
    draw.polygon([*crest, *reversed(foot)], fill=SHADE)


def _star(draw: ImageDraw.ImageDraw) -> None:
    peak = (190.0, 60.0)
    draw.polygon([(0, 230), peak, (WIDTH, 220), (WIDTH, HEIGHT), (0, HEIGHT)], fill=LIT)
    draw.polygon([peak, (120, 240), (235, 262), (215, 140)], fill=SHADE)
    draw.polygon([peak, (300, 200), (WIDTH, 220)], fill=(186, 138, 94))


def _cap(draw: ImageDraw.ImageDraw) -> None:
    crest = _curve((0, 210), (150, 130), (240, 100), (400, 150))
    draw.polygon([(0, HEIGHT), *crest, (WIDTH, HEIGHT)], fill=LIT)
    draw.polygon([*crest[36:], (400, 240), (250, 200)], fill=SHADE)
    draw.polygon([(140, 138), (240, 100), (236, 122), (150, 152)], fill=(120, 84, 58))


def _line(draw: ImageDraw.ImageDraw) -> None:
    draw.polygon([(0, 260), (206, 110), (214, 110), (WIDTH, 250), (WIDTH, HEIGHT), (0, HEIGHT)], fill=LIT)
    draw.polygon([(210, 110), (185, 180), (225, 235), (170, HEIGHT), (WIDTH, HEIGHT), (WIDTH, 250)], fill=SHADE)


def _stones(draw: ImageDraw.ImageDraw, random: np.random.RandomState) -> None:
    for _ in range(420):
        x, y = random.uniform(0, WIDTH), random.uniform(0, HEIGHT)
        wide = random.gamma(3.0, 3.2) + 3
        high = wide * random.uniform(0.55, 0.9)
        grey = int(random.uniform(55, 130))
        draw.ellipse([x - wide, y - high + 3, x + wide, y + high + 3], fill=(150, 122, 92))
        draw.ellipse([x - wide, y - high, x + wide, y + high], fill=(grey + 18, grey + 4, grey - 8))
