"""Every number of the bench is explained, and everything explained is measured."""

from __future__ import annotations

import re

from tests.bench.__main__ import GROUPS
from tests.conftest import ROOT

FOLDER = ROOT / "tests" / "bench"


def test_names_in_the_code_are_those_in_the_readme() -> None:
    told = (FOLDER / "README.md").read_text(encoding="utf-8")
    name = re.compile(rf"(?:{'|'.join(GROUPS)})\.[a-z][a-z0-9_]+")
    measured = {found for path in FOLDER.glob("*.py") for found in re.findall(rf'"({name.pattern})"', path.read_text(encoding="utf-8"))}
    explained = set(re.findall(rf"`({name.pattern})`", told))
    assert measured == explained
    assert {found.partition(".")[0] for found in measured} == set(GROUPS)
