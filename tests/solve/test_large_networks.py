"""Networks too large for dense algebra: the whole line gives what it gives with it."""

from pathlib import Path

import pytest

from enclosure_check.check import check, check_and_explain
from enclosure_check.description.load import load_document
from enclosure_check.network import linear

SAMPLE = str(Path(__file__).parents[2] / "sample_boards" / "wall_sensor_hub.yaml")


@pytest.fixture(scope="module")
def document():
    return load_document(SAMPLE)


@pytest.fixture(scope="module")
def expected(document):
    return check(document, sensitivities=3)


@pytest.fixture
def all_is_large(monkeypatch):
    monkeypatch.setattr(linear, "DENSE_UP_TO", 100)


def margins(report):
    return {
        (condition.name, part.name, part.limit_kind): part.margin_k
        for condition in report.conditions
        for part in condition.parts
    }


@pytest.mark.parametrize("processes", [1, 2])
def test_a_check_of_a_large_network(processes, document, expected, all_is_large):
    report = check(document, processes=processes)
    assert margins(report) == pytest.approx(margins(expected), abs=1e-5)
    for condition, other in zip(report.conditions, expected.conditions, strict=True):
        own, theirs = condition.headroom, other.headroom
        assert own.highest_air_c == pytest.approx(theirs.highest_air_c, abs=0.03)
        assert [part.band_k for part in condition.parts] == pytest.approx(
            [part.band_k for part in other.parts], rel=1e-5
        )


def test_one_condition_alone(document, expected, all_is_large):
    name = expected.conditions[0].name
    report = check(document, conditions=[name])
    own = {key: value for key, value in margins(expected).items() if key[0] == name}
    assert margins(report) == pytest.approx(own, abs=1e-5)


def test_sensitivities_of_a_large_network(document, expected, all_is_large):
    found = check(document, sensitivities=3).sensitivities
    assert [row.path for row in found.numbers] == [
        row.path for row in expected.sensitivities.numbers
    ]


def test_a_part_of_a_large_network_explained(document, expected, all_is_large):
    part = expected.conditions[0].parts[0].name
    explained = check_and_explain(document, part)
    assert margins(explained) == pytest.approx(margins(expected), abs=1e-5)
