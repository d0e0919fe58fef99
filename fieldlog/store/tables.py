"""The tables: the ledger and its counters, and the projected tables drawn from the sheets.

Every table is keyed by survey first, so that a database spread over machines can keep a survey
together. Projected tables hold nothing that the ledger does not; they may be dropped and rebuilt.
"""

from __future__ import annotations

from typing import Any

from sqlalchemy import (
    JSON,
    BigInteger,
    Boolean,
    Column,
    Float,
    ForeignKey,
    Index,
    Integer,
    LargeBinary,
    String,
    Table,
    Text,
    UniqueConstraint,
)
from sqlalchemy.orm import Mapped, mapped_column
from sqlalchemy.types import TypeEngine

from fieldlog.sheet.fields import Field, Sheet, absent_column
from fieldlog.sheet.subjects import SHEETS
from fieldlog.store.db import Base, UtcTime

LongInteger = BigInteger().with_variant(Integer(), "sqlite")
_WIDE = {"bytes"}


class StoreIdentity(Base):
    """Who this store is. The epoch is new at creation and at every restore."""

    __tablename__ = "store_identity"
    id: Mapped[int] = mapped_column(primary_key=True)
    store: Mapped[str] = mapped_column(String(15))
    epoch: Mapped[str] = mapped_column(String(15))


class SurveyCounter(Base):
    """The survey's lock and counter: locked by every append, so numbers show in order and gapless."""

    __tablename__ = "survey_counter"
    survey: Mapped[str] = mapped_column(String(10), primary_key=True)
    seq: Mapped[int] = mapped_column(LongInteger, default=0)
    store_device: Mapped[str] = mapped_column(String(15))
    hlc: Mapped[str] = mapped_column(String(17), default="")


class DeviceCounter(Base):
    """How far a device's entries have been received without a hole."""

    __tablename__ = "device_counter"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    device: Mapped[str] = mapped_column(String(15), primary_key=True)
    received_through: Mapped[int] = mapped_column(LongInteger, default=0)


class LedgerEntry(Base):
    """One entry, its text byte for byte as its device wrote it. Rows are only ever added."""

    __tablename__ = "ledger_entry"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    seq: Mapped[int] = mapped_column(LongInteger, primary_key=True, autoincrement=False)
    device: Mapped[str] = mapped_column(String(15))
    n: Mapped[int] = mapped_column(LongInteger)
    kind: Mapped[str] = mapped_column(String(20))
    record: Mapped[str] = mapped_column(String(31))
    text: Mapped[str] = mapped_column(Text)
    sha256: Mapped[str] = mapped_column(String(64))
    received_at: Mapped[Any] = mapped_column(UtcTime)
    accepted_by: Mapped[str | None] = mapped_column(String(31))
    """Crew record of the lead who accepted it from a file; None where it came by hand-over."""
    __table_args__ = (UniqueConstraint("survey", "device", "n"), Index(None, "survey", "record"))


class SetAside(Base):
    """An entry that could not be kept in the ledger: its text raw, and what is wrong with it."""

    __tablename__ = "set_aside"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    device: Mapped[str] = mapped_column(String(15), primary_key=True)
    n: Mapped[int] = mapped_column(LongInteger, primary_key=True, autoincrement=False)
    text: Mapped[bytes] = mapped_column(LargeBinary)
    sha256: Mapped[str] = mapped_column(String(64))
    problem: Mapped[str] = mapped_column(Text)
    received_at: Mapped[Any] = mapped_column(UtcTime)


class TwoVersions(Base):
    """Fields with several values that nobody has chosen between yet."""

    __tablename__ = "two_versions"
    survey: Mapped[str] = mapped_column(ForeignKey("survey_counter.survey"), primary_key=True)
    record: Mapped[str] = mapped_column(String(31), primary_key=True)
    field: Mapped[str] = mapped_column(String(60), primary_key=True)
    kind: Mapped[str] = mapped_column(String(20))
    versions: Mapped[Any] = mapped_column(JSON)


def _column_type(field: Field) -> TypeEngine[Any]:
    if field.type == "integer":
        return LongInteger if field.name in _WIDE else Integer()
    kinds: dict[str, TypeEngine[Any]] = {
        "number": Float(53),
        "direction": Float(53),
        "orientation": Float(53),
        "choice": String(40),
        "text": Text(),
        "flag": Boolean(),
        "time": UtcTime(),
        "reference": String(31),
        "names": JSON(none_as_null=True),
        "points": JSON(none_as_null=True),
    }
    return kinds[field.type]


def _projected(sheet: Sheet) -> Table:
    columns: list[Column[Any]] = []
    for field in sheet.fields:
        columns.append(Column(field.name, _column_type(field)))
        if field.measure:
            columns.append(Column(absent_column(field.name), String(20)))
    extras = [Index(None, "survey", name) for name in _INDEXED.get(sheet.kind, ())]
    return Table(
        sheet.kind,
        Base.metadata,
        Column("survey", String(10), ForeignKey("survey_counter.survey"), primary_key=True),
        Column("record", String(31), primary_key=True),
        *columns,
        Column("made_by", String(31), nullable=False),
        Column("made_on", String(15), nullable=False),
        Column("made_at", UtcTime(), nullable=False),
        Column("first_seq", LongInteger, nullable=False),
        Column("last_seq", LongInteger, nullable=False),
        *extras,
    )


_INDEXED = {"observation": ("site", "observed_at"), "photo": ("observation", "sha256")}

TABLES: dict[str, Table] = {kind: _projected(sheet) for kind, sheet in SHEETS.items()}
"""Kind -> its projected table: columns of the sheet between (survey, record) and who, when, seq."""

surveys = TABLES["survey"]
crew = TABLES["crew"]
sites = TABLES["site"]
observations = TABLES["observation"]
photos = TABLES["photo"]
tracks = TABLES["track"]
same_dunes = TABLES["same_dune"]
