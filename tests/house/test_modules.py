"""Modules stay small, say what they are, and import downward only (Python's imports: import-linter in `make lint`)."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

from tests.conftest import ROOT
from tests.house.files import GENERATED, name_of, ours

LARGEST = 450
"""Lines of a module; tests may be twice as long."""

MAY_IMPORT = {
    "science": set(), "sheet": {"science"}, "ledger": {"sheet", "science"}, "store": {"ledger", "sheet", "science"},
    "draw": {"science"}, "sensors": {"science"}, "handover": {"store", "ledger", "sheet", "science"},
    "ui": {"draw", "sensors", "handover", "store", "ledger", "sheet", "science"},
}
IMPORT = re.compile(r"""(?:^|\n)\s*(?:import|export)\b[^'";]*?from\s*['"]([^'"]+)['"]|import\(\s*['"]([^'"]+)['"]\s*\)""")
COMMENT = re.compile(r"/\*.*?\*/|(?<!:)//[^\n]*", re.DOTALL)


def test_no_module_is_too_long_to_hold_in_the_head() -> None:
    long = {
        name_of(path): count
        for path in ours(".py", ".js", ".css", ".html")
        if (count := len(path.read_text(encoding="utf-8").splitlines())) > LARGEST * (2 if "tests" in path.parts else 1)
        and name_of(path) not in GENERATED
        and "versions" not in path.parts  # a migration is written once, by a command
    }
    assert not long


@pytest.mark.parametrize("path", [*ours(".js")], ids=name_of)
def test_scripts_import_downward_only(path: Path) -> None:
    inside = path.relative_to(ROOT)
    if inside.parts[:2] != ("static", "js") or len(inside.parts) == 3:
        return  # phone.js and desk.js put the parts together
    room = inside.parts[2]
    text = COMMENT.sub("", path.read_text(encoding="utf-8"))
    for found in IMPORT.finditer(text):
        target = found[1] or found[2]
        assert target.startswith("."), f"{target}: relative imports only, so that a shell stays whole"
        there = (path.parent / target).resolve().relative_to(ROOT / "static" / "js")
        assert there.parts[0] in {room} | MAY_IMPORT[room], f"{room} imports {target}"


def test_every_public_name_says_what_it_is() -> None:
    silent = []
    for path in ours(".py"):
        inside = name_of(path)
        if not inside.startswith("fieldlog/") or "/migrations/" in inside:
            continue
        tree = ast.parse(path.read_text(encoding="utf-8"))
        if tree.body and not ast.get_docstring(tree):
            silent.append(inside)
        silent += [
            f"{inside}: {node.name}"
            for node in tree.body
            if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_") and not ast.get_docstring(node)
        ]
    assert not silent


def test_every_script_says_what_it_is() -> None:
    silent = [
        name_of(path) for path in ours(".js")
        if name_of(path).startswith("static/") and not path.read_text(encoding="utf-8").lstrip().startswith(("/**", "// Made by"))
    ]
    assert not silent
