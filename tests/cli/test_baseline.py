"""The gate against an earlier result, as it is run."""

import json
from pathlib import Path

import pytest
from support.reports import SMALL, write_document

from enclosure_check.cli import main

X1 = SMALL["parts"]["X1"]
WARMER = {**SMALL, "parts": {"X1": {**X1, "power_w": 1.6}}}


@pytest.fixture
def here(tmp_path, monkeypatch) -> Path:
    """A folder with a document and its result."""
    monkeypatch.chdir(tmp_path)
    write_document(tmp_path)
    assert main(["check", "box.yaml", "--format", "json", "--output", "main.json"]) == 0
    return tmp_path


def test_the_same_passes(here, capsys):
    assert main(["check", "box.yaml", "--baseline", "main.json", "--allow-loss-k", "0"]) == 0
    out = capsys.readouterr().out
    assert "Against main.json: none of 1 margin fell by more than the 0 K allowed." in out
    assert "The document is the same." in out


def test_a_lost_margin_fails_while_the_limit_is_kept(here, capsys):
    write_document(here, WARMER)
    assert main(["check", "box.yaml"]) == 0
    assert main(["check", "box.yaml", "--baseline", "main.json", "--allow-loss-k", "10"]) == 0
    capsys.readouterr()
    assert main(["check", "box.yaml", "--baseline", "main.json"]) == 1
    out = capsys.readouterr().out
    assert "PASS: every limit is kept" in out
    assert "WORSE: 1 of 1 margin fell by more than the 0.1 K allowed." in " ".join(out.split())
    assert "parts.X1.power_w: 1.5 -> 1.6" in out


def test_the_json_report_holds_it(here, capsys):
    write_document(here, WARMER)
    assert main(["check", "box.yaml", "--baseline", "main.json", "--format", "json"]) == 1
    found = json.loads(capsys.readouterr().out)["baseline"]
    assert found["verdict"] == "fail"
    assert found["file"] == "main.json"
    assert found["inputs"] == [
        {"path": "parts.X1.power_w", "state": "changed", "old": 1.5, "new": 1.6}
    ]


def test_a_result_can_be_replaced_by_the_run_compared_with_it(here):
    write_document(here, WARMER)
    arguments = ["check", "box.yaml", "--baseline", "main.json", "--write", "json=main.json"]
    assert main([*arguments, "--quiet"]) == 1
    assert main([*arguments, "--quiet"]) == 0


def test_quiet_tells_it_in_the_line(here, capsys):
    write_document(here, WARMER)
    main(["check", "box.yaml", "--baseline", "main.json", "--quiet"])
    out = capsys.readouterr().out
    assert out.count("\n") == 1
    assert "; against main.json: WORSE: 1 of 1 margin fell" in out


@pytest.mark.parametrize(
    ("content", "message"),
    [
        ('{"format": 7}', "main.json: is of report format 7, allowed: 1"),
        ("title: a document\n", "main.json: is no JSON report"),
        (None, "main.json: cannot be read: No such file"),
    ],
)
def test_a_baseline_that_is_none(here, capsys, content, message):
    Path("main.json").unlink()
    if content is not None:
        Path("main.json").write_text(content)
    Path("old.json").write_text("old")
    arguments = ["check", "box.yaml", "--baseline", "main.json", "--write", "json=old.json"]
    assert main(arguments) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith(f"enclosure-check: {message}")
    assert captured.err.count("\n") == 1
    assert Path("old.json").read_text() == "old"


@pytest.mark.parametrize("loss", ["-1", "nan", "inf", "1e9", "much"])
def test_a_loss_that_is_none(here, capsys, loss):
    assert main(["check", "box.yaml", "--baseline", "main.json", f"--allow-loss-k={loss}"]) == 2
    assert "allowed: 0 to 1000 K" in capsys.readouterr().err


def test_a_loss_without_a_baseline(here, capsys):
    assert main(["check", "box.yaml", "--allow-loss-k", "1"]) == 2
    assert "needs a --baseline" in capsys.readouterr().err


def test_a_baseline_of_other_documents_is_no_silent_pass(here, capsys):
    for name in ("a.yaml", "b.yaml"):
        Path("box.yaml").rename(name)
        write_document(here)
    assert main(["check", "a.yaml", "b.yaml", "--format", "json", "--output", "two.json"]) == 0
    assert main(["check", "box.yaml", "--baseline", "two.json"]) == 2
    assert "holds none of the documents to be checked; it holds 'a.yaml'" in capsys.readouterr().err
    assert main(["check", "box.yaml", "a.yaml", "--baseline", "two.json"]) == 0
    out = capsys.readouterr().out
    assert "Against two.json: not in the baseline, so not compared." in out
    assert "In the baseline, but not checked now\n  - b.yaml\n" in out


def test_names_with_control_characters_do_nothing(here, capsys):
    data = json.loads(Path("main.json").read_text())
    data["conditions"][0]["part_heat"].append({"name": "\x1b[31mgone\n"})
    data["inputs"]["parts.\x1b[2J"] = "\x07"
    Path("main.json").write_text(json.dumps(data))
    main(["check", "box.yaml", "--baseline", "main.json"])
    out = capsys.readouterr().out
    assert "\x1b" not in out
    assert "\x07" not in out
    assert r"Parts removed: \x1b[31mgone\n." in out
