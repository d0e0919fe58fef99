"""Handing over by HTTP: batches, changes, photos, and everything that can be wrong with them."""

from __future__ import annotations

import gzip
import hashlib
import io
import json
from datetime import UTC, datetime
from typing import Any

import pytest
from PIL import Image
from sqlalchemy import select

from fieldlog.ledger.entry import write_text
from fieldlog.people.service import revoke_phone
from fieldlog.store.db import db
from fieldlog.store.identity import begin_epoch
from fieldlog.store.tables import LedgerEntry, observations
from fieldlog.store.transaction import write
from tests.http.conftest import Base, PhoneClient


def text(base: Base, phone: PhoneClient, n: int, offset_ms: int | None = None, **values: Any) -> str:
    said = {"site": base.site, "observed_at": "2026-07-08T05:06:07Z", "north": "true", "crest_read_deg": n % 360}
    return write_text(app="0.1.0", by=phone.crew, survey=base.survey, kind="observation", values={**said, **values},
                      hlc=f"{n:012x}.0000", made_at=datetime(2026, 7, 8, 5, 6, 7, tzinfo=UTC), offset_ms=offset_ms)


def test_a_batch_arrives_packed_and_is_answered_entry_by_entry(base: Base) -> None:
    phone = base.phone()
    answer = phone.push(1, [text(base, phone, 1), text(base, phone, 2, crest_read_deg=400)], packed=True)
    told = answer.get_json()
    assert answer.status_code == 200
    assert [result["status"] for result in told["results"]] == ["stored", "set_aside"]
    assert "400 is outside 0 to below 360 deg" in told["results"][1]["problem"]
    assert told["received_through"] == 2
    assert told["store"] == phone.head["store"]
    with base.app.app_context():
        assert db.session.scalars(select(observations.c.crest_deg)).all() == [1]


def test_a_wrong_clock_is_corrected_by_what_the_phone_learnt_and_never_refused(base: Base) -> None:
    phone = base.phone()
    told = phone.push(1, [text(base, phone, 1, offset_ms=365 * 86_400_000), text(base, phone, 2, observed_at="1999-01-01T00:00:00Z")])
    assert [(result["status"], result["count"]) for result in told.get_json()["results"]] == [("stored", 2)]
    with base.app.app_context():
        rows = db.session.execute(select(observations.c.observed_at, observations.c.observed_by_clock).order_by(observations.c.record))
        assert [[when.isoformat() for when in row] for row in rows] == [
            ["2027-07-08T05:06:07+00:00", "2026-07-08T05:06:07+00:00"], ["1999-01-01T00:00:00+00:00"] * 2,
        ]


def test_changes_come_consecutive_and_own_ones_without_their_text(base: Base) -> None:
    one, other = base.phone("One"), base.phone("Other")
    one.push(1, [text(base, one, n) for n in range(1, 6)])
    seen: list[dict[str, Any]] = []
    after = 0
    while True:
        url = f"/api/v1/surveys/{base.survey}/changes?after={after}&limit=3"
        told = other.client.get(url, headers=other.headers).get_json()
        seen.extend(told["entries"])
        after = told["through"]
        if after == told["last"]:
            break
    assert [entry["seq"] for entry in seen] == list(range(1, len(seen) + 1))
    assert all("text" in entry for entry in seen)
    own = one.client.get(f"/api/v1/surveys/{base.survey}/changes", headers=one.headers).get_json()["entries"]
    assert [(entry["n"], entry["count"]) for entry in own if "text" not in entry] == [(1, 5)]


def test_a_gap_is_told_with_what_is_missing(base: Base) -> None:
    phone = base.phone()
    answer = phone.push(3, [text(base, phone, 3)])
    assert answer.status_code == 409
    assert answer.get_json()["received_through"] == 0


def test_a_batch_for_another_store_or_another_epoch_is_refused(base: Base) -> None:
    phone = base.phone()
    assert phone.push(1, [text(base, phone, 1)], store="0" * 15).status_code == 409
    with base.app.app_context(), write() as session:
        begin_epoch(session)
    assert phone.push(1, [text(base, phone, 1)]).status_code == 409
    with base.app.app_context():
        assert db.session.scalars(select(observations.c.record)).all() == []


