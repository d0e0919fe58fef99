"""Where static/, templates/ and demo_survey/ are: beside the package in a checkout, inside it in a wheel."""

from __future__ import annotations

from functools import cache
from pathlib import Path


@cache
def base_folder() -> Path:
    """The folder that holds static/, templates/ and demo_survey/."""
    package = Path(__file__).resolve().parents[1]
    return next(folder for folder in (package, package.parent) if (folder / "static").is_dir())


def static_folder() -> Path:
    """Scripts, styles and pictures."""
    return base_folder() / "static"


def template_folder() -> Path:
    """Jinja templates."""
    return base_folder() / "templates"
