"""Several documents in one run: which are found, and that none hides another."""

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest
from support.reports import SMALL, write_document

from enclosure_check.cli import main
from enclosure_check.cli.documents import find_documents, is_several

from .conftest import environment

HOT = {**SMALL, "parts": {"X1": {**SMALL["parts"]["X1"], "limits": {"case": {"max_c": 30}}}}}
RUNAWAY = {**SMALL, "parts": {"X1": {**SMALL["parts"]["X1"], "power_doubling_k": 2}}}
TEXT = "title: t\nbox: {}\nparts: {}\n"


@pytest.fixture
def here(tmp_path, monkeypatch) -> Path:
    monkeypatch.chdir(tmp_path)
    return tmp_path


def put(path: str, document=SMALL) -> str:
    folder = Path(path).parent
    folder.mkdir(parents=True, exist_ok=True)
    write_document(folder, document).rename(path)
    return path


def text(path: str, content: str = TEXT) -> None:
    Path(path).parent.mkdir(parents=True, exist_ok=True)
    Path(path).write_text(content, "utf-8")


# Finding them -----------------------------------------------------------------------------


def test_files_are_taken_as_named_and_once(here):
    text("b.yaml")
    text("a.yaml", "nothing of ours")
    os.symlink("b.yaml", "link.yaml")
    found = find_documents(["b.yaml", "a.yaml", "./b.yaml", "link.yaml", "missing.yaml"])
    assert found.paths == ("b.yaml", "a.yaml", "missing.yaml")
    assert found.refused == ()


def test_a_folder_is_searched_sorted_with_its_sub_folders(here):
    for path in ("f/b.yaml", "f/a.yml", "f/a/z.YAML", "f/a-/y.yaml", "f/notes.txt", "g/c.yaml"):
        text(path)
    assert find_documents(["f"]).paths == ("f/a/z.YAML", "f/a-/y.yaml", "f/a.yml", "f/b.yaml")
    assert find_documents(["g", "f/b.yaml", "f"]).paths[:2] == ("g/c.yaml", "f/b.yaml")
    assert find_documents(["."]).paths == (
        "f/a/z.YAML",
        "f/a-/y.yaml",
        "f/a.yml",
        "f/b.yaml",
        "g/c.yaml",
    )


def test_hidden_names_and_what_lies_outside_are_passed_over(here):
    text("outside/x.yaml")
    text("f/.git/x.yaml")
    text("f/.hidden.yaml")
    text("f/y.yaml")
    os.symlink(here / "outside", "f/folder")
    os.symlink(here / "outside" / "x.yaml", "f/file.yaml")
    os.symlink("nowhere.yaml", "f/broken.yaml")
    os.mkfifo("f/pipe.yaml")
    assert find_documents(["f"]).paths == ("f/y.yaml",)


@pytest.mark.parametrize(
    ("content", "found"),
    [
        (TEXT, True),
        ("box: {}\nsurroundings: {}", True),
        ("'box': {}\n\"parts\" : {}", True),
        ("title: t\nbxo: {}\nparts: {\nsurroundings: [", True),  # a slip does not hide it
        ("box: {}", False),
        ("box: {}\nbox: {}", False),
        ("x:\n  box: {}\n  parts: {}", False),
        ("# box: {}\n# parts: {}", False),
        ("", False),
    ],
)
def test_what_is_taken_for_a_document(here, content, found):
    text("f/a.yaml", content)
    assert bool(find_documents(["f"]).paths) is found


def test_a_folder_without_documents_is_told(here):
    Path("empty").mkdir()
    found = find_documents(["empty"])
    assert found.paths == ()
    assert found.refused[0][0] == "empty"
    assert "no document in it" in found.refused[0][1]


def test_a_folder_too_large_is_refused(here, monkeypatch):
    monkeypatch.setattr("enclosure_check.cli.documents.MAX_DOCUMENTS", 2)
    for name in "abc":
        text(f"f/{name}.yaml")
    assert "more than 2 documents" in find_documents(["f"]).refused[0][1]
    monkeypatch.setattr("enclosure_check.cli.documents.MAX_ENTRIES", 1)
    assert "more than 1 files" in find_documents(["f"]).refused[0][1]


def test_when_it_is_several(here):
    text("f/a.yaml")
    assert not is_several(["f/a.yaml"])
    assert is_several(["f"])
    assert is_several(["f/a.yaml", "b.yaml"])


# Their results ----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("documents", "code"),
    [
        ((SMALL, SMALL), 0),
        ((SMALL, HOT), 1),
        ((HOT, {}), 2),
        ((RUNAWAY, SMALL), 3),
        (({}, RUNAWAY, HOT), 3),
    ],
)
def test_the_worst_code_counts(here, capsys, documents, code):
    paths = [put(f"{place}.yaml", each) for place, each in enumerate(documents)]
    assert main(["check", *paths]) == code
    assert main(["check", *reversed(paths)]) == code


