"""How a survey wants photos kept."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = '0005'
down_revision = '0004'


def upgrade() -> None:
    with op.batch_alter_table('survey', schema=None) as batch_op:
        batch_op.add_column(sa.Column('photo_long_edge_px', sa.Integer(), nullable=True))
        batch_op.add_column(sa.Column('photo_original', sa.Boolean(), nullable=True))


def downgrade() -> None:
    with op.batch_alter_table('survey', schema=None) as batch_op:
        batch_op.drop_column('photo_original')
        batch_op.drop_column('photo_long_edge_px')
