"""Signing in, joining, and taking that back."""

from __future__ import annotations

import hashlib
import hmac
import secrets
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from typing import Final

from sqlalchemy import func, select
from werkzeug.security import check_password_hash, generate_password_hash

from fieldlog.errors import Refusal
from fieldlog.ledger.names import ALPHABET, is_device
from fieldlog.people.models import AuditLine, JoiningCode, Lead, OneTimeLink, Phone
from fieldlog.store.append import ForeignStoreError, say
from fieldlog.store.db import AnySession
from fieldlog.store.tables import crew, surveys

PASSWORD_LENGTH: Final = 10
LINK_HOURS: Final = 24
CODE_LENGTH: Final = 8
_NO_PASSWORD: Final = generate_password_hash(secrets.token_hex())
"""Checked where the name is unknown, so that the answer takes as long."""


class SignInError(Refusal, ValueError):
    """Name and password do not go together."""


class LinkError(Refusal, ValueError):
    """A one-time link that no longer opens anything."""


class JoiningError(Refusal, ValueError):
    """A joining code that lets nobody in."""


@dataclass(frozen=True)
class LinkFound:
    """What a one-time link would do: make the first lead, or sign in the lead it names."""

    makes_first_lead: bool
    lead_name: str


@dataclass(frozen=True)
class CodeFound:
    """The survey that a joining code opens, and its crew as (record, name)."""

    survey: str
    name: str
    crew: list[tuple[str, str]]


@dataclass(frozen=True)
class Joined:
    """What a phone gets once: its token, and who it is in the survey."""

    token: str
    survey: str
    name: str
    crew: str


def _now() -> datetime:
    return datetime.now(UTC)


def _hash(token: str) -> str:
    return hashlib.sha256(token.encode()).hexdigest()


def audit(session: AnySession, who: str, what: str, survey: str | None = None) -> None:
    """Write down what was done with accounts and keys."""
    session.add(AuditLine(survey=survey, at=_now(), who=who, what=what))


# One-time links


def _make_link(session: AnySession, lead: int | None) -> str:
    token = secrets.token_urlsafe(24)
    session.add(
        OneTimeLink(token_hash=_hash(token), lead=lead, expires_at=_now() + timedelta(hours=LINK_HOURS), used_at=None)
    )
    session.flush()
    return token


def first_lead_link(session: AnySession) -> str | None:
    """The token of a link that makes the first lead; None where there is a lead already. Inside `write()`."""
    if session.scalar(select(func.count()).select_from(Lead)):
        return None
    return _make_link(session, None)


def sign_in_link(session: AnySession, lead: int) -> str:
    """The token of a link that signs a lead in once. Inside `write()`."""
    return _make_link(session, lead)


def _find_link(session: AnySession, token: str) -> OneTimeLink:
    found = session.get(OneTimeLink, _hash(token))
    if found is None:
        raise LinkError("this link opens nothing", mend="Ask for a new one where the store was started")
    if found.used_at is not None:
        raise LinkError("this link has been used already", mend="Sign in with your name and password")
    if found.expires_at <= _now():
        raise LinkError("this link is too old", mend="Start the store again: it prints a new one")
    if found.lead is None and session.scalar(select(func.count()).select_from(Lead)):
        raise LinkError("there is a first lead already", mend="Sign in, or ask that lead")
    return found


def look_at_link(session: AnySession, token: str) -> LinkFound:
    """What the link would do. Looking does not spend it."""
    found = _find_link(session, token)
    lead = session.get(Lead, found.lead) if found.lead is not None else None
    return LinkFound(found.lead is None, lead.name if lead else "")


def spend_link(session: AnySession, token: str, *, name: str = "", password: str = "") -> Lead:
    """Use the link up and give the lead it signs in. Inside `write()`."""
    link = _find_link(session, token)
    if link.lead is None:
        lead = add_lead(session, name, password)
    else:
        found = session.get(Lead, link.lead)
        if found is None:
            raise LinkError("the lead of this link is gone")
        lead = found
    link.used_at = _now()
    audit(session, lead.name, "signed in by a one-time link")
    return lead


# Leads


def lead_named(session: AnySession, name: str) -> Lead | None:
    """The lead of this name, None where there is none."""
    found: Lead | None = session.scalar(select(Lead).where(Lead.name == name))
    return found


def add_lead(session: AnySession, name: str, password: str | None) -> Lead:
    """A new lead. `password` None: signs in by one-time links only. Inside `write()`."""
    name = name.strip()
    if not 1 <= len(name) <= 80:
        raise Refusal("a name has 1 to 80 characters", "name")
    if password is not None and len(password) < PASSWORD_LENGTH:
        raise Refusal(f"a password has at least {PASSWORD_LENGTH} characters", "password", "Several words do well")
    if lead_named(session, name):
        raise Refusal(f"there is a lead called {name} already", "name")
    lead = Lead(
        name=name,
        password_hash=generate_password_hash(password) if password is not None else "",
        created_at=_now(),
        session_number=1,
    )
    session.add(lead)
    session.flush()
    audit(session, name, "became a lead")
    return lead


def sign_in(session: AnySession, name: str, password: str) -> Lead:
    """The lead whose password this is; SignInError otherwise, without saying which of the two is wrong."""
    lead = session.scalar(select(Lead).where(Lead.name == name.strip()))
    kept = lead.password_hash if lead and lead.password_hash else _NO_PASSWORD
    right = check_password_hash(kept, password)
    if lead is None or not lead.password_hash or not right:
        raise SignInError("name and password do not go together", mend="Try again, or ask for a one-time link")
    return lead


