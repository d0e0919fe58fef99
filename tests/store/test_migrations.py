"""The migrations and the models say the same on both databases."""

from __future__ import annotations

from sqlalchemy import ForeignKeyConstraint, inspect

from fieldlog.people import models as _people_models  # noqa: F401  its tables belong to the metadata
from fieldlog.store import tables as _tables  # noqa: F401
from fieldlog.store.db import Base
from fieldlog.store.migrate import difference, engine_for, upgrade

WITHOUT_A_SURVEY = {"store_identity", "lead", "one_time_link", "joining_code", "audit_line", "alembic_version"}
"""Tables of the store and its people as a whole; a code or an audit line only names a survey."""


def test_nothing_separates_the_models_from_a_migrated_database(database_url: str) -> None:
    upgrade(database_url)
    upgrade(database_url)  # what is there already is left alone
    engine = engine_for(database_url)
    with engine.connect() as connection:
        assert difference(connection) == []
    engine.dispose()


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
