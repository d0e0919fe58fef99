"""Files between preview and confirmation: kept on the server under a random name, bound to their survey."""

from __future__ import annotations

import json
import re
import secrets
import time
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from fieldlog.imports.found import ImportFileError

KEPT_S: Final = 24 * 3600
_UPLOAD: Final = re.compile(r"[0-9a-f]{32}")


@dataclass(frozen=True)
class Upload:
    """A file as it came: its name, who carried the device (a crew record or None), its bytes."""

    name: str
    walker: str | None
    data: bytes


def keep(folder: Path, survey: str, upload: Upload, *, now: Callable[[], float] = time.time) -> str:
    """Keep an upload; its random id. Uploads that nobody confirmed for a day go."""
    folder.mkdir(parents=True, exist_ok=True)
    for old in folder.glob("*.upload"):
        if old.stat().st_mtime < now() - KEPT_S:
            old.unlink(missing_ok=True)
    made = secrets.token_hex(16)
    head = json.dumps({"name": upload.name, "walker": upload.walker})
    _path(folder, survey, made).write_bytes(head.encode("ascii") + b"\n" + upload.data)
    return made


def held(folder: Path, survey: str, upload: str) -> Upload:
    """An upload of this survey; ImportFileError where there is none under this id."""
    path = _path(folder, survey, upload)
    try:
        head, _, data = path.read_bytes().partition(b"\n")
    except FileNotFoundError as error:
        raise ImportFileError("this file is no longer waiting", "import", "Choose it again") from error
    told = json.loads(head)
    return Upload(told["name"], told["walker"], data)


def drop(folder: Path, survey: str, upload: str) -> None:
    """Forget an upload."""
    _path(folder, survey, upload).unlink(missing_ok=True)


def _path(folder: Path, survey: str, upload: str) -> Path:
    if _UPLOAD.fullmatch(upload) is None:
        raise ImportFileError("this is no upload", "import", "Choose the file again")
    return folder / f"{survey}-{upload}.upload"
