"""The migrations and the models say the same on both databases."""

from __future__ import annotations

from flask import Flask
from sqlalchemy import ForeignKeyConstraint, func, inspect, select, text

from fieldlog.ledger.names import new_device
from fieldlog.people import models as _people_models  # noqa: F401  its tables belong to the metadata
from fieldlog.store.db import Base, db
from fieldlog.store.migrate import difference, downgrade, engine_for, upgrade
from fieldlog.store.rebuild import check
from fieldlog.store.tables import observations
from fieldlog.web.app import create_app
from tests.factories import Survey, send

WITHOUT_A_SURVEY = {"store_identity", "lead", "one_time_link", "joining_code", "audit_line", "alembic_version"}
"""Tables of the store and its people as a whole; a code or an audit line only names a survey."""


def test_nothing_separates_the_models_from_a_migrated_database(database_url: str) -> None:
    upgrade(database_url)
    upgrade(database_url)  # what is there already is left alone
    engine = engine_for(database_url)
    with engine.connect() as connection:
        assert difference(connection) == []
    engine.dispose()


def test_a_difference_is_seen(database_url: str) -> None:
    upgrade(database_url)
    engine = engine_for(database_url)
    with engine.begin() as connection:
        connection.execute(text("ALTER TABLE site DROP COLUMN note"))
        connection.execute(text("DROP INDEX ix_photo_survey_sha256"))
    with engine.connect() as connection:
        assert sorted(kind for kind, *_ in difference(connection)) == ["add_column", "add_index"]
    engine.dispose()


def test_an_older_store_is_brought_forward_and_filled_from_its_ledger(app: Flask) -> None:
    settings = app.config["ERGBOOK"]
    with app.app_context():
        survey = Survey()
        assert set(send(survey, new_device(), survey.batch(range(1, 4)))) == {"stored"}
        db.session.remove()
        db.engine.dispose()
    downgrade(settings.database_url, "0001")
    again = create_app(settings)
    with again.app_context():
        assert list(check(db.session)) == []
        assert db.session.scalar(select(func.count()).where(observations.c.observed_by_clock.is_not(None))) == 3
        db.session.remove()
        db.engine.dispose()


def test_every_constraint_has_a_name_in_the_database(database_url: str) -> None:
    upgrade(database_url)
    engine = engine_for(database_url)
    seen = inspect(engine)
    nameless = [
        (table, kind)
        for table in seen.get_table_names() if table != "alembic_version"
        for kind, found in (
            ("primary key", [seen.get_pk_constraint(table)]), ("foreign key", seen.get_foreign_keys(table)),
            ("unique", seen.get_unique_constraints(table)), ("check", seen.get_check_constraints(table)),
        )
        for constraint in found if not constraint["name"]
    ]
    engine.dispose()
    assert nameless == []


def test_tables_of_a_survey_are_keyed_by_it_first() -> None:
    for table in Base.metadata.sorted_tables:
        if table.name in WITHOUT_A_SURVEY:
            continue
        assert next(iter(table.primary_key)).name == "survey", table.name
        for constraint in table.constraints:
            if isinstance(constraint, ForeignKeyConstraint):
                assert next(iter(constraint.columns)).name == "survey", (table.name, constraint.name)
