"""What every answer may be: a problem, or how the store is."""

from __future__ import annotations

from marshmallow import Schema, fields

from fieldlog.handover.schema import StoreHeadSchema


class ProblemSchema(Schema):
    """RFC 9457 problem details, with how to mend it."""

    type = fields.String(required=True)
    title = fields.String(required=True)
    status = fields.Integer(required=True)
    detail = fields.String()
    where = fields.String()
    mend = fields.String()


class HealthSchema(StoreHeadSchema):
    """The store answers."""

    status = fields.String(required=True)
    app = fields.String(required=True)
