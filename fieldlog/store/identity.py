"""Who this store is."""

from __future__ import annotations

from sqlalchemy import select

from fieldlog.ledger.names import new_device
from fieldlog.store.db import AnySession
from fieldlog.store.tables import StoreIdentity, SurveyCounter


def identity(session: AnySession) -> StoreIdentity:
    """The store's id and epoch; RuntimeError where the database has not been set up."""
    found = session.get(StoreIdentity, 1)
    if found is None:
        raise RuntimeError("this database has no store identity: run the migrations")
    return found


def ensure_identity(session: AnySession) -> StoreIdentity:
    """The store's id and epoch, made at first start. Inside `write()`."""
    found = session.get(StoreIdentity, 1)
    if found is None:
        found = StoreIdentity(id=1, store=new_device(), epoch=new_device())
        session.add(found)
        session.flush()
    return found


def begin_epoch(session: AnySession) -> str:
    """A new epoch: this store has gone back in time, phones must compare anew. Inside `write()`.

    As a device of every survey the store has gone back too: phones may hold what it said under
    numbers that it would now give a second time. So it goes on under new device ids.
    """
    found = ensure_identity(session)
    found.epoch = new_device()
    for counter in session.scalars(select(SurveyCounter)):
        counter.store_device = new_device()
    session.flush()
    return found.epoch
