"""Progress on a terminal, nothing on a pipe."""

from __future__ import annotations

import sys
from collections.abc import Callable


def progress_line(what: str) -> Callable[[int, int], None]:
    """A function (done, of) that keeps one line up to date on standard error."""
    if not sys.stderr.isatty():
        return lambda done, of: None

    def show(done: int, of: int) -> None:
        end = "\n" if done >= of else ""
        print(f"\r{what}: {done} of {of}", end=end, file=sys.stderr, flush=True)

    return show
