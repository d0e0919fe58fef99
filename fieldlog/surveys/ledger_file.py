"""A whole survey that comes as a folder: its ledger, its photos, and a manifest that vouches for both.

manifest.json  {"survey", "base_device", "entries", "ledger_sha256", "photos": {file name: SHA-256}}
ledger.jsonl   one line an entry, in the order in which base received them: {"device", "n", "text"}
photos/        the photos that the manifest names

`ledger_sha256` is over the lines joined by a line feed, so that a checkout with other line endings
is the same ledger. The survey keeps its id; its `base_device` may say anything, every other
device only what a phone may say.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import groupby
from pathlib import Path
from typing import Any, Final

from fieldlog.errors import Refusal
from fieldlog.ledger import names
from fieldlog.sheet.subjects import PHONE_KINDS, SHEETS
from fieldlog.store.append import Prepared, admit_survey, append, prepare
from fieldlog.store.db import AnySession
from fieldlog.store.photos import PhotoError, PhotoStore, check_photo

MANIFEST: Final = "manifest.json"
LEDGER: Final = "ledger.jsonl"
PHOTOS: Final = "photos"
BATCH: Final = 500
_AGAIN: Final = "Get the folder again from where it came"


class LedgerFileError(Refusal, ValueError):
    """The folder is damaged, or does not hold what its manifest says."""


@dataclass(frozen=True)
class Loaded:
    """What a folder held, and how much of it was new here."""

    survey: str
    entries: int
    entries_new: int
    photos: int
    photos_new: int


@dataclass(frozen=True)
class SurveyFolder:
    """A folder that has been read and found whole: (device, its consecutive entries), and photos by hash."""

    survey: str
    runs: list[tuple[str, list[Prepared]]]
    photos: dict[str, bytes]


def load_ledger(session: AnySession, folder: Path, photos_store: PhotoStore) -> Loaded:
    """Load the survey of a folder into the store. Inside `write()`. Loading again changes nothing.

    Everything is read and checked first. LedgerFileError where the folder is damaged, or where the
    store holds other entries under the same names.
    """
    read = read_folder(folder)
    photos_new = 0
    for sha256, data in read.photos.items():
        if photos_store.size(read.survey, sha256) != len(data):
            photos_store.keep(read.survey, sha256, data)
            photos_new += 1
    admit_survey(session, read.survey)
    entries = entries_new = 0
    for device, run in read.runs:
        for start in range(0, len(run), BATCH):
            results, _ = append(session, read.survey, device, run[start : start + BATCH])
            for result in results:
                if result.status in ("set_aside", "forked"):
                    problem = result.problem or "the store holds another entry under this name"
                    raise LedgerFileError(problem, names.entry_name(device, result.n), _AGAIN)
            entries += len(results)
            entries_new += sum(result.status == "stored" for result in results)
    return Loaded(read.survey, entries, entries_new, len(read.photos), photos_new)


def read_folder(folder: Path) -> SurveyFolder:
    """Read a survey's folder and check all of it; LedgerFileError says what is damaged, and where."""
    manifest = _manifest(folder)
    survey = manifest["survey"]
    lines = _bytes(folder / LEDGER).replace(b"\r\n", b"\n").removesuffix(b"\n").split(b"\n")
    if len(lines) != manifest["entries"]:
        raise LedgerFileError(f"holds {len(lines)} entries, not the {manifest['entries']} of {MANIFEST}", LEDGER, _AGAIN)
    rows = [_row(number, line) for number, line in enumerate(lines, start=1)]
    if hashlib.sha256(b"\n".join(lines)).hexdigest() != manifest["ledger_sha256"]:
        raise LedgerFileError(f"does not match its hash in {MANIFEST}", LEDGER, _AGAIN)
    runs = list(_runs(rows, survey, manifest["base_device"]))
    return SurveyFolder(survey, runs, dict(_photos(folder, manifest["photos"])))


def _bytes(path: Path) -> bytes:
    try:
        return path.read_bytes()
    except OSError as error:
        raise LedgerFileError(f"cannot be read ({error.strerror})", str(path), _AGAIN) from error


def _manifest(folder: Path) -> dict[str, Any]:
    path = folder / MANIFEST
    try:
        manifest = json.loads(_bytes(path))
    except ValueError as error:
        raise LedgerFileError(f"is not JSON ({error})", str(path), _AGAIN) from error
    kinds = {"survey": str, "base_device": str, "entries": int, "ledger_sha256": str, "photos": dict}
    if not isinstance(manifest, dict) or any(not isinstance(manifest.get(key), kinds[key]) for key in kinds):
        raise LedgerFileError(f"is not an object of {', '.join(kinds)}", str(path), _AGAIN)
    if names.SURVEY_ID.fullmatch(manifest["survey"]) is None or not names.is_device(manifest["base_device"]):
        raise LedgerFileError("names no survey or no device", str(path), _AGAIN)
    found: dict[str, Any] = manifest
    return found


def _row(number: int, line: bytes) -> tuple[str, int, str]:
    """Device, n and text of one line."""
    where = f"{LEDGER} line {number}"
    try:
        row = json.loads(line)
        device, n, text = row["device"], row["n"], row["text"]
        names.split_name(names.entry_name(device, n))
    except (ValueError, TypeError, KeyError) as error:
        raise LedgerFileError("is not an entry with device, n and text", where, _AGAIN) from error
    if type(n) is not int or not isinstance(text, str):
        raise LedgerFileError("is not an entry with device, n and text", where, _AGAIN)
    return device, n, text


def _runs(
    rows: list[tuple[str, int, str]], survey: str, base_device: str
) -> Iterator[tuple[str, list[Prepared]]]:
    """Consecutive lines of one device together, each entry checked; a device's numbers have no hole."""
    through: dict[str, int] = {}
    for device, run in groupby(rows, key=lambda row: row[0]):
        kinds = frozenset(SHEETS) if device == base_device else PHONE_KINDS
        prepared = []
        for _, n, text in run:
            name = names.entry_name(device, n)
            if n != through.get(device, 0) + 1:
                raise LedgerFileError(f"{device} jumps from {through.get(device, 0)} to {n}", LEDGER, _AGAIN)
            through[device] = n
            item = prepare(survey, n, text, kinds=kinds)
            if item.problem:
                raise LedgerFileError(item.problem, f"{LEDGER}, {name}", _AGAIN)
            prepared.append(item)
        yield device, prepared


def _photos(folder: Path, named: dict[str, Any]) -> Iterator[tuple[str, bytes]]:
    for name, sha256 in named.items():
        if not isinstance(sha256, str) or Path(name).name != name:
            raise LedgerFileError("names a photo that cannot be in its folder", MANIFEST, _AGAIN)
        data = _bytes(folder / PHOTOS / name)
        try:
            check_photo(sha256, data)
        except PhotoError as error:
            raise LedgerFileError(error.what, f"{PHOTOS}/{name}", _AGAIN) from error
        yield sha256, data
