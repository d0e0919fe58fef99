"""What is made from something else is as it would be made now."""

from __future__ import annotations

import subprocess
import sys

import pytest

from tests.conftest import ROOT
from tests.mirror import vectors
from tests.science.make_vectors import made_samples, published_samples


@pytest.mark.parametrize(
    "command",
    [["-m", "fieldlog.sheet.generate", "--check"], ["-m", "fieldlog.science.wmm_module", "--check"], ["demo_survey/make.py", "--check"]],
    ids=["sheet", "magnetic model", "demo survey"],
)
def test_nothing_made_is_stale(command: list[str]) -> None:
    done = subprocess.run([sys.executable, *command], cwd=ROOT, capture_output=True, text=True, check=False, timeout=120)
    assert done.returncode == 0, done.stdout + done.stderr


def test_the_vectors_are_those_of_the_samples_they_are_made_from() -> None:
    published, made, kept = published_samples(), made_samples(), vectors("circular")
    assert published == [(case["what"], case["angles_deg"], case["options"]) for case in kept[: len(published)]]
    # numpy does not promise that a seed gives the same numbers in every version
    assert [(what, len(angles), options) for what, angles, options in made] == [
        (case["what"], len(case["angles_deg"]), case["options"]) for case in kept[len(published) :]
    ]
