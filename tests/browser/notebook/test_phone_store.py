"""What "saved" means: durable, once, strict, in one transaction, and never lost by this app."""

from __future__ import annotations

from typing import Any

import pytest
from playwright.sync_api import Error

from fieldlog.ledger.entry import Entry
from fieldlog.ledger.merge import merge
from tests.browser.notebook.faulty_line import Line
from tests.browser.notebook.notebook_page import NotebookPage, Profile
from tests.browser.notebook.store_of_one_survey import StoreOfOneSurvey


def test_joining_receives_the_whole_survey(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    info = joined.run("() => book.info")
    assert (info["survey"], info["name"], info["crewName"]) == (store.survey, "Red Erg", "Bo")
    assert joined.run("() => book.survey().target_half_width_deg") == 10
    assert [site["name"] for site in joined.run("() => book.sites()")] == ["North dune"]
    assert {member["name"] for member in joined.run("() => book.crew()")} == {"Lead", "Ada", "Bo"}
    assert joined.run("() => notebooks.listNotebooks(deps)") == [{"survey": store.survey, "name": "Red Erg"}]


def test_a_save_is_one_strict_transaction_and_deletes_its_draft(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    joined.run("() => book.draft.put('open form', {crest_read_deg: 12, photo: new ArrayBuffer(4)})")
    assert joined.run("async () => (await book.draft.get('open form')).crest_read_deg") == 12
    joined.transactions()
    saved = joined.save(store.site, 12, draft="open form")
    writing = [t for t in joined.transactions() if t["mode"] == "readwrite"]
    assert [t["durability"] for t in writing] == ["strict"]
    assert "ledger" in writing[0]["stores"]
    assert joined.run("() => book.draft.get('open form')") is None
    [row] = joined.observations()
    assert (row["record"], row["crest_deg"], row["atBase"]) == (saved["record"], 12, False)
    assert joined.counts()["unsent"] == 1


def test_saved_outlives_a_killed_browser(joined: NotebookPage, profile: Profile, line: Line, store: StoreOfOneSurvey) -> None:
    joined.run("() => book.draft.put('next', {note: 'half written'})")
    records = [joined.save(store.site, crest)["record"] for crest in (10, 20, 30)]
    photo = joined.save_photo(store.site, 40)["record"]
    profile.phone.kill()
    again = profile.page(line.address)
    assert again.run("() => notebooks.listNotebooks(deps)") == [{"survey": store.survey, "name": "Red Erg"}]
    again.open(store.survey)
    assert [row["record"] for row in again.observations()] == [*records, photo]
    assert again.run("() => book.draft.get('next')") == {"note": "half written"}
    assert again.counts() | {"oldestUnsentAt": ""} == {
        "unsent": 5, "unsentPhotos": 1, "oldestUnsentAt": "", "setAside": 0, "fromNewerApp": 0,
    }
    assert again.save(store.site, 50)["record"].endswith("-6")


def test_an_edit_says_only_what_differs_over_what_was_seen(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    record = joined.save(store.site, 10, note="first")["record"]
    joined.save(store.site, 11, record=record, note="first")
    joined.save(store.site, 12, record=record, note=None)
    same = joined.save(store.site, 12, record=record)
    assert same == {"record": record, "entry": None}
    texts = joined.run(
        """async () => (await book.connection.transact(['ledger'], 'readonly', (t, done) => {
            const all = t.objectStore('ledger').getAll(); all.onsuccess = () => done(all.result);
        })).filter((row) => row.device === book.info.device)"""
    )
    entries = [Entry(row["device"], row["n"], row["text"]) for row in texts]
    assert [entry.values for entry in entries[1:]] == [{"crest_read_deg": 11}, {"crest_read_deg": 12, "note": None}]
    assert entries[1].over == {"crest_read_deg": [record]}
    # What base may never take is listed with what it replaced itself.
    assert set(entries[2].over["crest_read_deg"]) == {entries[1].name, record}
    merged = merge(entries)
    assert merged.two_versions == {}
    assert merged.values["crest_read_deg"] == 12
    [row] = joined.observations()
    assert (row["crest_deg"], row["note"], row["twoVersions"]) == (12, None, [])


def test_two_pages_of_one_phone_never_give_a_number_twice(
    joined: NotebookPage, profile: Profile, line: Line, store: StoreOfOneSurvey
) -> None:
    other = profile.page(line.address)
    other.open(store.survey)
    both = """([site, from]) => Promise.all(Array.from({length: 10}, (_, index) => (
        book.save('observation', {site, observed_at: '2026-03-04T05:06:07Z', crest_read_deg: from + index}))))"""
    joined.page.evaluate(f"given => {{ window.under_way = ({both})(given); }}", [store.site, 0])
    there = other.run(both, [store.site, 50])
    here = joined.run("() => under_way")
    records = [each["record"] for each in [*here, *there]]
    assert len(set(records)) == 20
    assert sorted(int(record.partition("-")[2]) for record in records) == list(range(1, 21))
    for page in (joined, other):
        page.wait_until(lambda page=page: len(page.observations()) == 20)  # type: ignore[misc]
        assert page.counts()["unsent"] == 20


def test_what_cannot_be_kept_is_not_called_saved_and_keeps_the_draft(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    joined.run("() => book.draft.put('form', {crest_read_deg: 12})")
    joined.run(
        """() => {
            window.plain_add = IDBObjectStore.prototype.add;
            IDBObjectStore.prototype.add = function (value) { const made = plain_add.call(this, value); this.transaction.abort(); return made; };
        }"""
    )
    with pytest.raises(Error, match="Not saved"):
        joined.save(store.site, 12, draft="form")
    joined.run("() => { IDBObjectStore.prototype.add = plain_add; }")
    assert joined.observations() == []
    assert joined.counts()["unsent"] == 0
    assert joined.run("() => book.draft.get('form')") == {"crest_read_deg": 12}
    assert joined.save(store.site, 12, draft="form")["record"].endswith("-1")


def test_a_handle_that_was_lost_is_opened_again(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    joined.save(store.site, 1)
    joined.run("async () => (await book.connection.opening).close()")
    joined.save(store.site, 2)
    assert [row["crest_deg"] for row in joined.observations()] == [1, 2]


def test_opening_that_another_page_blocks_is_an_error_in_words(profile: Profile, line: Line) -> None:
    page = profile.page(line.address)
    holding = """async () => { const {openDatabase} = await import('/static/js/store/open.js');
        window.held = await new Promise((done) => { const r = indexedDB.open('x', 1); r.onsuccess = () => done(r.result); }); }"""
    page.run(holding)
    blocked = """async () => { const {openDatabase} = await import('/static/js/store/open.js');
        return openDatabase(indexedDB, 'x', [() => {}, () => {}], () => {}).then(() => 'opened', (error) => error.title); }"""
    assert page.run(blocked) == "Another page holds an older notebook open"


def test_an_old_page_makes_way_for_an_upgrade_and_says_so_afterwards(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    upgraded = joined.run(
        """([survey]) => new Promise((done) => {
            const request = indexedDB.open(`ergbook-${survey}`, 99);
            request.onblocked = () => done('blocked');
            request.onsuccess = () => { request.result.close(); done('upgraded'); };
        })""",
        [store.survey],
    )
    assert upgraded == "upgraded"
    with pytest.raises(Error, match="A newer Ergbook"):
        joined.save(store.site, 1)


def test_without_a_secure_context_it_says_so(profile: Profile, line: Line, store: StoreOfOneSurvey) -> None:
    page = profile.page(line.address, deps="{crypto: {}}")
    with pytest.raises(Error, match="This address is not secure"):
        page.join(store.joining_code())


def test_a_photo_is_scaled_turned_and_kept_as_bytes(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    record = joined.save_photo(store.site, 40, size=2000)["record"]
    sizes: dict[str, Any] = joined.run(
        """async (record) => {
            const [photo] = book.photos(record);
            const [t, f] = [await photo.thumbnailUrl(), await photo.fullUrl()];
            const picture = async (url) => { const i = new Image(); i.src = url; await i.decode(); return [i.naturalWidth, i.naturalHeight]; };
            return {row: [photo.width_px, photo.height_px], thumbnail: await picture(t), full: await picture(f), isSent: photo.isSent};
        }""",
        record,
    )
    assert sizes == {"row": [1600, 800], "thumbnail": [240, 120], "full": [1600, 800], "isSent": False}


def test_nothing_but_readings_photos_and_tracks_is_said_on_a_phone(joined: NotebookPage, store: StoreOfOneSurvey) -> None:
    with pytest.raises(Error, match="a site is not said on a phone"):
        joined.run("() => book.save('site', {name: 'x', lat_deg: 0, lon_deg: 0})")
