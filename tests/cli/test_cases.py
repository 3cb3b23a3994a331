"""Whole runs: command, exit code, standard output and standard error, held together in a file.

A case is a folder with ``cmd`` (one line), the documents, lists and folders it names, and ``expected.txt``. Write a
new ``expected.txt`` with ``pytest tests/cli --update-expected`` and review it.
"""

import re
import shlex
import shutil
from pathlib import Path

import pytest

from enclosure_check import __version__

CASES = Path(__file__).parent / "cases"
PROGRAM = "enclosure-check"
# What differs between versions and machines, and what is put in its place.
_NORMAL = (
    (re.escape(__version__), "<version>"),
    (r"\b[0-9a-f]{64}\b", "<digest>"),
    (r"(Solved:\s+\d+\s+unknown)\s.+?\)\.\n", r"\1 ... <solver>\n"),
    (r"\(\S+ W out of balance\)", "(<heat> out of balance)"),
)
_JSON_NUMBER = r"(?<=: )-?\d[-+.0-9e]*(?=,?$)"


def normal(text: str, is_json: bool) -> str:
    for pattern, place in _NORMAL:
        text = re.sub(pattern, place, text, flags=re.DOTALL)
    if is_json:
        text = re.sub(_JSON_NUMBER, "<number>", text, flags=re.MULTILINE)
    return text


@pytest.mark.parametrize("folder", sorted(CASES.iterdir()), ids=lambda folder: folder.name)
def test_case(folder: Path, run, tmp_path: Path, request: pytest.FixtureRequest):
    command = (folder / "cmd").read_text(encoding="utf-8").strip()
    for path in folder.iterdir():
        if path.is_dir():
            shutil.copytree(path, tmp_path / path.name)
        elif path.name not in ("cmd", "expected.txt"):
            shutil.copy(path, tmp_path)
    program, *arguments = shlex.split(command)
    assert program == PROGRAM
    ended = run(*arguments)
    is_json = "json" in arguments or "sarif" in arguments
    is_laid_out = not {"json", "sarif", "junit", "markdown"} & set(arguments)
    shown = (
        f"$ {command}\n"
        f"exit code {ended.code}\n"
        f"=== standard output\n{normal(ended.out, is_json)}"
        f"=== standard error\n{normal(ended.err, False)}"
    )
    assert max(map(len, ended.out.splitlines()), default=0) <= (80 if is_laid_out else 10_000)
    expected = folder / "expected.txt"
    if request.config.getoption("--update-expected", default=False):
        expected.write_text(shown, encoding="utf-8")
    assert shown == expected.read_text(encoding="utf-8")


def test_a_case_of_every_exit_code_a_document_can_cause():
    codes = {
        int(re.search(r"^exit code (\d+)$", path.read_text(encoding="utf-8"), re.MULTILINE)[1])
        for path in CASES.glob("*/expected.txt")
    }
    assert codes == {0, 1, 2, 3}
