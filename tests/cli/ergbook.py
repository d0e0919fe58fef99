"""The real command in a process of its own, as a person calls it."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path


def ergbook(*arguments: str, given: str = "", data_dir: Path | None = None, **environment: str) -> subprocess.CompletedProcess[str]:
    """Run it to its end; `data_dir` is where the store lies."""
    where = {} if data_dir is None else {"ERGBOOK_DATA_DIR": str(data_dir)}
    return subprocess.run(
        [sys.executable, "-m", "fieldlog.cli.main", *arguments],
        input=given, capture_output=True, text=True, encoding="utf-8", timeout=120, check=False,
        env={**os.environ, **where, **environment},
    )  # fmt: skip


def refused(done: subprocess.CompletedProcess[str], code: int) -> str:
    """The one line of an error, its exit code held."""
    assert done.returncode == code, done.stdout + done.stderr
    (line,) = done.stderr.splitlines()
    assert line.startswith("ergbook: ")
    return line
