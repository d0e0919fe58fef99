"""Dunes of two phones that a lead has called one."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

from fieldlog.store import db as store

revision = '0006'
down_revision = '0005'


def upgrade() -> None:
    op.create_table('same_dune',
    sa.Column('survey', sa.String(length=10), nullable=False),
    sa.Column('record', sa.String(length=31), nullable=False),
    sa.Column('site', sa.String(length=31), nullable=True),
    sa.Column('dune', sa.Text(), nullable=True),
    sa.Column('other', sa.Text(), nullable=True),
    sa.Column('crossed_out', sa.Text(), nullable=True),
    sa.Column('made_by', sa.String(length=31), nullable=False),
    sa.Column('made_on', sa.String(length=15), nullable=False),
    sa.Column('made_at', store.UtcTime(timezone=True), nullable=False),
    sa.Column('first_seq', sa.BigInteger().with_variant(sa.Integer(), 'sqlite'), nullable=False),
    sa.Column('last_seq', sa.BigInteger().with_variant(sa.Integer(), 'sqlite'), nullable=False),
    sa.ForeignKeyConstraint(['survey'], ['survey_counter.survey'], name=op.f('fk_same_dune_survey_survey_counter')),
    sa.PrimaryKeyConstraint('survey', 'record', name=op.f('pk_same_dune'))
    )


def downgrade() -> None:
    op.drop_table('same_dune')
