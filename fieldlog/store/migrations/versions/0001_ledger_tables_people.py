"""the ledger, its projected tables, people"""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

from fieldlog.store import db as store

revision = "0001"
down_revision = None


def upgrade() -> None:
    op.create_table(
        "audit_line",
        sa.Column(
            "id", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=False
        ),
        sa.Column("survey", sa.String(length=10), nullable=True),
        sa.Column("at", store.UtcTime(timezone=True), nullable=False),
        sa.Column("who", sa.String(length=80), nullable=False),
        sa.Column("what", sa.Text(), nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_audit_line")),
    )
    op.create_table(
        "lead",
        sa.Column(
            "id", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=False
        ),
        sa.Column("name", sa.String(length=80), nullable=False),
        sa.Column("password_hash", sa.Text(), nullable=False),
        sa.Column("session_number", sa.Integer(), nullable=False),
        sa.Column("created_at", store.UtcTime(timezone=True), nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_lead")),
        sa.UniqueConstraint("name", name=op.f("uq_lead_name")),
    )
    op.create_table(
        "store_identity",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("store", sa.String(length=15), nullable=False),
        sa.Column("epoch", sa.String(length=15), nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_store_identity")),
    )
    op.create_table(
        "survey_counter",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column(
            "seq", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=False
        ),
        sa.Column("store_device", sa.String(length=15), nullable=False),
        sa.Column("hlc", sa.String(length=17), nullable=False),
        sa.PrimaryKeyConstraint("survey", name=op.f("pk_survey_counter")),
    )
    op.create_table(
        "crew",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("name", sa.Text(), nullable=True),
        sa.Column("lead", sa.Boolean(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_crew_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_crew")),
    )
    op.create_table(
        "device_counter",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("device", sa.String(length=15), nullable=False),
        sa.Column(
            "received_through",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_device_counter_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "device", name=op.f("pk_device_counter")),
    )
    op.create_table(
        "joining_code",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("code_hash", sa.String(length=64), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column("expires_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column("closed_at", store.UtcTime(timezone=True), nullable=True),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_joining_code_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "code_hash", name=op.f("pk_joining_code")),
    )
    with op.batch_alter_table("joining_code", schema=None) as batch_op:
        batch_op.create_index(
            batch_op.f("ix_joining_code_code_hash"), ["code_hash"], unique=True
        )

    op.create_table(
        "ledger_entry",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column(
            "seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            autoincrement=False,
            nullable=False,
        ),
        sa.Column("device", sa.String(length=15), nullable=False),
        sa.Column(
            "n", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=False
        ),
        sa.Column("kind", sa.String(length=20), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("text", sa.Text(), nullable=False),
        sa.Column("sha256", sa.String(length=64), nullable=False),
        sa.Column("received_at", store.UtcTime(timezone=True), nullable=False),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_ledger_entry_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "seq", name=op.f("pk_ledger_entry")),
        sa.UniqueConstraint(
            "survey", "device", "n", name=op.f("uq_ledger_entry_survey_device_n")
        ),
    )
    with op.batch_alter_table("ledger_entry", schema=None) as batch_op:
        batch_op.create_index(
            batch_op.f("ix_ledger_entry_survey_record"),
            ["survey", "record"],
            unique=False,
        )

    op.create_table(
        "observation",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("site", sa.String(length=31), nullable=True),
        sa.Column("bedform", sa.Integer(), nullable=True),
        sa.Column("bedform_order", sa.String(length=40), nullable=True),
        sa.Column("face", sa.String(length=40), nullable=True),
        sa.Column("dune_type", sa.String(length=40), nullable=True),
        sa.Column("observed_at", store.UtcTime(timezone=True), nullable=True),
        sa.Column("lat_deg", sa.Float(precision=53), nullable=True),
        sa.Column("lon_deg", sa.Float(precision=53), nullable=True),
        sa.Column("altitude_m", sa.Float(precision=53), nullable=True),
        sa.Column("accuracy_m", sa.Float(precision=53), nullable=True),
        sa.Column("fix_method", sa.String(length=40), nullable=True),
        sa.Column("fixes_n", sa.Integer(), nullable=True),
        sa.Column("fixes_spread_m", sa.Float(precision=53), nullable=True),
        sa.Column("sighted_bearing_deg", sa.Float(precision=53), nullable=True),
        sa.Column("sighted_distance_m", sa.Float(precision=53), nullable=True),
        sa.Column("instrument", sa.Text(), nullable=True),
        sa.Column("north", sa.String(length=40), nullable=True),
        sa.Column("how_read", sa.String(length=40), nullable=True),
        sa.Column("reading_step_deg", sa.Float(precision=53), nullable=True),
        sa.Column("declination_deg", sa.Float(precision=53), nullable=True),
        sa.Column("declination_model", sa.Text(), nullable=True),
        sa.Column("convergence_deg", sa.Float(precision=53), nullable=True),
        sa.Column("crest_read_deg", sa.Float(precision=53), nullable=True),
        sa.Column("crest_read_deg_absent", sa.String(length=20), nullable=True),
        sa.Column("crest_deg", sa.Float(precision=53), nullable=True),
        sa.Column("crest_place", sa.String(length=40), nullable=True),
        sa.Column("crest_chord_m", sa.Float(precision=53), nullable=True),
        sa.Column("slip_face_read_deg", sa.Float(precision=53), nullable=True),
        sa.Column("slip_face_read_deg_absent", sa.String(length=20), nullable=True),
        sa.Column("slip_face_looking", sa.String(length=40), nullable=True),
        sa.Column("slip_face_deg", sa.Float(precision=53), nullable=True),
        sa.Column("slip_face_dip_deg", sa.Float(precision=53), nullable=True),
        sa.Column("slip_face_dip_deg_absent", sa.String(length=20), nullable=True),
        sa.Column("slip_face_state", sa.String(length=40), nullable=True),
        sa.Column("brink_read_deg", sa.Float(precision=53), nullable=True),
        sa.Column("brink_read_deg_absent", sa.String(length=20), nullable=True),
        sa.Column("brink_deg", sa.Float(precision=53), nullable=True),
        sa.Column("ripple_crest_read_deg", sa.Float(precision=53), nullable=True),
        sa.Column("ripple_crest_read_deg_absent", sa.String(length=20), nullable=True),
        sa.Column("ripple_crest_deg", sa.Float(precision=53), nullable=True),
        sa.Column("grain_class", sa.String(length=40), nullable=True),
        sa.Column("grain_class_absent", sa.String(length=20), nullable=True),
        sa.Column("grain_class_second", sa.String(length=40), nullable=True),
        sa.Column("sorting", sa.String(length=40), nullable=True),
        sa.Column("sample_bag", sa.Text(), nullable=True),
        sa.Column("surface_type", sa.String(length=40), nullable=True),
        sa.Column("surface_type_absent", sa.String(length=20), nullable=True),
        sa.Column("stone_cover_percent", sa.Float(precision=53), nullable=True),
        sa.Column("landform", sa.String(length=40), nullable=True),
        sa.Column("dune_position", sa.String(length=40), nullable=True),
        sa.Column("height_m", sa.Float(precision=53), nullable=True),
        sa.Column("spacing_m", sa.Float(precision=53), nullable=True),
        sa.Column("crest_length_m", sa.Float(precision=53), nullable=True),
        sa.Column("vegetation_cover_percent", sa.Float(precision=53), nullable=True),
        sa.Column("crust_mm", sa.Float(precision=53), nullable=True),
        sa.Column("days_since_wind", sa.Integer(), nullable=True),
        sa.Column("activity", sa.String(length=40), nullable=True),
        sa.Column("check_of", sa.String(length=31), nullable=True),
        sa.Column("transcribed", sa.Boolean(), nullable=True),
        sa.Column("note", sa.Text(), nullable=True),
        sa.Column("crossed_out", sa.Text(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_observation_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_observation")),
    )
    with op.batch_alter_table("observation", schema=None) as batch_op:
        batch_op.create_index(
            batch_op.f("ix_observation_survey_observed_at"),
            ["survey", "observed_at"],
            unique=False,
        )
        batch_op.create_index(
            batch_op.f("ix_observation_survey_site"), ["survey", "site"], unique=False
        )

    op.create_table(
        "one_time_link",
        sa.Column("token_hash", sa.String(length=64), nullable=False),
        sa.Column(
            "lead", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=True
        ),
        sa.Column("expires_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column("used_at", store.UtcTime(timezone=True), nullable=True),
        sa.ForeignKeyConstraint(
            ["lead"], ["lead.id"], name=op.f("fk_one_time_link_lead_lead")
        ),
        sa.PrimaryKeyConstraint("token_hash", name=op.f("pk_one_time_link")),
    )
    op.create_table(
        "phone",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("device", sa.String(length=15), nullable=False),
        sa.Column("token_hash", sa.String(length=64), nullable=False),
        sa.Column("crew", sa.String(length=31), nullable=False),
        sa.Column("app", sa.String(length=40), nullable=False),
        sa.Column("joined_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column("seen_at", store.UtcTime(timezone=True), nullable=True),
        sa.Column("revoked_at", store.UtcTime(timezone=True), nullable=True),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_phone_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "device", name=op.f("pk_phone")),
        sa.UniqueConstraint("token_hash", name=op.f("uq_phone_token_hash")),
    )
    op.create_table(
        "photo",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("observation", sa.String(length=31), nullable=True),
        sa.Column("sha256", sa.Text(), nullable=True),
        sa.Column(
            "bytes", sa.BigInteger().with_variant(sa.Integer(), "sqlite"), nullable=True
        ),
        sa.Column("width_px", sa.Integer(), nullable=True),
        sa.Column("height_px", sa.Integer(), nullable=True),
        sa.Column("bearing_deg", sa.Float(precision=53), nullable=True),
        sa.Column("taken_at", store.UtcTime(timezone=True), nullable=True),
        sa.Column("crossed_out", sa.Text(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_photo_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_photo")),
    )
    with op.batch_alter_table("photo", schema=None) as batch_op:
        batch_op.create_index(
            batch_op.f("ix_photo_survey_observation"),
            ["survey", "observation"],
            unique=False,
        )
        batch_op.create_index(
            batch_op.f("ix_photo_survey_sha256"), ["survey", "sha256"], unique=False
        )

    op.create_table(
        "set_aside",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("device", sa.String(length=15), nullable=False),
        sa.Column(
            "n",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            autoincrement=False,
            nullable=False,
        ),
        sa.Column("text", sa.LargeBinary(), nullable=False),
        sa.Column("sha256", sa.String(length=64), nullable=False),
        sa.Column("problem", sa.Text(), nullable=False),
        sa.Column("received_at", store.UtcTime(timezone=True), nullable=False),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_set_aside_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "device", "n", name=op.f("pk_set_aside")),
    )
    op.create_table(
        "site",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("name", sa.Text(), nullable=True),
        sa.Column("lat_deg", sa.Float(precision=53), nullable=True),
        sa.Column("lon_deg", sa.Float(precision=53), nullable=True),
        sa.Column("radius_m", sa.Float(precision=53), nullable=True),
        sa.Column("dune_pattern", sa.Text(), nullable=True),
        sa.Column("dune_rule", sa.String(length=40), nullable=True),
        sa.Column("target_half_width_deg", sa.Float(precision=53), nullable=True),
        sa.Column("expected_facing_deg", sa.Float(precision=53), nullable=True),
        sa.Column("note", sa.Text(), nullable=True),
        sa.Column("crossed_out", sa.Text(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_site_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_site")),
    )
    op.create_table(
        "survey",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("name", sa.Text(), nullable=True),
        sa.Column("time_zone", sa.Text(), nullable=True),
        sa.Column("target_half_width_deg", sa.Float(precision=53), nullable=True),
        sa.Column("fewest_dunes", sa.Integer(), nullable=True),
        sa.Column("reading_step_deg", sa.Float(precision=53), nullable=True),
        sa.Column("optional_fields", sa.JSON(none_as_null=True), nullable=True),
        sa.Column("note", sa.Text(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_survey_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_survey")),
    )
    op.create_table(
        "track",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("name", sa.Text(), nullable=True),
        sa.Column("crew", sa.String(length=31), nullable=True),
        sa.Column("part", sa.Integer(), nullable=True),
        sa.Column("points", sa.JSON(none_as_null=True), nullable=True),
        sa.Column("crossed_out", sa.Text(), nullable=True),
        sa.Column("made_by", sa.String(length=31), nullable=False),
        sa.Column("made_on", sa.String(length=15), nullable=False),
        sa.Column("made_at", store.UtcTime(timezone=True), nullable=False),
        sa.Column(
            "first_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.Column(
            "last_seq",
            sa.BigInteger().with_variant(sa.Integer(), "sqlite"),
            nullable=False,
        ),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_track_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint("survey", "record", name=op.f("pk_track")),
    )
    op.create_table(
        "two_versions",
        sa.Column("survey", sa.String(length=10), nullable=False),
        sa.Column("record", sa.String(length=31), nullable=False),
        sa.Column("field", sa.String(length=60), nullable=False),
        sa.Column("kind", sa.String(length=20), nullable=False),
        sa.Column("versions", sa.JSON(), nullable=False),
        sa.ForeignKeyConstraint(
            ["survey"],
            ["survey_counter.survey"],
            name=op.f("fk_two_versions_survey_survey_counter"),
        ),
        sa.PrimaryKeyConstraint(
            "survey", "record", "field", name=op.f("pk_two_versions")
        ),
    )


def downgrade() -> None:
    op.drop_table("two_versions")
    op.drop_table("track")
    op.drop_table("survey")
    op.drop_table("site")
    op.drop_table("set_aside")
    with op.batch_alter_table("photo", schema=None) as batch_op:
        batch_op.drop_index(batch_op.f("ix_photo_survey_sha256"))
        batch_op.drop_index(batch_op.f("ix_photo_survey_observation"))

    op.drop_table("photo")
    op.drop_table("phone")
    op.drop_table("one_time_link")
    with op.batch_alter_table("observation", schema=None) as batch_op:
        batch_op.drop_index(batch_op.f("ix_observation_survey_site"))
        batch_op.drop_index(batch_op.f("ix_observation_survey_observed_at"))

    op.drop_table("observation")
    with op.batch_alter_table("ledger_entry", schema=None) as batch_op:
        batch_op.drop_index(batch_op.f("ix_ledger_entry_survey_record"))

    op.drop_table("ledger_entry")
    with op.batch_alter_table("joining_code", schema=None) as batch_op:
        batch_op.drop_index(batch_op.f("ix_joining_code_code_hash"))

    op.drop_table("joining_code")
    op.drop_table("device_counter")
    op.drop_table("crew")
    op.drop_table("survey_counter")
    op.drop_table("store_identity")
    op.drop_table("lead")
    op.drop_table("audit_line")
