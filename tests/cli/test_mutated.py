"""Every document made invalid on purpose, through the command line."""

import re

import pytest
from support.hanging import ends
from support.mutations import FULL, Mutation, mutated_documents

from enclosure_check.cli import main

MUTATIONS = list(mutated_documents())


def test_the_document_they_come_from_is_accepted(capsys):
    assert main(["check", str(FULL)]) in (0, 1)
    captured = capsys.readouterr()
    assert captured.out.startswith("Measuring station on a mast\n")
    assert captured.err == ""


def test_there_are_enough():
    assert len(MUTATIONS) >= 500


@pytest.mark.parametrize("mutation", MUTATIONS, ids=[each.label for each in MUTATIONS])
def test_refused_with_its_place(mutation: Mutation, tmp_path, capsys):
    path = tmp_path / "enclosure.yaml"
    path.write_bytes(mutation.data)
    with ends():
        code = main(["check", str(path)])
    captured = capsys.readouterr()
    assert code == 2
    assert captured.out == ""
    assert "Traceback" not in captured.err
    lines = captured.err.splitlines()
    assert lines
    for line in lines:
        assert re.match(rf"{re.escape(str(path))}:[1-9]\d*:[1-9]\d*: \S", line)
        assert line.isprintable()
    if mutation.field is not None:
        assert any(f": {mutation.field}: " in line for line in lines)
