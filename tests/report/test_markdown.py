"""Markdown for a review thread: read back with an independent parser, names in code spans only."""

from dataclasses import replace

import pytest
from markdown_it import MarkdownIt
from support.gate import EVIL, EVIL_RUN, LOST_RUN, MARGINAL, PLAIN_RUN, with_errors

from enclosure_check.report.markdown import MOST_CHARACTERS, code, write_markdown
from enclosure_check.report.options import WriterOptions

PARSER = MarkdownIt("commonmark").enable(["table", "strikethrough"])
# What a report is made of; links, pictures, HTML and code blocks are not.
BLOCKS = {"heading", "paragraph", "table", "thead", "tbody", "tr", "th", "td", "bullet_list"}
INLINE = {"text", "code_inline", "strong", "em"}


def read(run) -> str:
    return write_markdown(run, WriterOptions())


def kinds(tokens) -> set[str]:
    return {token.type.removesuffix("_open").removesuffix("_close") for token in tokens}


def inner(text: str):
    return [child for token in PARSER.parse(text) for child in token.children or ()]


def rows(text: str) -> list[list[list[str]]]:
    """Tables as rows of cells, each as its text."""
    tables, cell = [], None
    for token in PARSER.parse(text):
        if token.type == "table_open":
            tables.append([])
        elif token.type == "tr_open":
            tables[-1].append([])
        elif token.type in ("th_open", "td_open"):
            cell = []
        elif token.type == "inline" and cell is not None:
            cell.append("".join(child.content for child in token.children))
        elif token.type in ("th_close", "td_close"):
            tables[-1][-1].append("".join(cell))
            cell = None
    return tables


@pytest.mark.parametrize("make", [PLAIN_RUN, LOST_RUN, EVIL_RUN, with_errors])
def test_structure(make, tmp_path):
    text = read(make(tmp_path))
    assert kinds(PARSER.parse(text)) <= {*BLOCKS, "list_item", "inline"}
    assert kinds(inner(text)) <= INLINE
    for table in rows(text):
        assert len({len(row) for row in table}) == 1
        assert len(table) > 1


def test_verdict_and_limits_that_are_passed(tmp_path):
    text = read(PLAIN_RUN(tmp_path))
    assert text.startswith("### Enclosure temperatures\n\n1 document: 1 **FAIL**.\n")
    documents, limits = rows(text)
    assert documents[1][:2] == ["box.yaml", "FAIL"]
    assert documents[1][3:] == ["X1 case max", "hot"]
    assert [row[:2] for row in limits[1:]] == [["X1 case max", "hot"]]
    assert limits[1][5] == "FAIL"
    assert "Computed, not measured" in text


def test_what_passes_is_short(tmp_path):
    run = MARGINAL(tmp_path, True)
    report = replace(
        run.documents[0],
        verdict="pass",
        conditions=tuple(
            replace(c, parts=tuple(replace(p, verdict="pass") for p in c.parts))
            for c in run.documents[0].conditions
        ),
    )
    text = read(replace(run, documents=(report,)))
    assert len(rows(text)) == 1
    assert "####" not in text


def test_marginal_is_shown(tmp_path):
    assert rows(read(MARGINAL(tmp_path, True)))[1][1][5] == "MARGINAL"


def test_changes_against_a_baseline(tmp_path):
    text = read(LOST_RUN(tmp_path))
    documents, changes = rows(text)
    assert documents[0][-1] == "Baseline"
    assert documents[1][-1].endswith(" LOST")
    assert changes[1][0] == "X1 case max"
    assert changes[1][-1].endswith("LOST")
    for words in (
        "**LOST** more than allowed",
        "Against `main.json`: WORSE: ",
        "Conditions added: `new`.",
        "Conditions removed, or not checked now: `cool`.",
        "Parts removed: `X2`.",
        "- `parts.X1.power_w`: `1.5 -> 2`",
    ):
        assert words in text


def test_errors_are_listed(tmp_path):
    text = read(with_errors(tmp_path))
    assert "2 **WITHOUT AN ANSWER**" in text
    assert "`wrong.yaml:3:7: box.width_mm: given 'wide', allowed: a number`" in text


def test_names_stand_in_code_spans_only(tmp_path):
    text = read(EVIL_RUN(tmp_path))
    plain = "".join(child.content for child in inner(text) if child.type == "text")
    for name in EVIL:
        if name.strip():
            assert name.strip() not in plain
    assert set(plain).isdisjoint("@<&#[`|\\{$~")
    assert not [char for char in text if not char.isprintable() and char != "\n"]
    spans = {child.content for child in inner(text) if child.type == "code_inline"}
    assert any("<script>alert(1)</script>" in span for span in spans)
    assert any("@everyone #1 **bold**" in span for span in spans)


@pytest.mark.parametrize("name", [*EVIL, "`", "a`b``c", " x ", "", "\\", "x" * 500, "電" * 300])
def test_a_code_span_holds_its_name_in_text_and_table(name):
    span = code(name)
    if not name.strip():
        assert span == "-"
        return
    (child,) = inner(span)
    assert child.type == "code_inline"
    table = f"| a | b |\n| --- | --- |\n| {span} | end |\n"
    ((_, row),) = rows(table)
    assert row == [child.content, "end"]
    assert len(span) < 120


def test_it_fits_a_comment(tmp_path):
    run = PLAIN_RUN(tmp_path)
    (report,) = run.documents
    first, *others = report.conditions
    parts = tuple(replace(first.parts[0], name=f"{i}" + "x" * 200) for i in range(200))
    report = replace(report, conditions=(replace(first, parts=parts), *others))
    text = read(replace(run, documents=(report,) * 200))
    assert 20_000 < len(text) < MOST_CHARACTERS + 1000
    assert "more sections left out for length." in text
    assert "and 150 more documents" in text
    assert "Computed, not measured" in text


def test_the_same_bytes_every_time(tmp_path):
    texts = {read(LOST_RUN(tmp_path)) for _ in range(2)}
    assert len(texts) == 1
    assert str(tmp_path) not in texts.pop()
