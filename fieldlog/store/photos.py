"""Photos, named by the SHA-256 of their bytes, in a folder: photos/SURVEY/ab/HASH.

They come in parts: what has come of one lies beside its place as HASH.part, and its length, after
the bytes have been synced, is where the next part goes on. A whole one is hashed and decoded before
it takes its place, with a thumbnail as HASH.small. Look-ups never cross surveys: a hash known in
one survey says nothing in another.
"""

from __future__ import annotations

import hashlib
import io
import os
import re
import tempfile
import threading
from dataclasses import dataclass
from pathlib import Path
from typing import Protocol

from PIL import Image, ImageOps, UnidentifiedImageError

from fieldlog.errors import Refusal

HASH = re.compile(r"[0-9a-f]{64}")
PIXELS_MAX = 60_000_000
FORMATS = {"JPEG": "image/jpeg", "PNG": "image/png", "WEBP": "image/webp"}
THUMBNAIL_PX = 240

_one_part = threading.Lock()
"""Parts are added one at a time; two workers that add to one photo spoil it, which its hash then shows."""


class PhotoError(Refusal, ValueError):
    """What was sent is not a photo that can be kept."""


class WrongOffsetError(Refusal, ValueError):
    """A part that does not begin where the last one ended."""

    def __init__(self, offset: int) -> None:
        super().__init__(f"the next part of this photo begins at byte {offset}", "Upload-Offset", "Send from there")
        self.offset = offset


class PhotoStore(Protocol):
    """Where photos lie."""

    def size(self, survey: str, sha256: str) -> int | None: ...

    def offset(self, survey: str, sha256: str) -> int: ...

    def add(self, survey: str, sha256: str, offset: int, part: bytes, *, whole: int) -> int: ...

    def keep(self, survey: str, sha256: str, data: bytes) -> None: ...

    def read(self, survey: str, sha256: str) -> bytes | None: ...

    def thumbnail(self, survey: str, sha256: str) -> bytes | None: ...


@dataclass(frozen=True)
class PhotoFolder:
    """Photos in a folder of this machine."""

    folder: Path

    def _path(self, survey: str, sha256: str) -> Path:
        if HASH.fullmatch(sha256) is None:
            raise PhotoError("a photo is named by 64 hexadecimal digits", sha256[:80])
        return self.folder / survey / sha256[:2] / sha256

    def size(self, survey: str, sha256: str) -> int | None:
        """Length of a kept photo, None where it is not here."""
        path = self._path(survey, sha256)
        return path.stat().st_size if path.exists() else None

    def offset(self, survey: str, sha256: str) -> int:
        """How many bytes of a photo have come and are safe."""
        part = self._path(survey, sha256).with_suffix(".part")
        return part.stat().st_size if part.exists() else 0

    def add(self, survey: str, sha256: str, offset: int, part: bytes, *, whole: int) -> int:
        """Add a part of a photo of `whole` bytes; how many are here now. The last one makes it a kept photo.

        WrongOffsetError where it does not go on where the last one ended. PhotoError where the whole
        is no photo, or not the one of this hash: nothing of it is left then.
        """
        path = self._path(survey, sha256)
        beside = path.with_suffix(".part")
        with _one_part:
            there = self.offset(survey, sha256)
            if offset != there or offset + len(part) > whole:
                raise WrongOffsetError(there)
            path.parent.mkdir(parents=True, exist_ok=True)
            with beside.open("ab") as out:
                out.write(part)
                out.flush()
                os.fsync(out.fileno())
            if offset + len(part) < whole:
                return offset + len(part)
            data = beside.read_bytes()
            try:
                check_photo(sha256, data)
                self.keep(survey, sha256, data)
            finally:
                beside.unlink(missing_ok=True)
        return whole

    def keep(self, survey: str, sha256: str, data: bytes) -> None:
        """Keep a photo that has been checked, and its thumbnail: written beside, synced, then renamed into place."""
        path = self._path(survey, sha256)
        path.parent.mkdir(parents=True, exist_ok=True)
        self._put(path.with_suffix(".small"), small(data))
        self._put(path, data)

    def _put(self, path: Path, data: bytes) -> None:
        handle, beside = tempfile.mkstemp(dir=path.parent, prefix=".part-")
        try:
            with os.fdopen(handle, "wb") as out:
                out.write(data)
                out.flush()
                os.fsync(out.fileno())
            Path(beside).replace(path)
        except BaseException:
            Path(beside).unlink(missing_ok=True)
            raise

    def thumbnail(self, survey: str, sha256: str) -> bytes | None:
        """A small JPEG of a kept photo, None where it is not here."""
        path = self._path(survey, sha256)
        if not path.exists():
            return None
        beside = path.with_suffix(".small")
        return beside.read_bytes() if beside.exists() else small(path.read_bytes())

    def read(self, survey: str, sha256: str) -> bytes | None:
        """The bytes of a kept photo, None where it is not here."""
        path = self._path(survey, sha256)
        return path.read_bytes() if path.exists() else None


def check_photo(sha256: str, data: bytes) -> str:
    """Media type of a photo whose bytes match their hash and decode whole; PhotoError otherwise."""
    if hashlib.sha256(data).hexdigest() != sha256:
        raise PhotoError("the bytes do not match the photo's hash", sha256, "Send it again")
    media_type = media_type_of(data)
    try:
        with Image.open(io.BytesIO(data)) as image:
            if image.width * image.height > PIXELS_MAX:
                raise PhotoError(f"the photo has more than {PIXELS_MAX // 1_000_000} million pixels", sha256)
            image.load()
    except (OSError, SyntaxError, ValueError, Image.DecompressionBombError) as error:
        if isinstance(error, PhotoError):
            raise
        raise PhotoError("the photo is damaged and does not decode", sha256, "Take it again") from error
    return media_type


def media_type_of(data: bytes) -> str:
    """Media type by content; PhotoError where it is no photo format that is kept."""
    try:
        with Image.open(io.BytesIO(data)) as image:
            name = image.format or ""
    except (UnidentifiedImageError, OSError, SyntaxError, ValueError, Image.DecompressionBombError) as error:
        raise PhotoError("this is not a photo", mend="JPEG, PNG and WebP are kept") from error
    if name not in FORMATS:
        raise PhotoError(f"{name} is not a photo format that is kept", mend="JPEG, PNG and WebP are kept")
    return FORMATS[name]


def small(data: bytes) -> bytes:
    """A small JPEG of a photo, long edge 240 px."""
    with Image.open(io.BytesIO(data)) as image:
        made = ImageOps.exif_transpose(image).convert("RGB")
    made.thumbnail((THUMBNAIL_PX, THUMBNAIL_PX))
    out = io.BytesIO()
    made.save(out, "JPEG", quality=80)
    return out.getvalue()
