"""Text in CSV that no spreadsheet takes for a formula, and back.

A spreadsheet runs a cell that begins with = + - or @ as a formula, wherever it came from. Text that
begins so (or with a tab or a carriage return) gets one apostrophe in front; so does such text that
has apostrophes in front already, so that taking one away gives back exactly what was written.
"""

from __future__ import annotations

import re
from typing import Final

RISKY: Final = re.compile(r"'*[=+\-@\t\r]")
GUARDED: Final = re.compile(r"'+[=+\-@\t\r]")


def guarded(text: str) -> str:
    """The text as CSV carries it.

    >>> guarded("=2+3"), guarded("north"), guarded("'=2+3")
    ("'=2+3", 'north', "''=2+3")
    """
    return f"'{text}" if RISKY.match(text) else text


def unguarded(text: str) -> str:
    """The text that `guarded` was given.

    >>> unguarded("'=2+3"), unguarded("'Ayn")
    ('=2+3', "'Ayn")
    """
    return text[1:] if GUARDED.match(text) else text
