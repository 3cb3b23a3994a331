"""The JSON report: the keys others rely on, the same bytes every time, nothing but numbers."""

import json
from dataclasses import fields, is_dataclass, replace

import pytest
from support.reports import SAMPLES, report_of, with_condition

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.report.json_report import plain, write_json
from enclosure_check.report.options import WriterOptions

# The keys promised from the first release on.
PROMISED = {
    "": ("format", "document", "verdict", "conditions"),
    "conditions": (
        "name",
        "verdict",
        "parts",
        "air",
        "walls",
        "heat_balance",
        "openings",
        "solver",
        "ranges",
        "warnings",
    ),
    "conditions.parts": (
        "name",
        "limit_kind",
        "temperature_c",
        "band_k",
        "limit_c",
        "margin_k",
        "verdict",
        "local_air_c",
    ),
    "conditions.air": ("mean_c", "top_c", "profile"),
    "conditions.air.profile": ("height_mm", "air_c"),
    "conditions.walls": (
        "name",
        "outside_c",
        "outside_max_c",
        "inside_c",
        "convection_w",
        "radiation_w",
        "sun_w",
        "openings_w",
        "mounting_w",
    ),
    "conditions.heat_balance": (
        "generated_w",
        "sun_w",
        "convection_w",
        "radiation_w",
        "openings_w",
        "mounting_w",
        "imbalance_w",
    ),
    "conditions.openings": ("flow_g_per_s",),
    "conditions.solver": ("iterations", "worst_imbalance_w"),
    "conditions.ranges": ("surface", "correlation", "rayleigh", "inside_range"),
}


@pytest.fixture(scope="module", params=SAMPLES, ids=[path.stem for path in SAMPLES])
def report(request):
    return check(load_document(str(request.param)))


def written(report) -> str:
    return write_json(report, WriterOptions())


def at(data, path: str) -> list:
    """Everything found at a dotted path, lists walked through."""
    found = [data]
    for step in filter(None, path.split(".")):
        found = [each[step] for each in found]
        found = [item for each in found for item in (each if isinstance(each, list) else [each])]
    return found


@pytest.mark.parametrize("path", PROMISED)
def test_promised_keys_are_there(report, path):
    found = at(json.loads(written(report)), path)
    assert found
    for each in found:
        assert set(PROMISED[path]) <= set(each)


def test_keys_are_those_of_the_records(report):
    def compare(record, data):
        if is_dataclass(record):
            assert list(data) == [field.name for field in fields(record)]
            for name, value in data.items():
                compare(getattr(record, name), value)
        elif isinstance(record, dict):
            assert list(record.items()) == list(data.items())
        elif isinstance(record, tuple):
            assert len(record) == len(data)
            for one, other in zip(record, data, strict=True):
                compare(one, other)
        else:
            assert record == data
            assert type(record) is type(data)

    compare(report, json.loads(written(report)))


COUNTS = ("format", "unknowns", "iterations", "fallbacks", "line", "column", "part_count")


def test_what_is_measured_is_a_float_and_what_is_counted_an_integer(report):
    def numbers(data):
        if isinstance(data, dict):
            for key, value in data.items():
                if isinstance(value, int | float) and not isinstance(value, bool):
                    yield key, value
                yield from numbers(value)
        elif isinstance(data, list):
            for item in data:
                yield from numbers(item)

    found = list(numbers(json.loads(written(report))))
    # Only a document with part lists counts their parts.
    assert {"part_count", *(key for key, _ in found)} >= set(COUNTS)
    assert not [key for key, value in found if isinstance(value, int) != (key in COUNTS)]


def test_bytes_are_the_same_every_time(report):
    again = check(load_document(report.document))
    assert written(again) == written(report)


def test_ends_with_one_line_end_and_is_ascii(tmp_path):
    text = written(replace(report_of(tmp_path), title="Größe 電源 \x1b[31m"))
    assert text.endswith("}\n")
    assert text.isascii()
    assert "\x1b" not in text
    assert json.loads(text)["title"] == "Größe 電源 \x1b[31m"


@pytest.mark.parametrize("value", [float("nan"), float("inf"), float("-inf")])
def test_a_number_that_is_not_finite_is_refused(tmp_path, value):
    report = with_condition(report_of(tmp_path), surrounding_air_c=value)
    with pytest.raises(ValueError, match="not JSON compliant"):
        written(report)


def test_tuples_become_lists():
    assert plain(((1, "a"), None)) == [[1, "a"], None]


def test_inputs_are_the_values_of_the_document(tmp_path):
    data = json.loads(written(report_of(tmp_path)))
    assert data["inputs"]["box.width_mm"] == 100.0
    assert data["inputs"]["parts.X1.limits.case.max_c"] == 110.0


def test_parts_and_walls_have_their_place(tmp_path):
    data = json.loads(written(report_of(tmp_path)))
    lines = (tmp_path / "box.yaml").read_text("utf-8").splitlines()
    (part,) = data["conditions"][0]["parts"]
    assert lines[part["position"]["line"] - 1] == "  X1:"
    assert part["position"]["column"] == 3
    for wall in data["conditions"][0]["walls"]:
        assert lines[wall["position"]["line"] - 1] == "  wall:"
