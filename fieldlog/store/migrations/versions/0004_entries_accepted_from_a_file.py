"""Who accepted an entry from a file."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = '0004'
down_revision = '0003'


def upgrade() -> None:
    with op.batch_alter_table('ledger_entry', schema=None) as batch_op:
        batch_op.add_column(sa.Column('accepted_by', sa.String(length=31), nullable=True))


def downgrade() -> None:
    with op.batch_alter_table('ledger_entry', schema=None) as batch_op:
        batch_op.drop_column('accepted_by')
