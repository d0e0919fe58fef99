"""A phone's file into its survey: looked at first, then accepted by the lead, entry by entry as a hand-over.

Doing it twice changes nothing. Whatever the phone has handed over meanwhile is there already.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Final

from fieldlog.handover.schema import ENTRY_BYTES_MAX
from fieldlog.imports.found import ImportFileError
from fieldlog.imports.notebook import Notebook
from fieldlog.ledger.entry import hash_of
from fieldlog.people.models import Phone
from fieldlog.people.service import audit, phones_of
from fieldlog.sheet.subjects import PHONE_KINDS, SHEETS
from fieldlog.store.append import GapError, Prepared, append, base_device, hashes_of, prepare
from fieldlog.store.db import AnySession
from fieldlog.store.photos import PhotoError, PhotoFolder, check_photo
from fieldlog.surveys.service import crew_names

BATCH: Final = 500
BASE: Final = "base itself"
UNKNOWN: Final = "no phone that joined here: base itself before it was restored, or a copied phone"


@dataclass
class DeviceLine:
    """What the file brings of one device. `who` is the crew member, `standing` what is known of the device here."""

    device: str
    who: str
    standing: str
    fresh: int = 0
    already: int = 0
    problems: list[str] = field(default_factory=list)


@dataclass
class NotebookPlan:
    """What accepting a phone's file would bring, or has brought."""

    made_by: str
    made_at: str
    devices: list[DeviceLine] = field(default_factory=list)
    photos: int = 0
    photos_already: int = 0
    photo_problems: list[str] = field(default_factory=list)
    is_taken: bool = False

    @property
    def fresh(self) -> int:
        """Entries that base does not hold."""
        return sum(line.fresh for line in self.devices)


def look(session: AnySession, survey: str, notebook: Notebook, folder: PhotoFolder) -> NotebookPlan:
    """What the file would bring; nothing is written. ImportFileError where it is another survey's."""
    if notebook.head.get("survey") != survey:
        raise ImportFileError(
            f"this notebook is of another survey ({notebook.head.get('name', 'without a name')})", "the file", "Import it there"
        )
    plan = NotebookPlan(str(notebook.head.get("crew_name") or ""), str(notebook.head.get("made_at") or ""))
    names = crew_names(session, survey)
    known = {phone.device: phone for phone in phones_of(session, survey)}
    base = base_device(session, survey)
    for device, texts in sorted(notebook.entries.items()):
        phone = known.get(device)
        line = DeviceLine(device, names.get(phone.crew, "") if phone else "", BASE if device == base else _standing(phone))
        held = hashes_of(session, survey, device)
        line.already = sum(held.get(n) == hash_of(text) for n, text in texts.items())
        line.fresh = sum(n not in held for n in texts)
        line.problems = _problems(survey, texts, held, phone)
        plan.devices.append(line)
    plan.devices.sort(key=lambda line: (line.device != notebook.head.get("device"), -line.fresh))
    plan.photos = sum(folder.size(survey, sha256) is None for sha256 in notebook.photos)
    plan.photos_already = len(notebook.photos) - plan.photos
    return plan


def accept(session: AnySession, survey: str, by: str, who: str, notebook: Notebook, folder: PhotoFolder) -> NotebookPlan:
    """Take in what base does not hold, marked as accepted by the crew record `by`. Inside `write()`."""
    plan = look(session, survey, notebook, folder)
    for line in plan.devices:
        if line.fresh:
            _accept_device(session, survey, by, line, notebook.entries[line.device])
    for sha256, data in notebook.photos.items():
        if folder.size(survey, sha256) is not None:
            continue
        try:
            check_photo(sha256, data)
        except PhotoError as problem:
            plan.photo_problems.append(str(problem))
            continue
        folder.keep(survey, sha256, data)
    plan.is_taken = True
    audit(session, who, f"accepted the file of phone {notebook.head.get('device')}: {plan.fresh} entries", survey)
    return plan


def _accept_device(session: AnySession, survey: str, by: str, line: DeviceLine, texts: dict[int, str]) -> None:
    numbers = sorted(texts)
    is_phone = line.standing not in (UNKNOWN, BASE)
    batch = [_checked(survey, n, texts[n], is_phone=is_phone) for n in numbers]
    for start in range(0, len(batch), BATCH):
        part = batch[start : start + BATCH]
        if part[-1].n - part[0].n != len(part) - 1:
            line.problems.append("numbers are missing in the file; save it on the phone again")
            return
        try:
            append(session, survey, line.device, part, accepted_by=by)
        except GapError as gap:
            line.problems.append(str(gap))
            return


def _checked(survey: str, n: int, text: str, *, is_phone: bool) -> Prepared:
    item = prepare(survey, n, text, kinds=PHONE_KINDS if is_phone else frozenset(SHEETS))
    size = len(text.encode(errors="replace"))
    if not item.problem and size > ENTRY_BYTES_MAX:
        return Prepared(n, text, item.sha256, f"the entry has {size} bytes, more than {ENTRY_BYTES_MAX}")
    return item


def _standing(phone: Phone | None) -> str:
    if phone is None:
        return UNKNOWN
    return "revoked" if phone.revoked_at else "joined"


def _problems(survey: str, texts: dict[int, str], held: dict[int, str], phone: Phone | None) -> list[str]:
    told = [f"entry {n} differs from the one that base holds under this number" for n, text in sorted(texts.items()) if held.get(n, hash_of(text)) != hash_of(text)]
    for n, text in sorted(texts.items()):
        item = _checked(survey, n, text, is_phone=phone is not None)
        if n not in held and item.problem:
            told.append(f"entry {n} will be set aside: {item.problem}")
    return told


def sentence(plan: NotebookPlan) -> str:
    """What the file brings, in words."""
    parts = [f"{plan.fresh} {'entry' if plan.fresh == 1 else 'entries'}"] if plan.fresh else []
    if plan.photos:
        parts.append(f"{plan.photos} {'photo' if plan.photos == 1 else 'photos'}")
    if not parts:
        return "Base holds all of it already."
    return f"{' and '.join(parts)} {'taken in' if plan.is_taken else 'that base does not hold'}."

