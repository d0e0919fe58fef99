"""A batch as columns: entry texts are alike, so what differs is sent apart from what repeats.

The first line is the batch's head in JSON, with `shapes` (texts whose values are each replaced by
one NUL) and `rows` (the shape of each entry); every further line is one value as it stands in its
text, all of the first hole of the first shape, then of its second, and so on. Putting the values
back gives the texts byte for byte. Gzipped this is a third smaller than the texts themselves.
static/js/handover/columns.js writes it.
"""

from __future__ import annotations

import json
from typing import Any, Final

COLUMNS_TYPE: Final = "application/vnd.ergbook.columns"
HOLE: Final = "\0"


class ColumnsError(ValueError):
    """The body is no batch in columns."""


def from_columns(body: str, bytes_max: int) -> dict[str, Any]:
    """The batch with its `entries`; ColumnsError where the parts do not fit or make more than `bytes_max`."""
    head_line, _, rest = body.partition("\n")
    head = json.loads(head_line)
    if not isinstance(head, dict):
        raise ColumnsError("the head is missing")
    shapes: list[str] = _list_of(head.pop("shapes", None), str)
    rows: list[int] = _list_of(head.pop("rows", None), int)
    values = rest.split("\n") if rest else []
    pieces = [shape.split(HOLE) for shape in shapes]
    if any(not 0 <= row < len(pieces) for row in rows):
        raise ColumnsError("a row names a shape that is not there")
    if sum(len(pieces[row]) - 1 for row in rows) != len(values):
        raise ColumnsError("the values do not fill the shapes")
    if sum(len(shapes[row]) for row in rows) + len(rest) > bytes_max:
        raise ColumnsError("the entries are larger than a batch may be")
    entries = [""] * len(rows)
    at = 0
    for number, parts in enumerate(pieces):
        places = [i for i, row in enumerate(rows) if row == number]
        holes = len(parts) - 1
        for which, place in enumerate(places):
            column = [values[at + hole * len(places) + which] for hole in range(holes)]
            entries[place] = parts[0] + "".join(value + part for value, part in zip(column, parts[1:], strict=True))
        at += holes * len(places)
    return {**head, "entries": entries}


def _list_of(value: object, kind: type) -> list[Any]:
    if not (isinstance(value, list) and all(isinstance(each, kind) and not isinstance(each, bool) for each in value)):
        raise ColumnsError("shapes or rows are missing")
    return value
