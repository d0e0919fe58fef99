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
IMPORT = re.compile(
    r"""(?:^|\n)\s*(?:import|export)\b[^'";]*?from\s*['"]([^'"]+)['"]|(?:^|\n)\s*import\s*['"]([^'"]+)['"]"""
    r"""|\bimport\(\s*['"]([^'"]+)['"]\s*\)|new URL\(\s*['"]([^'"]+\.js)['"]"""
)
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


SCRIPTS = ROOT / "static" / "js"


def imported(path: Path) -> list[str]:
    """What a script imports: by name, for its effect, when it is needed, or as a worker."""
    return ["".join(found) for found in IMPORT.findall(COMMENT.sub("", path.read_text(encoding="utf-8")))]


@pytest.mark.parametrize("path", [path for path in ours(".js") if SCRIPTS in path.parent.parents], ids=name_of)
def test_scripts_import_downward_only(path: Path) -> None:
    room = path.relative_to(SCRIPTS).parts[0]
    for target in imported(path):
        assert target.startswith("."), f"{target}: relative imports only, so that a shell stays whole"
        there = (path.parent / target).resolve()
        assert there.is_file(), target
        assert there.relative_to(SCRIPTS).parts[0] in {room} | MAY_IMPORT[room], f"{room} imports {target}"


def test_parts_are_put_together_in_two_places_that_import_one_another_not() -> None:
    tops = {path.name: imported(path) for path in SCRIPTS.glob("*.js")}
    assert set(tops) == {"phone.js", "desk.js"}
    for targets in tops.values():
        assert all((SCRIPTS / target).resolve().relative_to(SCRIPTS).parts[0] in MAY_IMPORT for target in targets)


@pytest.mark.parametrize(
    "line",
    [
        "import { a } from './x.js';", 'import * as a from "./x.js"', "import {\n  a,\n  b,\n} from './x.js';", "import './x.js';",
        "export { a } from './x.js';", "const a = await import('./x.js');", "new Worker(new URL('./x.js', import.meta.url))",
    ],
)
def test_every_way_to_import_is_seen(line: str, tmp_path: Path) -> None:
    script = tmp_path / "script.js"
    script.write_text(f"/** @type {{import('./type.js').T}} */\n{line}\n", encoding="utf-8")
    assert imported(script) == ["./x.js"]


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
