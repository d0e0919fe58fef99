"""Handing over by HTTP."""

from __future__ import annotations

import json
import zlib
from typing import Any

from flask import Blueprint, Response, current_app, g, jsonify, request
from marshmallow import ValidationError

from fieldlog.errors import Refusal
from fieldlog.handover import service
from fieldlog.handover.columns import COLUMNS_TYPE, from_columns
from fieldlog.handover.runs import in_runs
from fieldlog.handover.schema import (
    BATCH_BYTES_MAX,
    ENTRIES_MAX,
    ENTRY_BYTES_MAX,
    PART_BYTES_MAX,
    BatchAnswerSchema,
    BatchSchema,
    ChangesQuerySchema,
    ChangesSchema,
    PhotoAnswerSchema,
)
from fieldlog.people.access import callers
from fieldlog.people.service import note_seen
from fieldlog.store.db import db
from fieldlog.store.photos import PhotoError, PhotoFolder, media_type_of
from fieldlog.store.transaction import write

blueprint = Blueprint("handover", __name__, url_prefix="/api/v1/surveys/<survey>")


class BatchError(Refusal, ValueError):
    """A body that is no batch."""


@blueprint.post("/entries")
@callers("phone")
def push(survey: str) -> Any:
    """Hand over a batch of entries: each is answered, the whole is committed before the answer."""
    batch = _batch()
    if batch["device"] != g.phone.device:
        raise BatchError("the batch names another device than the token", "device")
    prepared = service.check_batch(survey, batch["first"], batch["entries"], ENTRY_BYTES_MAX)
    with write() as session:
        results, through = service.receive(
            session, survey, g.phone.device, prepared, store=batch["store"], epoch=batch["epoch"]
        )
        note_seen(session, survey, g.phone.device, batch["app"])
        head = service.head(session)
    answers = [
        {key: value for key, value in vars(result).items() if value not in (None, "")} for result in results
    ]
    answers = in_runs(answers, ("n", "seq"))
    limits = {"entries": ENTRIES_MAX, "bytes": BATCH_BYTES_MAX}
    return jsonify(BatchAnswerSchema().dump({**head, "received_through": through, "results": answers, "limits": limits}))


@blueprint.get("/changes")
@callers("phone")
def pull(survey: str) -> Any:
    """Entries after a seq, consecutive; own ones without their text unless asked for."""
    try:
        asked = ChangesQuerySchema().load(request.args.to_dict())
    except ValidationError as error:
        raise BatchError(f"the query is wrong: {error.messages}") from error
    found = service.changes(db.session, survey, asked["after"], asked["limit"])
    entries: list[dict[str, Any]] = []
    for seq, device, n, text in found.entries:
        entry: dict[str, Any] = {"seq": seq, "device": device, "n": n}
        if asked["own"] or device != g.phone.device:
            entry["text"] = text
        entries.append(entry)
    head = service.head(db.session)
    entries = in_runs(entries, ("n", "seq"))
    return jsonify(ChangesSchema().dump({**head, "entries": entries, "through": found.through, "last": found.last}))


@blueprint.route("/photos/<sha256>", methods=["HEAD", "GET"])
@callers("phone", "lead")
def photo(survey: str, sha256: str) -> Response:
    """A kept photo; HEAD tells a phone how much of it has come."""
    if request.method == "HEAD":
        size = _photos().size(survey, sha256)
        offset = _photos().offset(survey, sha256) if size is None else size
        headers = {"Upload-Offset": str(offset), **_store_headers()}
        return Response(status=404 if size is None else 200, headers=headers)
    data = _photos().read(survey, sha256)
    if data is None:
        raise PhotoNotHereError("this photo is not at base", sha256)
    return _picture(data, media_type_of(data))


@blueprint.get("/photos/<sha256>/small")
@callers("phone", "lead")
def small_photo(survey: str, sha256: str) -> Response:
    """A kept photo's thumbnail."""
    data = _photos().thumbnail(survey, sha256)
    if data is None:
        raise PhotoNotHereError("this photo is not at base", sha256)
    return _picture(data, "image/jpeg")


