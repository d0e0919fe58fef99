"""What a phone sends to join, and what it gets."""

from __future__ import annotations

from marshmallow import EXCLUDE, Schema, fields, validate


class LookSchema(Schema):
    """A joining code as typed."""

    class Meta:
        unknown = EXCLUDE

    code = fields.String(required=True, validate=validate.Length(max=40))


class SurveyNameSchema(Schema):
    """A survey, for showing."""

    id = fields.String(required=True)
    name = fields.String(required=True)


class CrewNameSchema(Schema):
    """A crew member to choose."""

    record = fields.String(required=True)
    name = fields.String(required=True)


class LookAnswerSchema(Schema):
    """What the code opens."""

    survey = fields.Nested(SurveyNameSchema, required=True)
    crew = fields.List(fields.Nested(CrewNameSchema), required=True)


class JoinSchema(Schema):
    """A phone that wants to join: as a crew member by record, or with a new name."""

    class Meta:
        unknown = EXCLUDE

    code = fields.String(required=True, validate=validate.Length(max=40))
    device = fields.String(required=True, validate=validate.Length(equal=15))
    app = fields.String(load_default="", validate=validate.Length(max=40))
    crew = fields.String(load_default="", validate=validate.Length(max=31))
    name = fields.String(load_default="", validate=validate.Length(max=80))


class JoinAnswerSchema(Schema):
    """The phone's token, shown this once, and whose store it is."""

    token = fields.String(required=True)
    survey = fields.Nested(SurveyNameSchema, required=True)
    crew = fields.String(required=True)
    store = fields.String(required=True)
    epoch = fields.String(required=True)
    time = fields.String(required=True)