def test_a_batch_under_another_device_than_the_tokens_is_refused(base: Base) -> None:
    phone, other = base.phone("One"), base.phone("Other")
    assert phone.push(1, [text(base, phone, 1)], device=other.device).status_code == 422


def test_a_revoked_phone_hands_over_nothing(base: Base) -> None:
    phone = base.phone()
    with base.app.app_context(), write() as session:
        revoke_phone(session, base.survey, phone.device, "Lead")
    answer = phone.push(1, [text(base, phone, 1)])
    assert answer.status_code == 403
    assert answer.get_json()["type"].endswith("phone-revoked")
    with base.app.app_context():
        assert db.session.scalars(select(LedgerEntry).where(LedgerEntry.device == phone.device)).all() == []


@pytest.mark.parametrize(
    ("body", "headers"),
    [
        (b"", {}), (b"{", {}), (b"[]", {}), (b"\xff\xfe", {}), (b'{"v":0}', {}),
        (b"not gzip", {"Content-Encoding": "gzip"}),
        (gzip.compress(b"{}" * 10)[:-6], {"Content-Encoding": "gzip"}),
    ],
)
def test_what_is_no_batch_is_refused_clearly(base: Base, body: bytes, headers: dict[str, str]) -> None:
    phone = base.phone()
    answer = phone.client.post(f"/api/v1/surveys/{base.survey}/entries", data=body, headers={**phone.headers, **headers})
    assert answer.status_code == 422
    assert answer.get_json()["title"].startswith("the batch ")


def test_a_small_packet_that_unpacks_to_a_large_one_is_stopped(base: Base) -> None:
    phone = base.phone()
    bomb = gzip.compress(b" " * 50_000_000)
    answer = phone.client.post(f"/api/v1/surveys/{base.survey}/entries", data=bomb,
                               headers={**phone.headers, "Content-Encoding": "gzip"})
    assert answer.status_code == 413


def a_photo(**size: int) -> bytes:
    out = io.BytesIO()
    Image.new("RGB", (size.get("width", 40), size.get("height", 30)), "tan").save(out, "JPEG")
    return out.getvalue()


def add(phone: PhoneClient, data: bytes, offset: int = 0, *, whole: int | None = None, name: str = "") -> Any:
    """Send a part of a photo, by default all of it."""
    sha256 = name or hashlib.sha256(data).hexdigest()
    headers = {**phone.headers, "Upload-Offset": str(offset), "Upload-Length": str(len(data) if whole is None else whole)}
    return phone.client.patch(f"/api/v1/surveys/{phone.survey}/photos/{sha256}", data=data, headers=headers)


def test_a_photo_is_kept_once_and_comes_back_whole(base: Base) -> None:
    phone, data = base.phone(), a_photo()
    sha256 = hashlib.sha256(data).hexdigest()
    url = f"/api/v1/surveys/{base.survey}/photos/{sha256}"
    assert phone.client.head(url, headers=phone.headers).status_code == 404
    for _ in range(2):
        told = add(phone, data)
        assert told.status_code == 200
        assert (told.get_json()["offset"], told.get_json()["complete"]) == (len(data), True)
    held = phone.client.head(url, headers=phone.headers)
    assert held.headers["Ergbook-Store"] == phone.head["store"]
    assert held.headers["Upload-Offset"] == str(len(data))
    assert phone.client.get(url, headers=phone.headers).data == data
    desk = base.signed_in()
    assert desk.get(url).mimetype == "image/jpeg"
    with Image.open(io.BytesIO(desk.get(f"{url}/small").data)) as small:
        assert max(small.size) <= 240