def test_an_error_hides_no_other_result(here, capsys):
    paths = [put("a.yaml", HOT), put("b.yaml", {}), put("c.yaml", RUNAWAY), put("d.yaml")]
    assert main(["check", *paths, "--format", "json"]) == 3
    captured = capsys.readouterr()
    run = json.loads(captured.out)
    assert [each["document"] for each in run["documents"]] == ["a.yaml", "d.yaml"]
    assert [each["verdict"] for each in run["documents"]] == ["fail", "pass"]
    assert run["verdict"] == "error"
    assert [(each["document"], each["reason"]) for each in run["without_answer"]] == [
        ("b.yaml", "bad_input"),
        ("c.yaml", "not_converged"),
    ]
    said = captured.err.splitlines()
    assert all(line.startswith(("b.yaml:", "c.yaml: ")) for line in said)
    problems = run["without_answer"][0]["problems"]
    assert [
        f"{p['file']}:{p['line']}:{p['column']}: {p['field']}: {p['message']}" for p in problems
    ] == said[:-1]


def test_nothing_is_written_when_none_has_an_answer(here, capsys):
    put("a.yaml", {})
    Path("old.json").write_text("old")
    arguments = ["check", "a.yaml", "missing.yaml", "--write", "json=old.json"]
    assert main(arguments) == 2
    assert capsys.readouterr().out == ""
    assert Path("old.json").read_text() == "old"


def test_one_document_in_a_folder_has_the_form_of_several(here, capsys):
    put("f/a.yaml")
    main(["check", "f", "--format", "json"])
    several = json.loads(capsys.readouterr().out)
    main(["check", "f/a.yaml", "--format", "json"])
    assert several["documents"] == [json.loads(capsys.readouterr().out)]


def test_a_condition_that_one_lacks_is_an_error_of_that_one(here, capsys):
    put("a.yaml", {**SMALL, "conditions": {"noon": {}}})
    put("b.yaml")
    assert main(["check", "a.yaml", "b.yaml", "--condition", "noon", "--quiet"]) == 2
    captured = capsys.readouterr()
    assert captured.out.startswith("a.yaml: pass, ")
    assert captured.err.startswith("b.yaml:")


# Several formats at once ------------------------------------------------------------------


def test_further_formats_are_written_beside(here, capsys):
    put("a.yaml")
    arguments = ["check", "a.yaml", "--quiet", "--write", "json=a.json", "--write", "text=a.txt"]
    assert main(arguments) == 0
    assert capsys.readouterr().out == "a.yaml: pass, smallest margin 26.1 K: X1 case max\n"
    main(["check", "a.yaml"])
    assert len(Path("a.txt").read_text("utf-8").splitlines()) == 1  # --quiet is of the text
    assert json.loads(Path("a.json").read_text("utf-8"))["verdict"] == "pass"


def test_all_are_made_before_one_is_written(here, monkeypatch, capsys):
    put("a.yaml")
    Path("old.txt").write_text("old")

    def fail(*_):
        raise ZeroDivisionError

    monkeypatch.setattr("enclosure_check.report.json_report.plain", fail)
    assert main(["check", "a.yaml", "--write", "text=old.txt", "--write", "json=new.json"]) == 70
    assert Path("old.txt").read_text() == "old"
    assert capsys.readouterr().out == ""
    assert not Path("new.json").exists()


@pytest.mark.parametrize(
    "arguments",
    [
        ["--write", "json=x", "--write", "text=./x"],
        ["--output", "x", "--write", "json=x"],
        ["--quiet", "--format", "json"],
        ["--quiet", "--explain", "X1"],
        ["b.yaml", "--explain", "X1"],
        [".", "--explain", "X1"],
    ],
)
def test_what_does_not_go_together(here, capsys, arguments):
    put("a.yaml")
    put("b.yaml")
    assert main(["check", "a.yaml", *arguments]) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err.startswith("enclosure-check: ")
    assert captured.err.count("\n") == 1


def test_no_document_is_overwritten(here, capsys):
    put("a.yaml")
    put("b.yaml")
    before = Path("b.yaml").read_bytes()
    assert main(["check", "a.yaml", "b.yaml", "--write", "json=./b.yaml"]) == 2
    assert "not overwritten" in capsys.readouterr().err
    assert Path("b.yaml").read_bytes() == before


def test_a_plain_check_loads_nothing_it_does_not_need(here):
    put("a.yaml")
    code = (
        "import sys; from enclosure_check.cli import main; main(['check', 'a.yaml', '--quiet']); "
        "print(sorted(sys.modules))"
    )
    ended = subprocess.run(
        [sys.executable, "-c", code], env=environment(), capture_output=True, text=True, check=True
    )
    loaded = ended.stdout.partition("\n")[2]
    assert "'enclosure_check.cli.answers'" in loaded
    for name in ("pydantic", "json", "enclosure_check.report.json_report"):
        assert f"'{name}'" not in loaded


def test_an_explanation_and_the_whole_report_in_one_run(here, capsys):
    put("a.yaml")
    arguments = ["check", "a.yaml", "--explain", "X1", "--write", "json=a.json"]
    assert main(arguments) == 0
    assert "X1 under base: case" in capsys.readouterr().out
    data = json.loads(Path("a.json").read_text("utf-8"))
    assert data["explain"]["part"] == "X1"
    assert data["conditions"][0]["parts"]
