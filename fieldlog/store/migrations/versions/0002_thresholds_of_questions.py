"""The thresholds of its questions that a survey may set."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = '0002'
down_revision = '0001'


def upgrade() -> None:
    with op.batch_alter_table('survey', schema=None) as batch_op:
        batch_op.add_column(sa.Column('ask_square_deg', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_steepest_deg', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_gentlest_deg', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_accuracies', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_opposed_deg', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_opposed_others', sa.Integer(), nullable=True))
        batch_op.add_column(sa.Column('ask_opposed_resultant', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_outlier_readings', sa.Integer(), nullable=True))
        batch_op.add_column(sa.Column('ask_outlier_spreads', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_repeat_s', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_back_s', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_declination_deg', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_declination_steps', sa.Float(precision=53), nullable=True))
        batch_op.add_column(sa.Column('ask_north_readings', sa.Integer(), nullable=True))
        batch_op.add_column(sa.Column('ask_north_errors', sa.Float(precision=53), nullable=True))


def downgrade() -> None:
    with op.batch_alter_table('survey', schema=None) as batch_op:
        batch_op.drop_column('ask_north_errors')
        batch_op.drop_column('ask_north_readings')
        batch_op.drop_column('ask_declination_steps')
        batch_op.drop_column('ask_declination_deg')
        batch_op.drop_column('ask_back_s')
        batch_op.drop_column('ask_repeat_s')
        batch_op.drop_column('ask_outlier_spreads')
        batch_op.drop_column('ask_outlier_readings')
        batch_op.drop_column('ask_opposed_resultant')
        batch_op.drop_column('ask_opposed_others')
        batch_op.drop_column('ask_opposed_deg')
        batch_op.drop_column('ask_accuracies')
        batch_op.drop_column('ask_gentlest_deg')
        batch_op.drop_column('ask_steepest_deg')
        batch_op.drop_column('ask_square_deg')
