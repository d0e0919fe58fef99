"""Photos, named by the SHA-256 of their bytes, in a folder: photos/SURVEY/ab/HASH.

Look-ups never cross surveys: a hash known in one survey says nothing in another.
"""

from __future__ import annotations

import hashlib
import io
import os
import re
import tempfile
from dataclasses import dataclass
from pathlib import Path
from typing import Protocol

from PIL import Image, ImageOps, UnidentifiedImageError

from fieldlog.errors import Refusal

HASH = re.compile(r"[0-9a-f]{64}")
PIXELS_MAX = 60_000_000
FORMATS = {"JPEG": "image/jpeg", "PNG": "image/png", "WEBP": "image/webp"}
THUMBNAIL_PX = 240


class PhotoError(Refusal, ValueError):
    """What was sent is not a photo that can be kept."""


class PhotoStore(Protocol):
    """Where photos lie."""

    def size(self, survey: str, sha256: str) -> int | None: ...

    def keep(self, survey: str, sha256: str, data: bytes) -> None: ...

    def read(self, survey: str, sha256: str) -> bytes | None: ...


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

    def keep(self, survey: str, sha256: str, data: bytes) -> None:
        """Keep a photo that has been checked: written beside, synced, then renamed into place."""
        path = self._path(survey, sha256)
        path.parent.mkdir(parents=True, exist_ok=True)
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


def thumbnail(data: bytes) -> bytes:
    """A small JPEG of a photo, long edge 240 px."""
    with Image.open(io.BytesIO(data)) as image:
        small = ImageOps.exif_transpose(image).convert("RGB")
    small.thumbnail((THUMBNAIL_PX, THUMBNAIL_PX))
    out = io.BytesIO()
    small.save(out, "JPEG", quality=80)
    return out.getvalue()
