"""What the house's rules are read from: the files of the repository, not what lies beside them."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

from tests.conftest import ROOT

PARTS = ("fieldlog", "static", "templates", "tests", "demo_survey", ".ci")
TOP = ("README.md", "DEVELOPERS.md", "CHANGELOG.md", "LICENSE", "Makefile", "pyproject.toml", ".gitignore")
NOT_OURS = ("node_modules", "__pycache__")
TEXT = {".py", ".js", ".ts", ".md", ".html", ".css", ".json", ".toml", ".svg", ".jsonl", ".gpx", ".mako", ".webmanifest", ""}
GENERATED = ("static/js/sheet/declared.js", "static/js/science/wmm.js")


def ours(*suffixes: str) -> Iterator[Path]:
    """The repository's text files, those with these endings where any is named."""
    for part in PARTS:
        for path in sorted((ROOT / part).rglob("*")):
            inside = path.relative_to(ROOT).parts
            if path.is_file() and not set(inside) & set(NOT_OURS) and path.suffix in (suffixes or TEXT):
                yield path
    for name in TOP:
        if not suffixes or Path(name).suffix in suffixes:
            yield ROOT / name


def name_of(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()
