"""The exported schemas accept what the program accepts and writes, and refuse what it refuses."""

import copy
import json

import pytest
from jsonschema import Draft202012Validator
from support.mutations import FULL
from support.reports import SAMPLES, SMALL, report_of

from enclosure_check.check import check
from enclosure_check.description.document import Document
from enclosure_check.description.load import load_document
from enclosure_check.description.yaml_nodes import read_yaml, to_data
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.schema import DIALECT, document_schema, report_schema

DOCUMENT = document_schema(Document.model_json_schema())
REPORT = report_schema()
SAMPLE_IDS = [path.stem for path in SAMPLES]


def faults(schema, data) -> list[str]:
    found = Draft202012Validator(schema).iter_errors(data)
    return [f"{'.'.join(map(str, each.absolute_path))}: {each.message}" for each in found]


@pytest.mark.parametrize("schema", [DOCUMENT, REPORT], ids=["document", "report"])
def test_schemas_are_schemas(schema):
    Draft202012Validator.check_schema(schema)
    assert schema["$schema"] == DIALECT == "https://json-schema.org/draft/2020-12/schema"
    assert schema["title"].endswith("of enclosure-check")
    json.dumps(schema, allow_nan=False)


def references(schema):
    if isinstance(schema, dict):
        if isinstance(schema.get("$ref"), str):
            yield schema["$ref"]
        for value in schema.values():
            yield from references(value)
    elif isinstance(schema, list):
        for item in schema:
            yield from references(item)


@pytest.mark.parametrize("schema", [DOCUMENT, REPORT], ids=["document", "report"])
def test_every_reference_leads_somewhere(schema):
    assert {each.removeprefix("#/$defs/") for each in references(schema)} <= set(schema["$defs"])


def description(schema, field) -> str:
    """What a field says of itself, or its definition for it: an equal text is given once."""
    alternatives = [field, *field.get("anyOf", ())]
    targets = [
        schema["$defs"][each["$ref"].removeprefix("#/$defs/")]
        for each in alternatives
        if "$ref" in each
    ]
    return field.get("description") or "".join(each["description"] for each in targets)


# The report -------------------------------------------------------------------------------


@pytest.mark.parametrize("path", SAMPLES, ids=SAMPLE_IDS)
def test_reports_of_the_samples_are_valid(path):
    report = check(load_document(str(path)))
    assert faults(REPORT, json.loads(write_json(report, WriterOptions()))) == []


def test_report_of_a_small_document_is_valid_and_of_a_changed_one_not(tmp_path):
    data = json.loads(write_json(report_of(tmp_path), WriterOptions()))
    assert faults(REPORT, data) == []
    for change in (
        {"verdict": "perhaps"},
        {"format": 2},
        {"conditions": [{}]},
        {"title": None},
    ):
        assert faults(REPORT, {**data, **change})
    del data["conditions"][0]["walls"][0]["sun_w"]
    assert faults(REPORT, data)


def test_every_field_of_the_report_is_required_and_described():
    for name, record in {**REPORT["$defs"], "Report": REPORT}.items():
        # What is there when it was asked for is all that may be missing.
        asked = {"explain"} if name == "Report" else set()
        assert set(record["required"]) | asked == set(record["properties"]), name
        for field, each in record["properties"].items():
            assert description(REPORT, each), f"{name}.{field}"


# The document -----------------------------------------------------------------------------


def data_of(path):
    return to_data(read_yaml(path.read_bytes(), str(path)))


@pytest.mark.parametrize("path", [*SAMPLES, FULL], ids=[*SAMPLE_IDS, "full"])
def test_documents_are_valid(path):
    assert faults(DOCUMENT, data_of(path)) == []


def test_every_field_of_the_document_is_described():
    for name, model in {**DOCUMENT["$defs"], "Document": DOCUMENT}.items():
        for field, each in model.get("properties", {}).items():
            assert description(DOCUMENT, each), f"{name}.{field}"


def patched(**patch):
    document = copy.deepcopy(SMALL)
    document["conditions"] = {"one": patch}
    document["options"] = {"two": patch}
    return document


@pytest.mark.parametrize(
    "patch",
    [
        {},
        {"surroundings": {"altitude_m": 2000}},
        {"surroundings": {"sun_w_per_m2": {"top": None}}},
        {"parts": {"X1": {"power_w": 3}, "X2": None}},
        {"parts": {"X1": None}},
        {"parts": {"X1": {"limits": {"case": {"derating": {"allowed_pct": {"40": 80}}}}}}},
        {"walls": {"top": {"mounting": {"kind": "insulated"}}}, "mode": None},
        {"box": {"width_mm": 120}},
        {"surroundings": {"altitude_m": None, "sky": None}, "requirements": None},
    ],
)
def test_patches_may_leave_out_and_take_away(patch):
    assert faults(DOCUMENT, patched(**patch)) == []


@pytest.mark.parametrize(
    "patch",
    [
        {"surrounding": {}},
        {"surroundings": {"air": 40}},
        {"parts": {"X1": {"power_w": "much"}}},
        {"parts": {"X1": {"limits": {"core": {"max_c": 80}}}}},
        {"walls": {"lid": {}}},
        {"walls": {"top": {"mounting": {"kind": "glued_to"}}}},
        {"box": {"width_mm": -1}},
        {"conditions": {}},
        {"options": {}},
    ],
)
def test_patches_are_checked_like_the_document(patch):
    found = faults(DOCUMENT, patched(**patch))
    assert any(each.startswith("conditions.one") for each in found)
    assert any(each.startswith("options.two") for each in found)


def test_a_whole_document_lacks_nothing():
    document = copy.deepcopy(SMALL)
    del document["surroundings"]
    assert faults(DOCUMENT, document)


def test_parts_beside_part_lists_may_be_patches_and_others_not():
    document = copy.deepcopy(SMALL)
    document["parts"] = {"X1": {"power_w": 3}, "X2": None}
    found = {each.split(":")[0] for each in faults(DOCUMENT, document)}
    assert found == {"parts.X1", "parts.X2"}
    document["part_lists"] = {"all": {"file": "a.csv", "columns": {"reference": "Ref"}}}
    assert faults(DOCUMENT, document) == []
    document["parts"]["X1"] = {"power": 3}
    assert faults(DOCUMENT, document)


def test_schema_of_the_model_is_left_as_it_was():
    model = Document.model_json_schema()
    before = copy.deepcopy(model)
    document_schema(model)
    assert model == before
