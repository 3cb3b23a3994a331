"""Where results go: all of them or none, the old file whole until the new one is."""

import json
import os
import stat
import subprocess
from pathlib import Path

import pytest
from support.reports import SMALL, write_document

from enclosure_check.cli import main, output

from .conftest import COMMAND, environment

FAILING = {**SMALL, "parts": {"X1": {**SMALL["parts"]["X1"], "limits": {"case": {"max_c": 30}}}}}
INVALID = {**SMALL, "title": ""}


def mode(path: Path) -> int:
    return stat.S_IMODE(path.stat().st_mode)


def names(folder: Path) -> set[str]:
    return {path.name for path in folder.iterdir()}


def test_written_to_a_file_and_not_to_standard_output(tmp_path, capsys):
    document, out = write_document(tmp_path), tmp_path / "report.txt"
    assert main(["check", str(document), "--output", str(out)]) == 0
    assert capsys.readouterr() == ("", "")
    main(["check", str(document)])
    assert out.read_text("utf-8") == capsys.readouterr().out
    assert names(tmp_path) == {"box.yaml", "report.txt"}


def test_a_failing_check_writes_its_report(tmp_path):
    document, out = write_document(tmp_path, FAILING), tmp_path / "report.json"
    assert main(["check", str(document), "--format", "json", "--output", str(out)]) == 1
    assert json.loads(out.read_text("utf-8"))["verdict"] == "fail"


def test_a_new_file_has_the_usual_mode(tmp_path):
    document, out = write_document(tmp_path), tmp_path / "report.txt"
    old = os.umask(0o027)
    try:
        main(["check", str(document), "--output", str(out)])
    finally:
        os.umask(old)
    assert mode(out) == 0o640


@pytest.mark.parametrize("bits", [0o600, 0o644, 0o755])
def test_an_old_file_keeps_its_mode(tmp_path, bits):
    document, out = write_document(tmp_path), tmp_path / "report.txt"
    out.write_text("old")
    out.chmod(bits)
    assert main(["check", str(document), "--output", str(out)]) == 0
    assert mode(out) == bits
    assert "Small box" in out.read_text("utf-8")


def test_a_link_is_followed(tmp_path):
    document, out, link = write_document(tmp_path), tmp_path / "report.txt", tmp_path / "link"
    out.write_text("old")
    link.symlink_to(out)
    assert main(["check", str(document), "--output", str(link)]) == 0
    assert link.is_symlink()
    assert "Small box" in out.read_text("utf-8")


@pytest.mark.parametrize("document", [INVALID, None], ids=["invalid", "missing"])
def test_nothing_is_written_on_an_error(tmp_path, document):
    path, out = tmp_path / "box.yaml", tmp_path / "report.txt"
    if document is not None:
        write_document(tmp_path, document)
    assert main(["check", str(path), "--output", str(out)]) == 2
    assert not out.exists()
    out.write_text("old")
    assert main(["check", str(path), "--output", str(out)]) == 2
    assert out.read_text() == "old"
    assert names(tmp_path) <= {"box.yaml", "report.txt"}


@pytest.mark.parametrize("step", ["fsync", "replace"])
def test_the_old_file_survives_a_failure_half_way(tmp_path, monkeypatch, capsys, step):
    document, out = write_document(tmp_path), tmp_path / "report.txt"
    out.write_text("old")

    def fail(*_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(output.os, step, fail)
    assert main(["check", str(document), "--output", str(out)]) == 2
    assert out.read_text() == "old"
    assert names(tmp_path) == {"box.yaml", "report.txt"}
    assert capsys.readouterr() == (
        "",
        f"enclosure-check: {out}: cannot be written: No space left on device\n",
    )


def test_interrupted_while_writing_leaves_nothing_behind(tmp_path, monkeypatch):
    document, out = write_document(tmp_path), tmp_path / "report.txt"

    def interrupt(*_):
        raise KeyboardInterrupt

    monkeypatch.setattr(output.os, "replace", interrupt)
    assert main(["check", str(document), "--output", str(out)]) == 130
    assert names(tmp_path) == {"box.yaml"}


@pytest.mark.parametrize(
    "path", [".", "no/such/folder/report.txt", "a\0b", "x" * 300, "", "\x1b[31m/report.txt"]
)
def test_output_that_cannot_be_written(tmp_path, monkeypatch, capsys, path):
    write_document(tmp_path)
    monkeypatch.chdir(tmp_path)
    assert main(["check", "box.yaml", "--output", path]) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert "cannot be written: " in captured.err
    assert captured.err.count("\n") == 1
    assert "\x1b" not in captured.err
    assert names(tmp_path) == {"box.yaml"}


def test_the_document_is_never_overwritten(tmp_path, capsys):
    document, link = write_document(tmp_path), tmp_path / "link"
    link.symlink_to(document)
    before = document.read_bytes()
    for out in (document, link):
        assert main(["check", str(document), "--output", str(out)]) == 2
        assert "not overwritten" in capsys.readouterr().err
    assert document.read_bytes() == before


def test_a_device_is_written_to_as_it_is(tmp_path, run):
    write_document(tmp_path)
    ended = run("check", "box.yaml", "--output", "/dev/stdout")
    assert ended.code == 0
    assert "Small box" in ended.out
    assert ended.err == ""


# Standard output --------------------------------------------------------------------------


def test_a_reader_that_left_is_no_error(tmp_path):
    write_document(tmp_path)
    process = subprocess.Popen(
        [*COMMAND, "check", "box.yaml"],
        cwd=tmp_path,
        env=environment(),
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )
    assert process.stdout is not None
    assert process.stderr is not None
    process.stdout.close()
    errors = process.stderr.read()
    process.stderr.close()
    assert process.wait(60) == 0
    assert errors == b""


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs a device that is always full")
def test_a_full_disk_is_an_error(tmp_path):
    write_document(tmp_path)
    with open("/dev/full", "wb") as full:
        ended = subprocess.run(
            [*COMMAND, "check", "box.yaml"],
            cwd=tmp_path,
            env=environment(),
            stdout=full,
            stderr=subprocess.PIPE,
        )
    assert ended.returncode == 2
    assert ended.stderr == (
        b"enclosure-check: standard output cannot be written: No space left on device\n"
    )


def test_standard_output_that_is_closed(tmp_path, monkeypatch, capsys):
    write_document(tmp_path)
    monkeypatch.setattr("sys.stdout", None)
    assert main(["check", str(tmp_path / "box.yaml")]) == 2
    assert capsys.readouterr().err == "enclosure-check: standard output is closed\n"


def test_help_of_every_command_has_examples(capsys):
    from enclosure_check.cli.arguments import parser
    from enclosure_check.cli.completion import commands_of

    for command in commands_of(parser()):
        assert main([*([command.name] if command.name else []), "--help"]) == 0
        told = capsys.readouterr().out
        assert "examples" in told, command.name
        assert f"enclosure-check {command.name}" in told.partition("examples")[2]
        assert max(map(len, told.splitlines())) <= 80
