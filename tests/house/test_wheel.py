"""The wheel holds all that runs, and runs from wherever it is installed."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path
from typing import Any

import pytest

from tests.conftest import ROOT

PIP = (sys.executable, "-m", "pip", "--quiet", "--disable-pip-version-check", "--no-cache-dir")
ASK_FOR_PAGES = """
from fieldlog.web.app import create_app
from fieldlog.web.settings import Settings
client = create_app(Settings.from_environment()).test_client()
print(*(client.get(page).status_code for page in ("/phone/", "/sw.js", "/sign-in")))
"""


def done(*command: str, **more: Any) -> str:
    """What a command prints; it must not fail."""
    ran = subprocess.run([*command], capture_output=True, text=True, encoding="utf-8", check=False, timeout=120, **more)
    assert ran.returncode == 0, ran.stderr
    return ran.stdout


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wheel")
    done(*PIP, "wheel", "--no-deps", "--no-index", "--no-build-isolation", "-w", str(folder), str(ROOT))
    return next(folder.glob("ergbook-*.whl"))


def test_everything_that_runs_is_in_it_and_nothing_else(wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as packed:
        names = {name for name in packed.namelist() if ".dist-info/" not in name}
    needed = {name if name.startswith("fieldlog/") else f"fieldlog/{name}" for name in files_that_run()}
    assert len(needed) > 200
    assert names == needed


def files_that_run() -> list[str]:
    parts = (ROOT / part for part in ("fieldlog", "static", "templates", "demo_survey"))
    found = [path for part in parts for path in part.rglob("*") if path.is_file() and "__pycache__" not in path.parts]
    return [path.relative_to(ROOT).as_posix() for path in found]


def test_it_runs_where_it_is_installed(wheel: Path, tmp_path: Path) -> None:
    installed = tmp_path / "installed"
    done(*PIP, "install", "--no-deps", "--no-index", "--target", str(installed), str(wheel))
    where = {**os.environ, "PYTHONPATH": str(installed), "ERGBOOK_DATA_DIR": str(tmp_path / "data")}
    where.pop("ERGBOOK_DATABASE_URL", None)
    place = done(sys.executable, "-c", "import fieldlog; print(fieldlog.__file__)", cwd=tmp_path, env=where)
    assert Path(place.strip()).is_relative_to(installed), "what follows runs the wheel, not the repository"
    (script,) = (installed / ("Scripts" if os.name == "nt" else "bin")).glob("ergbook*")
    for arguments, said in ((["--help"], "serve"), (["demo", "--load-only"], "entries"), (["check"], "adds up to")):
        assert said in done(str(script), *arguments, cwd=tmp_path, env=where)
    assert done(sys.executable, "-c", ASK_FOR_PAGES, cwd=tmp_path, env=where).split() == ["200", "200", "200"]