def _picture(data: bytes, media_type: str) -> Response:
    """Named by its bytes, so it never changes."""
    response = Response(data, content_type=media_type)
    response.headers["Cache-Control"] = "private, max-age=31536000, immutable"
    response.headers["Content-Disposition"] = "inline"
    return response


@blueprint.patch("/photos/<sha256>")
@callers("phone")
def add_to_photo(survey: str, sha256: str) -> Any:
    """Take the next part of a photo: synced to the disk, then answered with where it goes on.

    The last part is answered once the whole has been hashed, decoded and put in its place.
    """
    whole, offset = _number("Upload-Length"), _number("Upload-Offset")
    limit = current_app.config["ERGBOOK"].photo_bytes_max
    if whole > limit:
        raise PhotoTooLargeError(f"the photo is larger than {limit // (1024 * 1024)} MB", sha256)
    if (request.content_length or 0) > PART_BYTES_MAX:
        raise PhotoTooLargeError(f"a part has at most {PART_BYTES_MAX} bytes", sha256)
    folder = _photos()
    size = folder.size(survey, sha256)
    if size is None:
        size = folder.add(survey, sha256, offset, request.get_data(cache=False), whole=whole)
    told = {**service.head(db.session), "sha256": sha256, "offset": size, "complete": size == whole}
    return jsonify(PhotoAnswerSchema().dump(told))


def _number(header: str) -> int:
    text = request.headers.get(header, "")
    if not text.isdecimal() or len(text) > 12:
        raise BatchError(f"the header {header} is not a number of bytes", header)
    return int(text)


class PhotoNotHereError(PhotoError):
    """No such photo in this survey."""


class PhotoTooLargeError(PhotoError):
    """More bytes than a photo may have."""


def _photos() -> PhotoFolder:
    return PhotoFolder(current_app.config["ERGBOOK"].data_dir / "photos")


def _store_headers() -> dict[str, str]:
    """A HEAD answer has no body: who answers stands in headers, so a stranger's 200 counts for nothing."""
    head = service.head(db.session)
    return {"Ergbook-Store": head["store"], "Ergbook-Epoch": head["epoch"]}


def _batch() -> dict[str, Any]:
    data = request.get_data(cache=False)
    if len(data) > BATCH_BYTES_MAX:
        raise BatchTooLargeError(f"a batch has at most {BATCH_BYTES_MAX} bytes")
    if request.headers.get("Content-Encoding", "").lower() == "gzip":
        data = _unpacked(data)
    try:
        text = data.decode("utf-8")
        in_columns = request.mimetype == COLUMNS_TYPE
        batch: dict[str, Any] = BatchSchema().load(from_columns(text, BATCH_BYTES_MAX) if in_columns else json.loads(text))
    except ValidationError as error:
        raise BatchError(f"the batch is wrong: {error.messages}", mend="Update the phone's app") from error
    except ValueError as error:
        raise BatchError(f"the batch is neither JSON nor columns ({error})", mend="Send it again") from error
    return batch


class BatchTooLargeError(BatchError):
    """A batch over the limit."""


def _unpacked(data: bytes) -> bytes:
    """The batch unpacked, never more than its limit in memory."""
    inflater = zlib.decompressobj(wbits=31)
    try:
        out = inflater.decompress(data, BATCH_BYTES_MAX + 1)
    except zlib.error as error:
        raise BatchError("the batch does not unpack", mend="Send it again") from error
    if len(out) > BATCH_BYTES_MAX or inflater.unconsumed_tail:
        raise BatchTooLargeError(f"a batch has at most {BATCH_BYTES_MAX} bytes unpacked", mend="Send fewer entries")
    if not inflater.eof:
        raise BatchError("the batch was cut off on its way", mend="Send it again")
    return out
