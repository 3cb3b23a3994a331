"""The page on the gate: its steps run as they stand, in a repository of their own."""

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path
from xml.etree import ElementTree

import pytest
import yaml
from support.reports import SMALL

from enclosure_check.cli.baseline import DEFAULT_LOSS_K
from enclosure_check.cli.check_command import FORMATS
from enclosure_check.cli.documents import MAX_DOCUMENTS
from enclosure_check.findings.earlier import MAX_BYTES, MAX_VALUES
from enclosure_check.report.writers import SHOW_ERRORS

PLAIN = ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "TERM", "GIT_DIR", "GIT_WORK_TREE", "GIT_INDEX_FILE")


class Repository:
    """A git repository with a folder of documents, and the program on the path."""

    def __init__(self, folder: Path, root: Path) -> None:
        self.folder = folder / "hardware"
        tools = folder / "tools"
        tools.mkdir()
        program = tools / "enclosure-check"
        program.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m enclosure_check "$@"\n')
        program.chmod(0o755)
        self.environment = {
            **{key: value for key, value in os.environ.items() if key not in PLAIN},
            "PATH": f"{tools}{os.pathsep}{os.environ['PATH']}",
            "PYTHONPATH": str(root),
            "HOME": str(folder),
            "PRE_COMMIT_HOME": str(folder / "hooks"),
            "GIT_CONFIG_NOSYSTEM": "1",
            **{f"GIT_{who}_NAME": "A. Tester" for who in ("AUTHOR", "COMMITTER")},
            **{f"GIT_{who}_EMAIL": "tester@example.invalid" for who in ("AUTHOR", "COMMITTER")},
        }
        (self.folder / "enclosures").mkdir(parents=True)
        self.git("init", "--quiet", "--initial-branch=main")
        self.put(".gitignore", "build/\n")
        self.commit("Begin")

    def run(self, *command: str) -> subprocess.CompletedProcess[str]:
        return subprocess.run(
            command,
            cwd=self.folder,
            env=self.environment,
            capture_output=True,
            text=True,
            timeout=120,
        )

    def git(self, *arguments: str) -> None:
        done = self.run("git", *arguments)
        assert done.returncode == 0, done.stderr

    def put(self, name: str, content: str) -> None:
        (self.folder / name).write_text(content, "utf-8")

    def document(self, power_w: float = 1.5, name: str = "box") -> None:
        part = {**SMALL["parts"]["X1"], "power_w": power_w}
        text = yaml.safe_dump({**SMALL, "parts": {"X1": part}}, sort_keys=False)
        self.put(f"enclosures/{name}.yaml", text)

    def commit(self, message: str) -> None:
        self.git("add", "--all")
        self.git("commit", "--quiet", "--message", message)

    def read(self, name: str) -> str:
        return (self.folder / "build/enclosures" / name).read_text("utf-8")

    def kept(self) -> set[str]:
        return {path.name for path in (self.folder / "build/enclosures").iterdir()}


@pytest.fixture
def repository(tmp_path, root) -> Repository:
    if shutil.which("git") is None:
        pytest.skip("needs git")
    return Repository(tmp_path, root)


@pytest.fixture
def recipe(read_page) -> str:
    step, _ = read_page("docs/gate.md").blocks("sh")
    return step


WRITTEN = {"report.json", "junit.xml", "report.sarif", "summary.md"}


def test_without_a_baseline_yet_the_limits_alone_count(repository, recipe):
    repository.git("checkout", "--quiet", "-b", "change")
    repository.document()
    repository.commit("A box")
    done = repository.run("sh", "-c", recipe)
    assert done.returncode == 0, done.stderr
    assert done.stdout == "enclosures/box.yaml: pass, smallest margin 26.1 K: X1 case max\n"
    assert repository.kept() == {*WRITTEN, "baseline.log"}


def test_a_change_that_loses_margin_is_stopped(repository, recipe):
    repository.document()
    repository.document(0.5, "small")
    repository.commit("Two boxes")
    repository.git("checkout", "--quiet", "-b", "change")
    done = repository.run("sh", "-c", recipe)
    assert (done.returncode, done.stderr) == (0, "")
    assert done.stdout.count("none of 1 margin fell by more than the 0.5 K allowed.") == 2

    repository.document(1.7)
    repository.commit("More power")
    done = repository.run("sh", "-c", recipe)
    assert (done.returncode, done.stderr) == (1, "")
    assert "box.yaml: pass, " in done.stdout
    assert "WORSE: 1 of 1 margin fell by more than the 0.5 K allowed." in done.stdout
    assert repository.kept() == {*WRITTEN, "baseline.json", "baseline.log"}
    summary = repository.read("summary.md")
    assert "`parts.X1.power_w`: `1.5 -> 1.7`" in summary
    (failure,) = ElementTree.fromstring(repository.read("junit.xml")).iter("failure")
    assert failure.get("type") == "margin_lost"
    (result,) = [
        each
        for each in json.loads(repository.read("report.sarif"))["runs"][0]["results"]
        if each["level"] == "error"
    ]
    place = result["locations"][0]["physicalLocation"]
    assert place["artifactLocation"]["uri"] == "enclosures/box.yaml"
    line = place["region"]["startLine"]
    text = (repository.folder / "enclosures/box.yaml").read_text("utf-8")
    assert text.splitlines()[line - 1] == "  X1:"
    # Nothing of it is left behind, and nothing in it tells where it ran.
    done = repository.run("git", "worktree", "list")
    assert done.stdout.count("\n") == 1
    for name in WRITTEN:
        assert str(repository.folder) not in repository.read(name)


