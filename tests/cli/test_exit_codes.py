"""What `main` returns, in process."""

from dataclasses import replace

import pytest
from support.reports import SMALL, report_of, write_document

from enclosure_check import __version__
from enclosure_check.cli import main
from enclosure_check.cli.check_command import FORMATS
from enclosure_check.cli.codes import ExitCode, exit_code
from enclosure_check.physics.view_closure import NotEnclosedError

RUNAWAY = {**SMALL, "parts": {"X1": {**SMALL["parts"]["X1"], "power_doubling_k": 2}}}


@pytest.mark.parametrize(
    ("verdict", "margin_stated", "strict", "code"),
    [
        ("pass", False, False, ExitCode.PASS),
        ("pass", True, True, ExitCode.PASS),
        ("marginal", False, False, ExitCode.PASS),
        ("marginal", True, False, ExitCode.FAIL),
        ("marginal", False, True, ExitCode.FAIL),
        ("fail", False, False, ExitCode.FAIL),
        ("fail", True, True, ExitCode.FAIL),
    ],
)
def test_exit_code_of_a_report(tmp_path, verdict, margin_stated, strict, code):
    report = replace(report_of(tmp_path), verdict=verdict, margin_stated=margin_stated)
    assert exit_code(report, strict=strict) is code


def test_numbers_of_the_codes():
    assert [int(code) for code in ExitCode] == [0, 1, 2, 3, 70, 130]


def test_pass(tmp_path, capsys):
    assert main(["check", str(write_document(tmp_path))]) == 0
    captured = capsys.readouterr()
    assert "PASS" in captured.out
    assert captured.err == ""


def test_not_converged(tmp_path, capsys):
    path = write_document(tmp_path, RUNAWAY)
    assert main(["check", str(path)]) == 3
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith(f"{path}: condition 'base': no converged answer. Worst node: X1")
    assert "thermal runaway" in captured.err


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["frobnicate"],
        ["check"],
        ["check", "box.yaml", "--format", "xml"],
        ["check", "box.yaml", "--form", "json"],
        ["check", "box.yaml", "--bogus"],
        ["check", "box.yaml", "--write", "json"],
        ["check", "box.yaml", "--write", "json="],
        ["check", "box.yaml", "--write", "xml=box.xml"],
        ["check", "box.yaml", "--condition"],
        ["schema"],
        ["schema", "everything"],
        ["check", "\x1b[31mbox.yaml", "--bogus\x1b[31m"],
    ],
)
def test_wrong_usage(arguments, capsys):
    assert main(arguments) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith("usage: enclosure-check")
    assert "\x1b" not in captured.err


@pytest.mark.parametrize("name", ["missing.yaml", "a\0b", "x" * 5000, "\x1b[31m.yaml", "\udcff"])
def test_files_that_cannot_be_read(name, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    assert main(["check", name]) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert "cannot be read: " in captured.err
    assert captured.err.count("\n") == 1
    assert "\x1b" not in captured.err


def test_a_condition_named_twice_is_checked_once(tmp_path, capsys):
    document = {**SMALL, "conditions": {"one": {}, "two": {}}}
    path = str(write_document(tmp_path, document))
    assert main(["check", path, "--condition", "two", "--condition", "two"]) == 0
    out = capsys.readouterr().out
    assert out.count("\ntwo: pass\n") == 1
    assert "\none: " not in out


def test_unknown_names_are_shown_with_the_nearest(tmp_path, capsys):
    document = {**SMALL, "conditions": {"noon": {}}, "options": {"fins": {}}}
    path = str(write_document(tmp_path, document))
    assert main(["check", path, "--condition", "moon", "--option", "fin"]) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert "did you mean 'noon'?" in captured.err
    assert "did you mean 'fins'?" in captured.err


def test_version(capsys):
    assert main(["--version"]) == 0
    assert capsys.readouterr().out == f"enclosure-check {__version__}\n"


@pytest.mark.parametrize("arguments", [["--help"], ["check", "--help"], ["schema", "--help"]])
def test_help(arguments, capsys, monkeypatch):
    monkeypatch.setenv("COLUMNS", "80")
    assert main(arguments) == 0
    out = capsys.readouterr().out
    assert max(map(len, out.splitlines())) <= 80
    if arguments[0] != "schema":
        assert "exit codes:" in out
        assert all(f"\n  {code}" in out for code in (0, 1, 2, 3, 70))


def test_help_has_examples(capsys):
    main(["--help"])
    assert "enclosure-check check box.yaml" in capsys.readouterr().out


@pytest.mark.parametrize("of", ["document", "report", "run"])
def test_schema(of, capsys):
    import json

    assert main(["schema", of]) == 0
    schema = json.loads(capsys.readouterr().out)
    assert schema["title"].lower().startswith(of)


def test_interrupted(tmp_path, monkeypatch, capsys):
    def interrupt(*_, **__):
        raise KeyboardInterrupt

    monkeypatch.setattr("enclosure_check.cli.answers.load_document", interrupt)
    assert main(["check", str(write_document(tmp_path))]) == 130
    assert capsys.readouterr() == ("", "")


def test_an_error_of_the_program_is_not_taken_for_a_verdict(tmp_path, monkeypatch, capsys):
    def break_down(*_, **__):
        raise ZeroDivisionError("division by zero")

    monkeypatch.setattr("enclosure_check.cli.answers.check", break_down)
    assert main(["check", str(write_document(tmp_path))]) == 70
    captured = capsys.readouterr()
    assert captured.out == ""
    assert "ZeroDivisionError" in captured.err
    assert captured.err.endswith("internal error, no result; the lines above say where\n")


def test_main_leaves_the_garbage_collector_as_it_was(tmp_path):
    import gc

    assert gc.isenabled()
    main(["check", str(tmp_path / "missing.yaml")])
    assert gc.isenabled()


def test_formats_are_those_of_the_writers():
    from enclosure_check.report.writers import WRITERS

    assert tuple(WRITERS) == FORMATS


def test_surfaces_that_enclose_no_space_are_no_answer(tmp_path, monkeypatch, capsys):
    def refuse(case):
        raise NotEnclosedError("exchange areas do not close")

    monkeypatch.setattr("enclosure_check.check.build_network", refuse)
    assert main(["check", str(write_document(tmp_path))]) == 3
    assert "bodies in the air or boards that reach into each other" in capsys.readouterr().err