# Joining codes


def _code_hash(secret: str, code: str) -> str:
    """Codes are short, so their hash needs the store's secret too."""
    return hmac.new(secret.encode(), code.encode(), hashlib.sha256).hexdigest()


def plain_code(typed: str) -> str:
    """The code as it was made, however it was typed: spaces, dashes, capitals, o for 0, i and l for 1."""
    letters = typed.lower().translate(str.maketrans("oil", "011"))
    return "".join(character for character in letters if character in ALPHABET)


def shown_code(code: str) -> str:
    """The code as people read it: two groups of four capitals."""
    return f"{code[:4]}-{code[4:]}".upper()


def make_joining_code(session: AnySession, survey: str, *, secret: str, who: str, hours: int = 48) -> str:
    """A new code, as people read it. It is kept as a hash, so it shows this once. Inside `write()`."""
    if not 1 <= hours <= 24 * 60:
        raise Refusal("a joining code lives from 1 hour to 60 days", "hours")
    code = "".join(secrets.choice(ALPHABET) for _ in range(CODE_LENGTH))
    session.add(
        JoiningCode(
            survey=survey, code_hash=_code_hash(secret, code), made_at=_now(),
            expires_at=_now() + timedelta(hours=hours), closed_at=None,
        )
    )
    audit(session, who, f"made a joining code for {hours} hours", survey)
    session.flush()
    return shown_code(code)


def close_joining_codes(session: AnySession, survey: str, who: str) -> int:
    """Close every open code of the survey; how many. Inside `write()`."""
    open_codes = session.scalars(
        select(JoiningCode).where(JoiningCode.survey == survey, JoiningCode.closed_at.is_(None))
    ).all()
    for code in open_codes:
        code.closed_at = _now()
    audit(session, who, f"closed {len(open_codes)} joining codes", survey)
    return len(open_codes)


def _find_code(session: AnySession, typed: str, secret: str) -> JoiningCode:
    code = plain_code(typed)
    found = session.scalar(select(JoiningCode).where(JoiningCode.code_hash == _code_hash(secret, code)))
    if found is None:
        raise JoiningError(
            "this joining code is not known here", "code",
            "Compare it with the lead's screen; it has eight characters",
        )
    if found.closed_at is not None:
        raise JoiningError("this joining code has been closed", "code", "Ask the lead for a new one")
    if found.expires_at <= _now():
        raise JoiningError("this joining code has expired", "code", "Ask the lead for a new one")
    return found


def look_at_code(session: AnySession, typed: str, *, secret: str) -> CodeFound:
    """The survey that the code opens, and who is in it."""
    survey = _find_code(session, typed, secret).survey
    members = session.execute(
        select(crew.c.record, crew.c.name).where(crew.c.survey == survey).order_by(crew.c.name)
    ).all()
    name = session.scalar(select(surveys.c.name).where(surveys.c.survey == survey)) or survey
    return CodeFound(survey, name, [(record, member) for record, member in members])


def join(
    session: AnySession, typed: str, *, secret: str, device: str, app: str, member: str = "", name: str = ""
) -> Joined:
    """Let a phone join as a crew member that exists (`member`: their record) or a new one (`name`).

    Inside `write()`. Joining twice with one device is refused: its token was lost, so it must begin
    with a device of its own.
    """
    found = look_at_code(session, typed, secret=secret)
    if not is_device(device):
        raise JoiningError("this is not the id of a device", "device")
    if session.get(Phone, (found.survey, device)):
        raise JoiningError("this phone has joined already", "device", "Open the survey on the phone")
    names = dict(found.crew)
    if member:
        if member not in names:
            raise JoiningError("this crew member is not in the survey", "crew", "Choose again, or type a name")
    else:
        member = next((record for record, known in found.crew if known == name.strip()), "") or say(
            session, found.survey, by=None, kind="crew", values={"name": name.strip()}
        )
    token = secrets.token_urlsafe(32)
    session.add(
        Phone(
            survey=found.survey, device=device, token_hash=_hash(token), crew=member, app=app[:40],
            joined_at=_now(), seen_at=_now(), revoked_at=None,
        )
    )
    audit(session, names.get(member, name.strip()), f"joined with phone {device}", found.survey)
    session.flush()
    return Joined(token, found.survey, found.name, member)


# Phones


def phone_of_token(session: AnySession, token: str) -> Phone | None:
    """The phone whose token this is, revoked or not; None where there is none."""
    return session.scalar(select(Phone).where(Phone.token_hash == _hash(token)))


def phones_of(session: AnySession, survey: str) -> list[Phone]:
    """The survey's phones, in the order in which they joined."""
    return list(session.scalars(select(Phone).where(Phone.survey == survey).order_by(Phone.joined_at)))


def note_seen(session: AnySession, survey: str, device: str, app: str) -> None:
    """A phone has handed over. Inside `write()`."""
    phone = session.get(Phone, (survey, device))
    if phone is not None:
        phone.seen_at = _now()
        phone.app = app[:40]


def revoke_phone(session: AnySession, survey: str, device: str, who: str) -> None:
    """Take a phone's token back. What it holds stays on it. Inside `write()`."""
    phone = session.get(Phone, (survey, device))
    if phone is None:
        raise ForeignStoreError("there is no such phone in this survey", device)
    if phone.revoked_at is None:
        phone.revoked_at = _now()
        audit(session, who, f"revoked phone {device}", survey)
