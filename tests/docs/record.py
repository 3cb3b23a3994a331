"""Write anew what pages record of the program's answers: tables and outputs.

Run it as ``python tests/docs/record.py`` after a change that moves temperatures, then read the
difference; ``pytest tests/cli --update-expected`` does the same for the recorded commands. Words
that tell of numbers are not touched: the tests of the pages hold them to the tables.
"""

import contextlib
import io
import os
import re
import shlex
import sys
from collections.abc import Callable, Sequence
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]

os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
sys.path[:0] = [str(ROOT), str(ROOT / "tests")]

from published import (  # noqa: E402 - after the path is set
    accuracies,
    cabinets,
    evidence,
    experiment_vented,
    experiments_inside,
)
from support import recorded_tables  # noqa: E402 - as above

from enclosure_check.cli import main  # noqa: E402 - as above

Rows = Sequence[Sequence[str]]
# Page, start of the head of the table, its rows.
TABLES: tuple[tuple[str, tuple[str, ...], Callable[[], Rows]], ...] = (
    ("docs/method.md", ("form", "percent of", "deviations"), accuracies.table),
    ("docs/method.md", ("what", "half-width", "rests on"), recorded_tables.uncertainties),
    ("docs/method.md", ("case", "inside mm, board"), experiments_inside.table),
    ("docs/method.md", ("case", "0.1 of the height"), experiments_inside.profile_table),
    ("docs/method.md", ("quantity", "experiment", "ours"), experiment_vented.table),
    ("docs/cabinets.md", ("height x width x depth m", "A_e m2"), cabinets.rows),
    ("docs/cabinets.md", ("height x width x depth m", "W"), cabinets.vented_rows),
    ("README.md", ("option", "noon_sun"), recorded_tables.options),
    ("README.md", ("option", "warm_riser"), recorded_tables.vents),
)


def with_table(text: str, head: tuple[str, ...], rows: Rows) -> str:
    """Put rows into the one table whose head starts so."""
    pattern = re.compile(
        r"^(\| " + r" \| ".join(map(re.escape, head)) + r" \|.*\n\|[ :|-]+\n)((?:\|.*\n)+)", re.M
    )
    (found,) = pattern.finditer(text)
    new = "".join("| " + " | ".join(row) + " |\n" for row in rows)
    return text[: found.start(2)] + new + text[found.end(2) :]


def printed(command: str) -> str:
    """Give what a command prints at the root, without colour."""
    out = io.StringIO()
    with contextlib.redirect_stdout(out):
        main(shlex.split(command)[1:])
    return out.getvalue()


def with_blocks(text: str, cut: Callable[[list[str]], list[str]]) -> str:
    """Put new texts into the fenced blocks of text."""
    found = list(re.finditer(r"^```text\n(.*?)^```$", text, re.M | re.S))
    new = cut([block[1] for block in found])
    for block, body in reversed(list(zip(found, new, strict=True))):
        text = text[: block.start(1)] + body.rstrip("\n") + "\n" + text[block.end(1) :]
    return text


def readme_blocks(old: list[str]) -> list[str]:
    """The head of the first report, and the section of its first condition."""
    out = printed("enclosure-check check sample_boards/wall_sensor_hub.yaml")
    head, section = old
    title = section.partition("\n")[0].partition(":")[0]
    start = out.index(f"\n\n{title}: ") + 2
    last = section.rstrip("\n").rpartition("\n")[2]
    return [
        "\n".join(out.split("\n")[: head.count("\n")]),
        out[start : out.index(last, start)] + last,
    ]


def explain_block(command: str) -> Callable[[list[str]], list[str]]:
    """The tree of an explained part."""

    def cut(old: list[str]) -> list[str]:
        paragraphs = printed(command).split("\n\n")
        return ["\n\n".join(paragraphs[2 : 2 + old[0].rstrip("\n").count("\n\n") + 1])]

    return cut


def record() -> None:
    """Write all pages anew."""
    os.chdir(ROOT)
    for name in ("NO_COLOR", "FORCE_COLOR"):
        os.environ.pop(name, None)
    pages = {name: Path(name).read_text("utf-8") for name, *_ in TABLES}
    pages["docs/explain.md"] = Path("docs/explain.md").read_text("utf-8")
    for name, head, rows in TABLES:
        pages[name] = with_table(pages[name], head, rows())
    (command,) = re.findall(r"^```sh\n(.*?)\n```$", pages["docs/explain.md"], re.M | re.S)
    pages["docs/explain.md"] = with_blocks(pages["docs/explain.md"], explain_block(command))
    pages["README.md"] = with_blocks(pages["README.md"], readme_blocks)
    pages["docs/evidence.md"] = evidence.evidence_page()
    for name, text in pages.items():
        Path(name).write_text(text, "utf-8")


if __name__ == "__main__":
    record()
