"""People and their keys. None of this is in the ledger; an audit line says what was done."""

from __future__ import annotations

from datetime import datetime

from sqlalchemy import ForeignKey, Index, String, Text
from sqlalchemy.orm import Mapped, mapped_column

from fieldlog.store.db import Base, UtcTime
from fieldlog.store.tables import LongInteger


class Lead(Base):
    """Somebody who signs in at the desk."""

    __tablename__ = "lead"
    id: Mapped[int] = mapped_column(LongInteger, primary_key=True)
    name: Mapped[str] = mapped_column(String(80), unique=True)
    password_hash: Mapped[str] = mapped_column(Text, default="")
    session_number: Mapped[int] = mapped_column(default=1)
    """Part of the signed-in cookie; counting it up ends every session of this lead."""
    created_at: Mapped[datetime] = mapped_column(UtcTime)


class OneTimeLink(Base):
    """A link that signs somebody in once: the first lead, or the lead it names."""

    __tablename__ = "one_time_link"
    token_hash: Mapped[str] = mapped_column(String(64), primary_key=True)
    lead: Mapped[int | None] = mapped_column(ForeignKey("lead.id"))
    expires_at: Mapped[datetime] = mapped_column(UtcTime)
    used_at: Mapped[datetime | None] = mapped_column(UtcTime)


class JoiningCode(Base):
    """Lets phones join a survey until it expires or is closed; one code serves many times."""

    __tablename__ = "joining_code"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    code_hash: Mapped[str] = mapped_column(String(64), primary_key=True)
    made_at: Mapped[datetime] = mapped_column(UtcTime)
    expires_at: Mapped[datetime] = mapped_column(UtcTime)
    closed_at: Mapped[datetime | None] = mapped_column(UtcTime)
    __table_args__ = (Index(None, "code_hash", unique=True),)


class Phone(Base):
    """A phone that joined a survey. Its token is kept as a hash."""

    __tablename__ = "phone"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    device: Mapped[str] = mapped_column(String(15), primary_key=True)
    token_hash: Mapped[str] = mapped_column(String(64), unique=True)
    crew: Mapped[str] = mapped_column(String(31))
    app: Mapped[str] = mapped_column(String(40), default="")
    joined_at: Mapped[datetime] = mapped_column(UtcTime)
    seen_at: Mapped[datetime | None] = mapped_column(UtcTime)
    revoked_at: Mapped[datetime | None] = mapped_column(UtcTime)


class AuditLine(Base):
    """What was done with accounts and keys: who, when, what."""

    __tablename__ = "audit_line"
    id: Mapped[int] = mapped_column(LongInteger, primary_key=True)
    survey: Mapped[str | None] = mapped_column(String(10))
    at: Mapped[datetime] = mapped_column(UtcTime)
    who: Mapped[str] = mapped_column(String(80))
    what: Mapped[str] = mapped_column(Text)
