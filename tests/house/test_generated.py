"""What is made from something else is as it would be made now."""

from __future__ import annotations

import subprocess
import sys

import pytest

from tests.conftest import ROOT


@pytest.mark.parametrize(
    "command",
    [["-m", "fieldlog.sheet.generate", "--check"], ["-m", "fieldlog.science.wmm_module", "--check"], ["demo_survey/make.py", "--check"]],
    ids=["sheet", "magnetic model", "demo survey"],
)
def test_nothing_made_is_stale(command: list[str]) -> None:
    done = subprocess.run([sys.executable, *command], cwd=ROOT, capture_output=True, text=True, check=False, timeout=120)
    assert done.returncode == 0, done.stdout + done.stderr