def test_a_broken_document_is_told_beside_the_others(repository, recipe):
    repository.document()
    repository.put("enclosures/broken.yaml", "box: {width_mm: wide}\nparts: {}\n")
    repository.commit("Two boxes")
    done = repository.run("sh", "-c", recipe)
    assert done.returncode == 2
    assert "enclosures/broken.yaml:1:17: box.width_mm: " in done.stderr
    assert "enclosures/box.yaml: pass" in done.stdout
    assert repository.kept() >= WRITTEN
    assert "**WITHOUT AN ANSWER**" in repository.read("summary.md")


def test_results_are_the_same_every_time(repository, recipe):
    repository.document()
    repository.commit("A box")
    repository.run("sh", "-c", recipe)
    first = {name: repository.read(name) for name in WRITTEN}
    repository.run("sh", "-c", recipe)
    assert {name: repository.read(name) for name in WRITTEN} == first


def test_a_fixed_state_is_held(repository, read_page):
    _, fixed = read_page("docs/gate.md").blocks("sh")
    repository.document()
    done = repository.run("sh", "-e", "-c", fixed)
    assert done.returncode == 0, done.stderr
    repository.document(2.0)
    again = fixed.splitlines()[-1]
    assert repository.run("sh", "-c", again).returncode == 1


def test_bounds_named_on_the_page(read_page):
    prose = " ".join(read_page("docs/gate.md").prose().split())
    assert f"up to {MAX_BYTES >> 20} MiB and {MAX_VALUES:,} values" in prose
    assert f"up to {MAX_DOCUMENTS} documents" in prose
    assert f"({DEFAULT_LOSS_K} K when not given)" in prose


def test_formats_named_on_the_page(read_page):
    page = read_page("docs/gate.md")
    rows = page.table("format", "when no document has an answer")
    silent, telling = ({name.strip("` ") for name in row[0].split(",")} for row in rows)
    assert telling == set(SHOW_ERRORS)
    assert silent | telling == set(FORMATS)


# The hook ---------------------------------------------------------------------------------


@pytest.fixture
def hooks(root):
    return yaml.safe_load((root / ".pre-commit-hooks.yaml").read_text("utf-8"))


def framework(repository: Repository, *arguments: str) -> subprocess.CompletedProcess[str]:
    pytest.importorskip("pre_commit", reason="comes with the test extra")
    return repository.run(sys.executable, "-m", "pre_commit", *arguments)


def test_the_hook_is_valid(repository, root):
    done = framework(repository, "validate-manifest", str(root / ".pre-commit-hooks.yaml"))
    assert done.returncode == 0, done.stdout


def test_the_example_on_the_page_is_valid(repository, read_page, hooks):
    (example,) = read_page("docs/gate.md").blocks("yaml")
    repository.put("example.yaml", example)
    done = framework(repository, "validate-config", "example.yaml")
    assert done.returncode == 0, done.stdout
    (used,) = yaml.safe_load(example)["repos"][0]["hooks"]
    assert used["id"] == hooks[0]["id"]


def test_the_hook_runs_on_what_is_staged(repository, hooks):
    """As the framework runs it, but for the environment it would install: ours is there."""
    (hook,) = hooks
    local = {**hook, "language": "system", "args": ["enclosures"]}
    config = yaml.safe_dump({"repos": [{"repo": "local", "hooks": [local]}]})
    repository.put(".pre-commit-config.yaml", config)
    repository.document()
    repository.git("add", "--all")
    done = framework(repository, "run", "--verbose")
    assert done.returncode == 0, done.stdout + done.stderr
    assert "enclosures/box.yaml: pass, smallest margin 26.1 K" in done.stdout

    repository.document(9.0)  # not staged: passed over
    assert framework(repository, "run").returncode == 0
    repository.git("add", "--all")
    done = framework(repository, "run")
    assert done.returncode == 1
    assert "enclosures/box.yaml: FAIL" in done.stdout

    repository.document()
    repository.commit("A box")
    repository.put("notes.txt", "nothing of ours")
    repository.git("add", "--all")
    assert "no files to check" in framework(repository, "run").stdout
