"""Write static/js/sheet/declared.js and declared.d.ts: the sheets as the phone gets them.

`python -m fieldlog.sheet.generate` writes them, with `--check` it exits 1 when they are stale.
"""

from __future__ import annotations

import hashlib
import json
import sys
from pathlib import Path
from typing import Any

from fieldlog.sheet.cautions import CAUTIONS
from fieldlog.sheet.fields import ABSENCES, Field
from fieldlog.sheet.subjects import PHONE_KINDS, SHEETS
from fieldlog.sheet.times import CLOCK_OFF_MS
from fieldlog.sheet.vocabulary import VOCABULARIES

TYPES = {
    "number": "number",
    "integer": "number",
    "direction": "number",
    "orientation": "number",
    "choice": "string",
    "text": "string",
    "flag": "boolean",
    "time": "string",
    "reference": "string",
    "names": "string[]",
    "points": "[number, number, number | null, string | null][]",
}

HEAD = "// Made by `python -m fieldlog.sheet.generate` from fieldlog/sheet/. Do not edit.\n"


def _field(field: Field) -> dict[str, Any]:
    keys = ("name", "type", "label", "help", "group", "unit", "minimum", "maximum", "decimals", "vocabulary",
            "refers_to", "max_length", "required", "measure", "carries", "optional", "derived_from", "asked",
            "clocked", "retired")
    return {key: getattr(field, key) for key in keys}


def declaration() -> dict[str, Any]:
    """All that the phone needs of the sheets, as plain values."""
    sheets = {
        kind: {
            "kind": kind,
            "label": sheet.label,
            "groups": dict(sheet.groups),
            "fields": [_field(f) for f in sheet.fields],
        }
        for kind, sheet in SHEETS.items()
    }
    words = {
        name: [{"value": w.value, "label": w.label, "definition": w.definition, "retired": w.retired} for w in rows]
        for name, rows in VOCABULARIES.items()
    }
    constants = {"absences": ABSENCES, "phone_kinds": sorted(PHONE_KINDS), "cautions": list(CAUTIONS), "clock_off_ms": CLOCK_OFF_MS}
    body = {"SHEETS": sheets, "VOCABULARIES": words, "CONSTANTS": constants}
    version = hashlib.sha256(json.dumps(body, sort_keys=True).encode()).hexdigest()[:12]
    constants["sheet_version"] = version
    return body


def module_text() -> str:
    """The JavaScript module."""
    parts = [HEAD]
    for name, value in declaration().items():
        parts.append(f"export const {name} = {json.dumps(value, ensure_ascii=False, indent=1)};\n")
    return "\n".join(parts)


def types_text() -> str:
    """Its TypeScript declarations: one row type a sheet."""
    parts = [HEAD, _STATIC_TYPES]
    for kind, sheet in SHEETS.items():
        lines = [f"export interface {kind.capitalize()}Row {{", "  record: string;"]
        for field in sheet.fields:
            lines.append(f"  {field.name}: {TYPES[field.type]} | null;")
            if field.measure:
                lines.append(f"  {field.name}_absent: string | null;")
        lines.append("}\n")
        parts.append("\n".join(lines))
    return "\n".join(parts)


_STATIC_TYPES = """\
export interface FieldDeclaration {
  name: string;
  type: string;
  label: string;
  help: string;
  group: string;
  unit: string;
  minimum: number | null;
  maximum: number | null;
  decimals: number | null;
  vocabulary: string | null;
  refers_to: string | null;
  max_length: number;
  required: boolean;
  measure: boolean;
  carries: string;
  optional: boolean;
  derived_from: string[];
  clocked: boolean;
  asked: boolean;
  retired: boolean;
}
export interface SheetDeclaration {
  kind: string;
  label: string;
  groups: Record<string, string>;
  fields: FieldDeclaration[];
}
export interface Word {
  value: string;
  label: string;
  definition: string;
  retired: boolean;
}
export const SHEETS: Record<string, SheetDeclaration>;
export const VOCABULARIES: Record<string, Word[]>;
export const CONSTANTS: {
  absences: Record<string, string>;
  phone_kinds: string[];
  cautions: string[];
  clock_off_ms: number;
  sheet_version: string;
};
"""


def main(argv: list[str]) -> int:
    """Write the modules, or with --check say whether they are fresh (exit code 0) or stale (1)."""
    folder = Path(__file__).resolve().parents[2] / "static" / "js" / "sheet"
    stale = []
    for path, text in ((folder / "declared.js", module_text()), (folder / "declared.d.ts", types_text())):
        if path.exists() and path.read_text(encoding="utf-8") == text:
            continue
        if "--check" in argv:
            stale.append(path.name)
        else:
            path.write_text(text, encoding="utf-8")
    if stale:
        print(f"{', '.join(stale)}: stale. Run python -m fieldlog.sheet.generate")
        return 1
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
