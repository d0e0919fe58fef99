"""The file that a phone saves when it cannot hand over: everything that it holds of a survey.

Lines of JSON, gzipped or plain: a head, then {device, n, text} for every entry, then {photo, base64}
for every picture that base had not confirmed. static/js/handover/file.js writes it.
"""

from __future__ import annotations

import base64
import binascii
import gzip
import io
import json
import zlib
from collections import defaultdict
from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any, Final

from fieldlog.imports.found import ImportFileError
from fieldlog.ledger.names import is_device

ENDING: Final = ".ergbook"
VERSIONS: Final = (1,)
LINE_BYTES_MAX: Final = 32 * 1024 * 1024
UNPACKED_BYTES_MAX: Final = 1024 * 1024 * 1024
_MEND: Final = "Save the file on the phone again"


@dataclass
class Notebook:
    """What the file holds: its head, device -> n -> entry text, and pictures by hash."""

    head: dict[str, Any]
    entries: dict[str, dict[int, str]] = field(default_factory=lambda: defaultdict(dict))
    photos: dict[str, bytes] = field(default_factory=dict)


def read_notebook(data: bytes) -> Notebook:
    """Read a phone's file; ImportFileError where it is none, cut off, or made by a newer app."""
    lines = _lines(data)
    head = _object(next(lines, b""), 1)
    if head.get("file") != "ergbook notebook":
        raise ImportFileError("the file is no phone's notebook", "line 1", "Choose the .ergbook file that a phone saved")
    if head.get("v") not in VERSIONS:
        raise ImportFileError("the file was made by a newer app", "line 1", "Update Ergbook here, then import it again")
    notebook = Notebook(head)
    for number, line in enumerate(lines, start=2):
        found = _object(line, number)
        if "photo" in found:
            notebook.photos[str(found["photo"])] = _picture(found, number)
        else:
            _take_entry(notebook, found, number)
    return notebook


def _take_entry(notebook: Notebook, found: dict[str, Any], number: int) -> None:
    device, n, text = found.get("device"), found.get("n"), found.get("text")
    if not (isinstance(device, str) and is_device(device) and isinstance(text, str)):
        raise ImportFileError("this is no entry", f"line {number}", _MEND)
    if not isinstance(n, int) or isinstance(n, bool) or n < 1:
        raise ImportFileError("an entry without its number", f"line {number}", _MEND)
    notebook.entries[device][n] = text


def _picture(found: dict[str, Any], number: int) -> bytes:
    try:
        return base64.b64decode(found["base64"], validate=True)
    except (KeyError, TypeError, binascii.Error) as error:
        raise ImportFileError("a photo is damaged", f"line {number}", _MEND) from error


def _object(line: bytes, number: int) -> dict[str, Any]:
    try:
        found = json.loads(line)
    except ValueError as error:
        raise ImportFileError("the file is damaged or no phone's notebook", f"line {number}", _MEND) from error
    if not isinstance(found, dict):
        raise ImportFileError("the file is damaged", f"line {number}", _MEND)
    return found


def _lines(data: bytes) -> Iterator[bytes]:
    """The file's lines, unpacked as they are asked for."""
    packed = data.startswith(b"\x1f\x8b")
    stream: Any = gzip.GzipFile(fileobj=io.BytesIO(data)) if packed else io.BytesIO(data)
    read = 0
    try:
        while line := stream.readline(LINE_BYTES_MAX):
            read += len(line)
            if read > UNPACKED_BYTES_MAX or not line.endswith(b"\n"):
                raise ImportFileError("the file is cut off, or larger than a notebook can be", "the file", _MEND)
            yield line
    except (EOFError, zlib.error, gzip.BadGzipFile) as error:
        raise ImportFileError("the file is cut off or damaged", "the file", _MEND) from error
