"""Earlier results read back: what a check wrote, and nothing else."""

import json

import pytest
from support.hanging import ends
from support.reports import SAMPLES, SMALL, report_of

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings import earlier
from enclosure_check.findings.earlier import EarlierError, read_earlier
from enclosure_check.findings.run import run_of
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions


def written(result) -> bytes:
    return write_json(result, WriterOptions()).encode()


@pytest.mark.parametrize("path", SAMPLES, ids=[path.stem for path in SAMPLES])
def test_what_a_check_writes_is_read(path):
    report = check(load_document(str(path)))
    (found,) = read_earlier(written(report))
    assert (found.document, found.digest) == (report.document, report.digest)
    assert found.inputs == report.inputs
    for then, now in zip(found.conditions, report.conditions, strict=True):
        assert then.name == now.name
        assert [each.margin_k for each in then.parts] == [each.margin_k for each in now.parts]
        assert list(then.part_names) == [each.name for each in now.part_heat]
        assert [w.touch_margin_k for w in then.walls] == [w.touch_margin_k for w in now.walls]


def test_a_run_over_several_is_read(tmp_path):
    report = report_of(tmp_path)
    found = read_earlier(written(run_of("1", False, (report, report), ())))
    assert [each.digest for each in found] == [report.digest] * 2


def test_a_report_without_inputs_is_read(tmp_path):
    data = json.loads(written(report_of(tmp_path)))
    del data["inputs"]
    assert read_earlier(json.dumps(data).encode())[0].inputs is None


def changed(tmp_path, **changes) -> bytes:
    return json.dumps({**json.loads(written(report_of(tmp_path))), **changes}).encode()


def test_another_format_is_refused_before_anything_else():
    with pytest.raises(EarlierError, match="is of report format 2, allowed: 1"):
        read_earlier(b'{"format": 2, "conditions": "of another kind"}')
    with pytest.raises(EarlierError, match="is of report format True"):
        read_earlier(b'{"format": true}')


@pytest.mark.parametrize(
    ("data", "message"),
    [
        (b"", "Expecting value"),
        (b"{", "property name"),
        (b"\xff\xfe\x00", "codec can't decode"),
        (b"[]", "is no JSON report"),
        (b"{}", "is no JSON report"),
        (b'{"format": 1, "x": NaN}', "NaN is no number"),
        (b'{"format": 1, "x": -Infinity}', "-Infinity is no number"),
        (b'{"format": ' + b"9" * 5000 + b"}", "digits"),
        (b"[" * 100_000, "nested too deeply"),
        (b'{"format":1,"a":' + b'{"a":' * 50_000, "nested too deeply"),
        (b'{"format": 1}', "document: missing, allowed: a text"),
        (b'{"format": 1, "documents": {}}', "documents: given a mapping, allowed: a list"),
        (b'{"format": 1, "documents": [1]}', "documents.0: given 1, allowed: a mapping"),
        (b'{"format": 1, "document": "\\ud800"}', "document: given .* whole characters"),
        (b'{"format": 1, "document": 1}', "document: given 1, allowed: a text"),
    ],
)
def test_what_is_no_report_is_refused(data, message):
    with pytest.raises(EarlierError, match=message):
        read_earlier(data)


@pytest.mark.parametrize(
    ("inputs", "message"),
    [
        ([], "inputs: given a list, allowed: a mapping"),
        ({"a": []}, "inputs: given a list"),
        ({"a": 10**400}, "inputs.a: given a huge number, allowed: a finite number"),
        ({"\ud800": 1}, "whole characters"),
        ({"a": "\udfff"}, "whole characters"),
    ],
)
def test_inputs_that_are_none(tmp_path, inputs, message):
    with pytest.raises(EarlierError, match=message):
        read_earlier(changed(tmp_path, inputs=inputs))


def test_every_field_that_is_used_is_checked(tmp_path):
    document = {**SMALL, "requirements": {"touch_max_c": 60}}
    whole = json.loads(written(report_of(tmp_path, document)))
    condition = whole["conditions"][0]
    records = [whole, condition, condition["parts"][0], condition["walls"][0]]
    refused = set()
    for record in records:
        for key, value in list(record.items()):
            record[key] = ["wrong kind"]
            try:
                read_earlier(json.dumps(whole).encode())
            except EarlierError as error:
                if key in str(error):
                    refused.add(key)
            record[key] = value
    assert refused >= {
        *("format", "document", "digest", "version", "conditions", "inputs"),
        *("name", "option", "parts", "part_heat", "walls"),
        *("limit_kind", "limit_side", "temperature_c", "limit_c", "margin_k"),
        *("outside_max_c", "touch_max_c", "touch_margin_k"),
    }


def test_size_is_bounded(monkeypatch):
    monkeypatch.setattr(earlier, "MAX_BYTES", 1 << 20)
    with pytest.raises(EarlierError, match="larger than 1 MiB"):
        read_earlier(b" " * (1 << 20) + b"{}")
    monkeypatch.setattr(earlier, "MAX_BYTES", 24 << 20)
    with ends(), pytest.raises(EarlierError, match="more than 600000 values"):
        read_earlier(b'{"format":1,"x":[' + b"[]," * 1_000_000 + b"[]]}")
