"""The command ``new``: starters that run as they stand, and what is never overwritten."""

import json
import os

import pytest
from jsonschema import Draft202012Validator

from enclosure_check.check import check
from enclosure_check.cli import main
from enclosure_check.description.load import load_document
from enclosure_check.description.starters import KINDS, MODELINE, SCHEMA_FILE, starter
from enclosure_check.description.yaml_nodes import read_yaml, to_data


@pytest.fixture(autouse=True)
def _here(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)


@pytest.mark.parametrize("kind", KINDS)
def test_a_starter_runs_as_it_stands_and_passes(kind, tmp_path, capsys):
    assert main(["new", "box.yaml", "--kind", kind]) == 0
    told = capsys.readouterr()
    assert told.out == "box.yaml is written. Check it: enclosure-check check box.yaml\n"
    assert told.err == ""
    assert os.listdir() == ["box.yaml"]
    document = load_document("box.yaml")
    for option in (None, *document.option_names()):
        report = check(document, option=option)
        assert report.verdict == "pass", option
        assert len(report.conditions) >= 2
    assert document.option_names()
    assert any(part.limit_kind for part in report.conditions[0].parts)


@pytest.mark.parametrize("kind", KINDS)
def test_a_starter_explains_itself(kind):
    lines = starter(kind).splitlines()
    assert lines[0].startswith("# A ")
    assert "invented" in lines[2]
    assert sum("#" in line for line in lines) > 15
    assert max(map(len, lines)) <= 105
    assert starter(kind).isascii()


def test_kinds_differ():
    assert "sealed_wall" in KINDS
    assert "openings:" in starter("vented")
    assert "openings:" not in starter("sealed_wall") + starter("padded_outdoor")
    assert "pad:" in starter("padded_outdoor")
    assert "sun_w_per_m2:" in starter("padded_outdoor")
    with pytest.raises(KeyError):
        starter("floating")


def test_the_sealed_wall_is_what_comes_unasked():
    assert main(["new", "box.yaml"]) == 0
    with open("box.yaml", encoding="utf-8") as file:
        assert file.read() == starter("sealed_wall")


def test_the_schema_is_written_beside_and_named(tmp_path, capsys):
    os.mkdir("hub")
    assert main(["new", "hub/box.yaml", "--schema"]) == 0
    text = (tmp_path / "hub" / "box.yaml").read_text("utf-8")
    assert text == MODELINE.format(SCHEMA_FILE) + starter("sealed_wall")
    # The modeline of the YAML language server: a comment on a line of its own, path from the file.
    assert text.startswith("# yaml-language-server: $schema=enclosure.schema.json\n")
    capsys.readouterr()
    assert main(["schema", "document"]) == 0
    written = (tmp_path / "hub" / SCHEMA_FILE).read_text("utf-8")
    assert written == capsys.readouterr().out
    data = to_data(read_yaml(text.encode(), "box.yaml"))
    assert list(Draft202012Validator(json.loads(written)).iter_errors(data)) == []
    assert check(load_document("hub/box.yaml")).verdict == "pass"


def test_nothing_is_overwritten_unless_forced(tmp_path, capsys):
    for name in ("box.yaml", SCHEMA_FILE):
        (tmp_path / name).write_text("mine", "utf-8")
        assert main(["new", "box.yaml", "--schema"]) == 2
        told = capsys.readouterr()
        assert told.out == ""
        assert "is there already; --force replaces it" in told.err
        assert (tmp_path / name).read_text("utf-8") == "mine"
        assert os.listdir() == [name]
        assert main(["new", "box.yaml", "--schema", "--force"]) == 0
        capsys.readouterr()
        assert "mine" not in (tmp_path / "box.yaml").read_text("utf-8")
        for each in os.listdir():
            os.remove(each)


def test_a_dangling_link_counts_as_there(tmp_path, capsys):
    os.symlink("nowhere.yaml", "box.yaml")
    assert main(["new", "box.yaml"]) == 2
    assert os.listdir() == ["box.yaml"]


def test_the_same_text_again_is_no_loss():
    assert main(["new", "box.yaml", "--schema"]) == 0
    assert main(["new", "other.yaml", "--schema", "--kind", "vented"]) == 0
    assert main(["new", "box.yaml", "--schema"]) == 0


def test_where_nothing_can_be_written(capsys):
    assert main(["new", "no/folder/box.yaml", "--schema"]) == 2
    assert "cannot be written" in capsys.readouterr().err
    assert os.listdir() == []
