"""Pages as a reader has them."""

from __future__ import annotations

import re
from html.parser import HTMLParser


def plain(page: str) -> str:
    """A page as text, its drawings left out."""
    return re.sub(r"\s+", " ", re.sub(r"<svg.*?</svg>|<style.*?</style>|<[^>]+>", " ", page, flags=re.DOTALL)).replace("&lt;", "<")


def section(page: str, title: str) -> str:
    """The first part beneath a heading of the second order, as text."""
    return plain(page.partition(f"<h2>{title}</h2>")[2].partition("</article>")[0])


class _Reader(HTMLParser):
    VOID = frozenset({"meta", "link", "input", "br", "img"})

    def __init__(self) -> None:
        super().__init__()
        self.within: list[tuple[str, bool]] = []
        self.texts: list[tuple[str, bool]] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        given = dict(attrs)
        is_apart = tag in ("bdi", "title") or given.get("dir") == "auto"
        if tag == "input" and given.get("type") not in ("hidden", "checkbox"):
            self.texts.append((given.get("value") or "", is_apart))
        if tag not in self.VOID:
            self.within.append((tag, is_apart))

    def handle_endtag(self, tag: str) -> None:
        while self.within and self.within.pop()[0] != tag:
            pass

    def handle_data(self, data: str) -> None:
        self.texts.append((data, bool(self.within) and self.within[-1][1]))


def apart(page: str) -> list[tuple[str, bool]]:
    """Every text of a page, and whether its own element sets it apart in direction (bdi, or dir=auto)."""
    reader = _Reader()
    reader.feed(page)
    return reader.texts
