"""The description of /api/v1, drawn from the wire schemas."""

from __future__ import annotations

from functools import cache
from typing import Any

from apispec import APISpec
from apispec.ext.marshmallow import MarshmallowPlugin

from fieldlog import __version__
from fieldlog.handover import schema as handover
from fieldlog.handover.columns import COLUMNS_TYPE
from fieldlog.people import schema as people
from fieldlog.sheet.schema import schema_for
from fieldlog.sheet.subjects import SHEETS
from fieldlog.web.schema import HealthSchema, ProblemSchema

JSON = "application/json"


def _body(name: str) -> dict[str, Any]:
    return {"required": True, "content": {JSON: {"schema": name}}}


def _answers(good: dict[int, str | None]) -> dict[str, Any]:
    found: dict[str, Any] = {}
    for code, name in good.items():
        found[str(code)] = {"description": "Done", **({"content": {JSON: {"schema": name}}} if name else {})}
    found["default"] = {"description": "Refused", "content": {"application/problem+json": {"schema": "Problem"}}}
    return found


def _parameter(name: str, where: str = "path", kind: str = "string") -> dict[str, Any]:
    return {"name": name, "in": where, "required": where == "path", "schema": {"type": kind}}


@cache
def description() -> dict[str, Any]:
    """OpenAPI 3.0."""
    spec = APISpec(
        title="Ergbook", version=__version__, openapi_version="3.0.3", plugins=[MarshmallowPlugin()],
        info={"description": "Handing over between phones and base."},
    )
    spec.components.security_scheme("phone", {"type": "http", "scheme": "bearer"})
    spec.components.security_scheme("lead", {"type": "apiKey", "in": "cookie", "name": "session"})
    for name, schema in (
        ("Problem", ProblemSchema), ("Health", HealthSchema), ("Look", people.LookSchema),
        ("LookAnswer", people.LookAnswerSchema), ("Join", people.JoinSchema), ("JoinAnswer", people.JoinAnswerSchema),
        ("Batch", handover.BatchSchema), ("BatchAnswer", handover.BatchAnswerSchema),
        ("Changes", handover.ChangesSchema), ("PhotoAnswer", handover.PhotoAnswerSchema),
    ):
        spec.components.schema(name, schema=schema)
    for kind in SHEETS:
        spec.components.schema(f"{kind.capitalize()}Values", schema=schema_for(kind))
    survey = [_parameter("survey")]
    photo = [*survey, _parameter("sha256")]
    phone: list[dict[str, list[str]]] = [{"phone": []}]
    either: list[dict[str, list[str]]] = [{"phone": []}, {"lead": []}]
    spec.path("/api/v1/health", operations={"get": {"responses": _answers({200: "Health"})}})
    spec.path("/api/v1/openapi.json", operations={"get": {"responses": _answers({200: None})}})
    spec.path(
        "/api/v1/joining/look",
        operations={"post": {"requestBody": _body("Look"), "responses": _answers({200: "LookAnswer"})}},
    )
    spec.path(
        "/api/v1/joining",
        operations={"post": {"requestBody": _body("Join"), "responses": _answers({201: "JoinAnswer"})}},
    )
    batch = _body("Batch")
    batch["content"][COLUMNS_TYPE] = {"schema": {"type": "string", "description": "The same in columns: fieldlog/handover/columns.py"}}
    spec.path(
        "/api/v1/surveys/{survey}/entries",
        operations={
            "post": {
                "parameters": survey, "security": phone, "requestBody": batch,
                "responses": _answers({200: "BatchAnswer"}),
            }
        },
    )
    spec.path(
        "/api/v1/surveys/{survey}/changes",
        operations={
            "get": {
                "parameters": [*survey, _parameter("after", "query", "integer"), _parameter("limit", "query", "integer"),
                               _parameter("own", "query", "boolean")],
                "security": phone, "responses": _answers({200: "Changes"}),
            }
        },
    )
    spec.path(
        "/api/v1/surveys/{survey}/photos/{sha256}",
        operations={
            "head": {"parameters": photo, "security": either, "responses": _answers({200: None})},
            "get": {"parameters": photo, "security": either, "responses": _answers({200: None})},
            "patch": {
                "parameters": [*photo, _parameter("Upload-Offset", "header", "integer"), _parameter("Upload-Length", "header", "integer")],
                "security": phone,
                "requestBody": {"required": True, "content": {"application/octet-stream": {"schema": {"type": "string", "format": "binary"}}}},
                "responses": _answers({200: "PhotoAnswer"}),
            },
        },
    )
    spec.path(
        "/api/v1/surveys/{survey}/photos/{sha256}/small",
        operations={"get": {"parameters": photo, "security": either, "responses": _answers({200: None})}},
    )
    described: dict[str, Any] = spec.to_dict()
    return described
