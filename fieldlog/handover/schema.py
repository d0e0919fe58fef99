"""What travels between a phone and the store."""

from __future__ import annotations

from marshmallow import EXCLUDE, Schema, fields, validate

ENTRIES_MAX = 500
BATCH_BYTES_MAX = 2 * 1024 * 1024
ENTRY_BYTES_MAX = 128 * 1024
PART_BYTES_MAX = 1024 * 1024


class BatchSchema(Schema):
    """A device's consecutive entries: `entries[0]` is number `first`."""

    class Meta:
        unknown = EXCLUDE

    v = fields.Integer(required=True, strict=True)
    device = fields.String(required=True, validate=validate.Length(equal=15))
    store = fields.String(required=True)
    epoch = fields.String(required=True)
    first = fields.Integer(required=True, strict=True, validate=validate.Range(min=1))
    app = fields.String(required=True, validate=validate.Length(max=40))
    entries = fields.List(
        fields.String(), required=True, validate=validate.Length(min=1, max=ENTRIES_MAX)
    )


class EntryResultSchema(Schema):
    """The answer to one entry; it stands in the ledger or aside, and is never sent again."""

    n = fields.Integer(required=True)
    status = fields.String(required=True, validate=validate.OneOf(["stored", "already", "set_aside", "forked"]))
    seq = fields.Integer()
    problem = fields.String()
    count = fields.Integer(metadata={"description": "So many in a row: n and seq go on by one"})


class LimitsSchema(Schema):
    """What one batch may hold."""

    entries = fields.Integer(required=True)
    bytes = fields.Integer(required=True)


class StoreHeadSchema(Schema):
    """Who answers: a phone believes nothing that does not carry its store's id."""

    store = fields.String(required=True)
    epoch = fields.String(required=True)
    time = fields.String(required=True, metadata={"description": "The store's time, UTC"})


class BatchAnswerSchema(StoreHeadSchema):
    """Sent only after the commit."""

    received_through = fields.Integer(required=True)
    results = fields.List(fields.Nested(EntryResultSchema), required=True)
    limits = fields.Nested(LimitsSchema, required=True)


class ChangeSchema(Schema):
    """One entry in the order of the store; `text` is left out for the asking device's own."""

    seq = fields.Integer(required=True)
    device = fields.String(required=True)
    n = fields.Integer(required=True)
    text = fields.String()
    count = fields.Integer(metadata={"description": "So many own entries in a row: seq and n go on by one"})


class ChangesQuerySchema(Schema):
    """Which changes are asked for."""

    class Meta:
        unknown = EXCLUDE

    after = fields.Integer(load_default=0, validate=validate.Range(min=0))
    limit = fields.Integer(load_default=ENTRIES_MAX, validate=validate.Range(min=1, max=ENTRIES_MAX))
    own = fields.Boolean(load_default=False, metadata={"description": "Send the text of own entries too"})


class ChangesSchema(StoreHeadSchema):
    """Consecutive entries after the asked seq; `last` is the newest there is."""

    entries = fields.List(fields.Nested(ChangeSchema), required=True)
    through = fields.Integer(required=True)
    last = fields.Integer(required=True)


class PhotoAnswerSchema(StoreHeadSchema):
    """How much of the photo of this hash the store holds, and whether that is all of it."""

    sha256 = fields.String(required=True)
    offset = fields.Integer(required=True)
    complete = fields.Boolean(required=True)
