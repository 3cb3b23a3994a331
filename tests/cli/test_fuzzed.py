"""Documents and part lists of a stranger: a slice of what `tests/benchmarks/fuzz.py` tries."""

import math

import pytest
from support.fuzzing import MOST_MB, checked, faults, fuzzed
from support.hanging import ends

# Few enough for some seconds, in groups so that a failure names a few.
COUNT, GROUP = 240, 20
FIRST = 10_000


@pytest.mark.parametrize("first", range(FIRST, FIRST + COUNT, GROUP))
def test_any_document_is_answered_or_refused(first, tmp_path, monkeypatch):
    # The process that runs the tests holds more than a check does; time and memory are measured
    # where nothing else runs.
    monkeypatch.setattr("support.fuzzing.MOST_MB", 20 * MOST_MB)
    monkeypatch.setattr("support.fuzzing.LONGEST_S", math.inf)
    for seed in range(first, first + GROUP):
        folder = tmp_path / str(seed)
        folder.mkdir()
        with ends():
            outcome = checked(seed, folder, full=False)
        assert outcome.wrong == "", f"seed {seed}, {outcome.kind}"


def test_a_seed_gives_the_same_document():
    assert fuzzed(7) == fuzzed(7)
    assert len({fuzzed(seed).document for seed in range(50)}) > 35


def test_faults_are_seen():
    assert faults(0, "", 0.1, 100) == []
    assert faults(2, "box.yaml:1:1: no", 0.1, 100) == []
    for fault in (
        (70, "", 0.1, 100),
        (2, "", 0.1, 100),
        (0, "x", 0.1, 100),
        (2, "Traceback", 0.1, 100),
        (2, "\x1b[2J", 0.1, 100),
        (0, "", 6.0, 100),
        (0, "", 0.1, 501),
    ):
        assert len(faults(*fault)) == 1