def test_a_photo_cut_at_any_byte_goes_on_from_there(base: Base) -> None:
    phone = base.phone()
    for cut in range(1, 60, 7):
        data = a_photo(width=20 + cut)
        sha256 = hashlib.sha256(data).hexdigest()
        url = f"/api/v1/surveys/{base.survey}/photos/{sha256}"
        assert add(phone, data[:cut], whole=len(data), name=sha256).get_json()["complete"] is False
        there = phone.client.head(url, headers=phone.headers)
        assert (there.status_code, there.headers["Upload-Offset"]) == (404, str(cut))
        assert phone.client.get(url, headers=phone.headers).status_code == 404
        wrong = add(phone, data[cut + 1 :], cut + 1, whole=len(data), name=sha256)
        assert (wrong.status_code, wrong.get_json()["offset"]) == (409, cut)
        again = add(phone, data[:cut], whole=len(data), name=sha256)
        assert (again.status_code, again.get_json()["offset"]) == (409, cut)
        assert add(phone, data[cut:], cut, whole=len(data), name=sha256).get_json()["complete"] is True
        assert phone.client.get(url, headers=phone.headers).data == data


def test_a_spoilt_part_is_found_at_the_end_and_the_photo_begins_anew(base: Base) -> None:
    phone, data = base.phone(), a_photo()
    sha256 = hashlib.sha256(data).hexdigest()
    flipped = bytes([data[0] ^ 1]) + data[1:10]
    add(phone, flipped, whole=len(data), name=sha256)
    assert add(phone, data[10:], 10, whole=len(data), name=sha256).status_code == 422
    head = phone.client.head(f"/api/v1/surveys/{base.survey}/photos/{sha256}", headers=phone.headers)
    assert (head.status_code, head.headers["Upload-Offset"]) == (404, "0")
    assert add(phone, data).get_json()["complete"] is True


@pytest.mark.parametrize(
    ("data", "told"),
    [
        (b"", "this is not a photo"),
        (b"GIF89a not really", "this is not a photo"),
        (b"<svg xmlns='http://www.w3.org/2000/svg'><script>1</script></svg>", "this is not a photo"),
        (a_photo(width=400, height=300)[:-200], "the photo is damaged and does not decode"),
    ],
)
def test_a_fake_photo_is_refused_and_leaves_nothing(base: Base, data: bytes, told: str) -> None:
    answer = add(base.phone(), data)
    assert answer.status_code == 422
    assert answer.get_json()["title"] == told
    assert not [path for path in (base.app.config["ERGBOOK"].data_dir / "photos").rglob("*") if path.is_file()]


def test_a_photo_under_a_wrong_hash_and_one_too_large_are_refused(base: Base) -> None:
    phone = base.phone()
    assert "do not match" in add(phone, a_photo(), name="0" * 64).get_json()["title"]
    limit = base.app.config["ERGBOOK"].photo_bytes_max
    too_large = add(phone, b"", whole=limit + 1, name="1" * 64)
    assert too_large.status_code == 413
    assert "larger than 16 MB" in too_large.get_json()["title"]
    assert add(phone, bytes(1024 * 1024 + 1), whole=limit, name="1" * 64).status_code == 413
    url = f"/api/v1/surveys/{base.survey}/photos/{'1' * 64}"
    assert phone.client.patch(url, data=b"x", headers={**phone.headers, "Upload-Offset": "-1"}).status_code == 422


def test_a_photo_of_one_survey_is_unknown_in_another(base: Base) -> None:
    data = a_photo()
    sha256 = hashlib.sha256(data).hexdigest()
    add(base.phone(), data)
    from tests.http.conftest import new_survey

    with base.app.app_context():
        survey, _, site = new_survey("Elsewhere")
    there = Base(base.app, survey, "", site).phone()
    assert there.client.head(f"/api/v1/surveys/{survey}/photos/{sha256}", headers=there.headers).status_code == 404


def test_the_description_names_every_api_route(base: Base) -> None:
    told = base.app.test_client().get("/api/v1/openapi.json").get_json()
    ours = {rule.rule.replace("<", "{").replace(">", "}") for rule in base.app.url_map.iter_rules()
            if rule.rule.startswith("/api/v1/")}
    assert set(told["paths"]) == ours
    assert json.dumps(told)
    assert "crest_read_deg" in told["components"]["schemas"]["ObservationValues"]["properties"]
