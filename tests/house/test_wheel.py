"""The wheel holds all that runs, and runs from wherever it is installed."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from tests.conftest import ROOT


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wheel")
    made = subprocess.run(
        [sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation", "-w", str(folder), str(ROOT)],
        capture_output=True, text=True, check=False, timeout=120,
    )
    assert made.returncode == 0, made.stderr
    return next(folder.glob("ergbook-*.whl"))


def test_everything_that_runs_is_in_it(wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as packed:
        names = set(packed.namelist())
    for needed in (
        "fieldlog/static/sw.js", "fieldlog/static/js/phone.js", "fieldlog/templates/phone/shell.html",
        "fieldlog/demo_survey/ledger.jsonl", "fieldlog/store/migrations/env.py",
    ):
        assert needed in names
    assert any(name.startswith("fieldlog/store/migrations/versions/") for name in names)
    assert not [name for name in names if name.startswith("tests/") or "__pycache__" in name]


def test_it_runs_where_it_is_installed(wheel: Path, tmp_path: Path) -> None:
    installed = tmp_path / "installed"
    with zipfile.ZipFile(wheel) as packed:
        packed.extractall(installed)
    environment = {**os.environ, "PYTHONPATH": str(installed), "ERGBOOK_DATA_DIR": str(tmp_path / "data")}
    for arguments, said in ((["--help"], "serve"), (["demo", "--load-only"], "entries"), (["check"], "adds up to")):
        done = subprocess.run(
            [sys.executable, "-m", "fieldlog.cli.main", *arguments], cwd=tmp_path, env=environment, capture_output=True,
            text=True, encoding="utf-8", check=False, timeout=120,
        )
        assert done.returncode == 0, done.stderr
        assert said in done.stdout
