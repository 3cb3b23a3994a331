"""JSON Schemas of the document and of the report, for editors and other programs."""

from collections.abc import Mapping
from typing import Any

Schema = dict[str, Any]

DIALECT = "https://json-schema.org/draft/2020-12/schema"
PATCH = "PatchOf"
# What a whole document must have, a patch need not; what it leaves out is not the default.
_NOT_IN_PATCHES = ("required", "minProperties", "default", "title", "$defs")
_PATCHES = ("options", "conditions")


def report_schema() -> Schema:
    """Give the JSON Schema of the JSON report."""
    from pydantic import TypeAdapter

    from enclosure_check.findings.explanation import ExplainedReport

    schema = TypeAdapter(ExplainedReport).json_schema(mode="serialization")
    return {"$schema": DIALECT, **schema, "title": "Report of enclosure-check"}


def run_schema() -> Schema:
    """Give the JSON Schema of the JSON report of several documents."""
    from pydantic import TypeAdapter

    from enclosure_check.findings.run import Run

    schema = TypeAdapter(Run).json_schema(mode="serialization")
    return {"$schema": DIALECT, **schema, "title": "Run of enclosure-check"}


def document_schema(document: Mapping[str, Any]) -> Schema:
    """Give the JSON Schema of the document, its options and conditions included.

    Parameters
    ----------
    document
        Schema of the document's model. What it says of ``options`` and ``conditions`` is
        replaced: each is a mapping of patches, and a patch may hold what a document may,
        with nothing required and null anywhere, as RFC 7396 has it.
    """
    parts = document.get("$defs", {})
    root = {
        **document,
        "properties": dict(document["properties"]),
    }
    patched = {
        **root,
        "properties": {
            name: each for name, each in root["properties"].items() if name not in _PATCHES
        },
    }
    patches = {f"{PATCH}{name}": _relaxed(each) for name, each in parts.items()}
    patches[f"{PATCH}Document"] = _relaxed(patched)
    for name in _PATCHES:
        root["properties"][name] = {
            **root["properties"][name],
            "additionalProperties": {"$ref": f"#/$defs/{PATCH}Document"},
        }
    # Beside part lists, entries of parts are patches of what is listed.
    root["properties"]["parts"] = {
        **root["properties"]["parts"],
        "additionalProperties": _or_null({"$ref": f"#/$defs/{PATCH}Part"}),
    }
    whole = {"properties": {"parts": {"additionalProperties": {"$ref": "#/$defs/Part"}}}}
    root |= {"if": {"required": ["part_lists"]}, "else": whole}
    return {
        "$schema": DIALECT,
        **root,
        "title": "Document of enclosure-check",
        "$defs": {**parts, **patches},
    }


def _relaxed(schema: Mapping[str, Any]) -> Schema:
    """Give what a patch may hold in place of what a schema describes."""
    relaxed: Schema = {}
    for key, value in schema.items():
        if key in _NOT_IN_PATCHES:
            continue
        if key == "properties":
            relaxed[key] = {name: _or_null(_relaxed(each)) for name, each in value.items()}
        elif key == "additionalProperties" and isinstance(value, dict):
            relaxed[key] = _or_null(_relaxed(value))
        elif key == "anyOf":
            relaxed[key] = [_relaxed(each) for each in value]
        elif key == "$ref":
            relaxed[key] = value.replace("#/$defs/", f"#/$defs/{PATCH}")
        else:
            relaxed[key] = value
    return relaxed


def _or_null(schema: Schema) -> Schema:
    """Allow null as well: it takes a key back to its default."""
    nothing = {"type": "null"}
    if nothing in schema.get("anyOf", ()):
        return schema
    described = {"description": schema["description"]} if "description" in schema else {}
    bare = {key: value for key, value in schema.items() if key != "description"}
    return {"anyOf": [bare, nothing], **described}
