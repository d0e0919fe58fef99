"""`ergbook migration` on a copy of the package, since it writes into the folder it runs from."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from tests.cli.ergbook import refused
from tests.conftest import ROOT

VERSIONS = Path("fieldlog/store/migrations/versions")


@pytest.fixture
def copy(tmp_path: Path) -> Path:
    """A package to change."""
    shutil.copytree(ROOT / "fieldlog", tmp_path / "fieldlog", ignore=shutil.ignore_patterns("__pycache__"))
    return tmp_path


def migration(copy: Path, message: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "fieldlog.cli.main", "migration", message], cwd=copy, capture_output=True, text=True,
        encoding="utf-8", check=False, timeout=120, env={**os.environ, "PYTHONPATH": str(copy)},
    )  # fmt: skip


def listed(copy: Path) -> list[str]:
    return sorted(path.name for path in (copy / VERSIONS).glob("*.py"))


def test_nothing_to_write_is_said_and_nothing_is_written(copy: Path) -> None:
    before = listed(copy)
    assert "Edit those first" in refused(migration(copy, "nothing new"), 2)
    assert "MESSAGE" in refused(migration(copy, " "), 2)
    assert listed(copy) == before


def test_an_edit_of_the_sheet_is_written_once_numbered_on(copy: Path) -> None:
    before = listed(copy)
    sheet = copy / "fieldlog" / "sheet" / "subjects.py"
    text = sheet.read_text(encoding="utf-8")
    crew = text.index('kind="crew"')
    field = text.index("Field(", crew)
    added = 'Field(name="boots", type="text", label="Boots", group="crew", help="Their size."),\n        '
    sheet.write_text(f"{text[:field]}{added}{text[field:]}", encoding="utf-8")
    done = migration(copy, "boots of the crew")
    assert done.returncode == 0, done.stderr
    (new,) = set(listed(copy)) - set(before)
    assert new == f"{len(before) + 1:04d}_boots_of_the_crew.py"
    written = (copy / VERSIONS / new).read_text(encoding="utf-8")
    assert "batch_alter_table('crew'" in written
    assert written.count("add_column") == 1
    assert "sa.Column('boots', sa.Text(), nullable=True)" in written
    refused(migration(copy, "again"), 2)
