"""What the documents say of commands, settings and tests is so."""

from __future__ import annotations

import inspect
import re
import subprocess
import tomllib
from pathlib import Path

import click

from fieldlog.cli.main import COMMANDS, cli
from fieldlog.web import settings
from tests.conftest import ROOT
from tests.house.files import name_of, ours

DOCUMENTS = (ROOT / "README.md", ROOT / "DEVELOPERS.md")
TOLD = "\n".join(path.read_text(encoding="utf-8") for path in DOCUMENTS)
ALLOWED_TOP = {
    "README.md", "DEVELOPERS.md", "CHANGELOG.md", "LICENSE", "Makefile", "pyproject.toml", ".gitignore", ".ci", "fieldlog",
    "static", "templates", "tests", "demo_survey",
}


def test_every_command_is_told_and_none_that_is_not_there() -> None:
    named = set(re.findall(r"\bergbook ([a-z]+)\b", TOLD))
    assert set(COMMANDS) <= named
    assert named <= set(COMMANDS)


def test_every_setting_is_told_and_none_that_is_not_there() -> None:
    known = {f"ERGBOOK_{name}" for name in re.findall(r'(?:text|number)\(\s*"([A-Z_]+)"', inspect.getsource(settings))}
    assert len(known) > 5
    assert set(re.findall(r"ERGBOOK_[A-Z_]+", TOLD)) == known


def test_every_setting_that_the_code_names_is_one_and_only_one_module_reads_them() -> None:
    code = {path: path.read_text(encoding="utf-8") for path in ours(".py", ".js", ".html") if path.is_relative_to(ROOT / "fieldlog")}
    assert {name for text in code.values() for name in re.findall(r"ERGBOOK_[A-Z_]+[A-Z]", text)} <= set(re.findall(r"ERGBOOK_[A-Z_]+", TOLD))
    assert {name_of(path) for path, text in code.items() if re.search(r"\bos\.environ|\bgetenv\b", text)} == {"fieldlog/web/settings.py"}


def test_every_option_that_is_told_is_there() -> None:
    for name, rest in re.findall(r"\bergbook ([a-z]+)\b([^`\n#]*)", TOLD):
        command = cli.get_command(click.Context(cli), name)
        assert command is not None
        options = {option for parameter in command.params for option in parameter.opts} | {"--help"}
        assert set(re.findall(r"--[a-z-]+", rest)) <= options, name


def test_every_room_is_on_the_map() -> None:
    told = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    rooms = {path.name for path in (ROOT / "fieldlog").iterdir() if (path / "__init__.py").exists()}
    assert rooms == set(re.findall(r"`([a-z]+)/`", told[: told.index("| `static/js/` |")]))
    (scripts,) = re.findall(r"\| `static/js/` \|[^`]*`([a-z ]+)`", told)
    assert {path.name for path in (ROOT / "static" / "js").iterdir() if path.is_dir()} == set(scripts.split())


def test_every_test_is_found_by_the_test_command() -> None:
    found = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["tool"]["pytest"]["ini_options"]
    assert set(found["testpaths"]) == {"tests", "fieldlog"}
    assert not set(found["norecursedirs"]) & {path.name for path in (ROOT / "tests").iterdir()}
    tests = re.compile(r"^(?:async )?def test_", re.MULTILINE)
    assert not [name_of(path) for path in ours(".py") if not path.name.startswith("test_") and tests.search(path.read_text(encoding="utf-8"))]


def test_ci_calls_what_the_readme_calls() -> None:
    assert "make test" in (ROOT / "README.md").read_text(encoding="utf-8")
    lines = (ROOT / ".ci" / "run").read_text(encoding="utf-8").splitlines()
    assert lines[-1] == "exec make test"


def test_make_targets_that_are_told_are_there() -> None:
    targets = set(re.findall(r"^([a-z]+):", (ROOT / "Makefile").read_text(encoding="utf-8"), re.MULTILINE))
    assert set(re.findall(r"`make ([a-z]+)", TOLD)) <= targets


def test_files_that_are_told_are_there() -> None:
    for document in DOCUMENTS:
        for target in re.findall(r"\]\(([^)#:]+)\)|src=\"([^\":]+)\"", document.read_text(encoding="utf-8")):
            assert (ROOT / "".join(target)).exists(), target
        for target in re.findall(r"`((?:tests|static|fieldlog|templates|demo_survey)/[\w./]+)`", document.read_text(encoding="utf-8")):
            assert (ROOT / target).exists(), target


def test_the_top_level_holds_only_what_belongs_there() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False)
    if listed.returncode == 0:  # a copy without its history has nothing to list
        assert {Path(line).parts[0] for line in listed.stdout.splitlines()} <= ALLOWED_TOP


def test_nothing_is_left_for_later_and_no_test_is_passed_over() -> None:
    later = re.compile(r"\b(TODO|FIXME|XXX)\b")
    passed_over = re.compile(r"mark\.(skip|skipif|xfail)|pytest\.(skip|xfail)\(")
    found = [
        f"{name_of(path)}: {match[0]}"
        for path in ours()
        for pattern in (later, passed_over)
        if path != Path(__file__) and (match := pattern.search(path.read_text(encoding="utf-8")))
    ]
    assert not found


def test_no_file_knows_the_machine_it_was_written_on() -> None:
    machine = re.compile(r"(?<![\w./])/(work|root|home|opt|tmp|Users)/[a-z]")
    found = [
        f"{name_of(path)}: {match[0]}"
        for path in ours()
        if path != Path(__file__) and (match := machine.search(path.read_text(encoding="utf-8")))
    ]
    assert not found
