"""Times as the phone's own clock had them."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

from fieldlog.store import db as store

revision = '0003'
down_revision = '0002'


def upgrade() -> None:
    with op.batch_alter_table('observation', schema=None) as batch_op:
        batch_op.add_column(sa.Column('observed_by_clock', store.UtcTime(timezone=True), nullable=True))


def downgrade() -> None:
    with op.batch_alter_table('observation', schema=None) as batch_op:
        batch_op.drop_column('observed_by_clock')
