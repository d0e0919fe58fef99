"""The phone's shell as a set of files with one content hash.

The shell is the page, its styles, pictures and every module that js/phone.js imports. It lives
under a path named by the hash; copies of the last ones stay in the data folder, so that a page
opened from an older shell never loses its files.
"""

from __future__ import annotations

import hashlib
import re
import shutil
import tempfile
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import Final

PAGE: Final = "page.html"
ENTRY: Final = "js/phone.js"
KEPT: Final = 5
HASH_LENGTH: Final = 12

_OTHER_FILES: Final = ("css/tokens.css", "css/rose.css", "css/phone.css", "manifest.webmanifest")
_IMPORT: Final = re.compile(
    r"""(?:^\s*(?:(?:import|export)\s[^'";]*?\bfrom\s*|import\s*)|new URL\()['"](\.[^'"]+\.js)['"]""", re.MULTILINE
)

RenderPage = Callable[[str, Sequence[str]], str]
"""(hash, module paths) -> the page."""


@dataclass(frozen=True)
class Shell:
    """Every file by its path within the shell, the page among them."""

    hash: str
    files: dict[str, bytes]


def collect(static: Path, page_source: str, version: str, render: RenderPage) -> Shell:
    """Read the shell. `page_source` (the page's template) and `version` go into the hash as the files do."""
    modules = module_paths(static)
    icons = sorted(path.relative_to(static).as_posix() for path in (static / "icons").iterdir())
    paths = [*modules, *_OTHER_FILES, *icons]
    files = {path: (static / path).read_bytes() for path in paths}
    digest = hashlib.sha256()
    for name, content in [*sorted(files.items()), (PAGE, page_source.encode()), ("version", version.encode())]:
        digest.update(f"{name}\0{len(content)}\0".encode() + content)
    name = digest.hexdigest()[:HASH_LENGTH]
    files[PAGE] = render(name, modules).encode()
    return Shell(name, files)


def module_paths(static: Path) -> list[str]:
    """js/phone.js, all that it imports and the workers it starts, each once, in the order in which they are met."""
    found: list[str] = []
    waiting = [PurePosixPath(ENTRY)]
    while waiting:
        module = waiting.pop(0)
        if str(module) in found:
            continue
        found.append(str(module))
        text = (static / module).read_text(encoding="utf-8")
        waiting.extend(_within(module.parent / target) for target in _IMPORT.findall(text))
    return found


def _within(path: PurePosixPath) -> PurePosixPath:
    """The path with its `..` steps taken."""
    parts: list[str] = []
    for part in path.parts:
        if part == "..":
            parts.pop()
        elif part != ".":
            parts.append(part)
    return PurePosixPath(*parts)


def publish(shell: Shell, folder: Path) -> None:
    """Copy the shell to `folder`/HASH, whole or not at all, and keep the newest five."""
    target = folder / shell.hash
    folder.mkdir(parents=True, exist_ok=True)
    if target.is_dir():
        target.touch()
    else:
        building = Path(tempfile.mkdtemp(prefix=".building-", dir=folder))
        for name, content in shell.files.items():
            path = building / name
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_bytes(content)
        building.chmod(0o755)
        try:
            building.rename(target)
        except OSError:  # another process published the same shell first
            shutil.rmtree(building, ignore_errors=True)
    for old in _newest_first(folder)[KEPT:]:
        shutil.rmtree(old, ignore_errors=True)


def read_published(folder: Path, name: str, path: str) -> bytes | None:
    """A file of a published shell, None where there is none."""
    if not re.fullmatch(rf"[0-9a-f]{{{HASH_LENGTH}}}", name):
        return None
    root = (folder / name).resolve()
    file = (root / path).resolve()
    if not file.is_relative_to(root) or not file.is_file():
        return None
    return file.read_bytes()


def _newest_first(folder: Path) -> list[Path]:
    shells = [path for path in folder.iterdir() if path.is_dir() and len(path.name) == HASH_LENGTH]
    return sorted(shells, key=lambda path: path.stat().st_mtime, reverse=True)
