"""The text and the JSON that explain a part."""

import json
import re
from pathlib import Path

import pytest
from jsonschema import Draft202012Validator
from support.explained import DOCUMENT
from support.reports import SMALL, report_of, write_document

from enclosure_check.check import check_and_explain
from enclosure_check.description.load import load_document
from enclosure_check.records import replace
from enclosure_check.report.explain import write_explanation
from enclosure_check.report.json_report import write_json
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.schema import report_schema

CASE = Path(__file__).parents[1] / "cli" / "cases" / "explain" / "box.yaml"


@pytest.fixture(scope="module")
def report(tmp_path_factory):
    path = write_document(tmp_path_factory.mktemp("explained"), DOCUMENT)
    return check_and_explain(load_document(str(path)), "U1")


@pytest.fixture(scope="module")
def text(report):
    return write_explanation(report, WriterOptions())


def tree_lines(text):
    lines = text.splitlines()
    start = next(n for n, line in enumerate(lines) if line.endswith("1 K: R"))
    return lines[start : lines.index("", start)]


@pytest.mark.parametrize("width", [80, 97, 140])
def test_lines_fit_and_are_plain(report, width):
    lines = write_explanation(report, WriterOptions(width=width, encoding="ascii")).splitlines()
    assert max(map(len, lines)) <= width
    assert all(line.isascii() and line.isprintable() and line == line.rstrip() for line in lines)


def test_colour_changes_no_word(report, text):
    painted = write_explanation(report, WriterOptions(colour=True))
    assert painted != text
    assert re.sub(r"\x1b\[[0-9;]*m", "", painted) == text


def test_a_line_for_every_step(report, text):
    _, root, *lines = tree_lines(text)
    assert len(lines) == len(report.explain.tree)
    assert root.split() == ["U1", "junction", f"{report.explain.temperature_c:.1f}"]
    for line, step in zip(lines, report.explain.tree, strict=True):
        link = report.explain.links[step.link]
        name = link.start if step.inward else link.end
        assert line[2 * step.depth :].startswith(("+-", "<-"))
        assert (f"({link.way})" if link.start == link.end else f"{name}: {link.way}") in line
        assert ("^" in line) == step.again
        if link.one_kelvin_resistance_pct is not None:
            assert line.endswith(f"{link.one_kelvin_resistance_pct:+.0f} %")


def test_columns_line_up(text):
    head, *lines = tree_lines(text)
    ends = [match.end() for match in re.finditer(r"\S+(?: K: R)?", head)]
    for line in lines:
        for number in re.finditer(r"(?<=  )-?[\d.<e-]+(?=  |$)", line):
            assert number.end() in ends, line


def test_branches_hang_together(text):
    above = ""
    for line in tree_lines(text)[2:]:
        for place, char in enumerate(line):
            if char not in "|+<" or line[:place].strip("| "):
                break
            if char == "|":
                assert above[place : place + 1] in ("|", "+"), (above, line)
        above = line


def test_every_mark_has_its_law(text):
    marks = {
        int(number)
        for group in re.findall(r"\[([\d,!]+)\]", "\n".join(tree_lines(text)))
        for number in re.findall(r"\d+", group)
    }
    told = {int(number) for number in re.findall(r"^  \[(\d+)\] ", text, re.MULTILINE)}
    assert marks == told == set(range(1, len(told) + 1))


def test_laws_outside_their_range_are_marked_and_told():
    # A box so small that its top leaves the range of the law of level plates.
    report = check_and_explain(load_document(str(CASE)), "U1")
    text = write_explanation(report, WriterOptions())
    shown = [report.explain.links[step.link] for step in report.explain.tree]
    outside = {law.key for link in shown for law in link.laws if law.inside_range is False}
    assert outside, "the document no longer leaves any range"
    one_line = " ".join(text.split())
    for key in outside:
        assert re.search(rf"\({key}\)[^\[]*outside its range", one_line), key
    assert ("!]" in text) or ("!," in text)


def test_wide_places_get_the_conductance_too(report, text):
    wide = write_explanation(report, WriterOptions(width=140))
    assert "W/K" not in tree_lines(text)[0]
    titles = next(line for line in wide.splitlines() if "1 K: R" in line)
    assert titles.endswith("W/K")


def test_what_heats_it_is_told_most_first(text):
    section = text.partition("What heats it")[2]
    adds = [float(x) for x in re.findall(r"^  \S.*?\d +(-?[\d.]+) +[\d.]+ +\S+$", section, re.M)]
    assert len(adds) > 3
    assert adds == sorted(adds, reverse=True)


def test_the_caution_stands_below(report, text):
    assert " ".join(text.split()).endswith(" ".join(report.caution.split()))


def test_names_do_nothing_to_the_page(tmp_path):
    name = "Ü1 [1m電"
    document = {**SMALL, "parts": {name: SMALL["parts"]["X1"]}}
    found = check_and_explain(load_document(str(write_document(tmp_path, document))), name)
    shown = write_explanation(found, WriterOptions(encoding="ascii"))
    assert shown.isascii()
    assert "\\xdc1 [1m\\u96fb under base" in shown
    assert max(map(len, shown.splitlines())) <= 80


def test_a_report_that_explains_nothing_is_refused(tmp_path, report):
    for empty in (report_of(tmp_path), replace(report, explain=None)):
        with pytest.raises(ValueError, match="explains no part"):
            write_explanation(empty, WriterOptions())


def test_nothing_passes(tmp_path):
    still = {**SMALL, "parts": {"X1": {**SMALL["parts"]["X1"], "power_w": 0}}}
    found = check_and_explain(load_document(str(write_document(tmp_path, still))), "X1")
    shown = write_explanation(found, WriterOptions())
    assert "No heat to speak of passes it." in shown
    assert "Caution" in shown


# JSON ---------------------------------------------------------------------------------------


def test_json_holds_the_explanation_and_fits_the_schema(report):
    data = json.loads(write_json(report, WriterOptions()))
    schema = report_schema()
    assert list(Draft202012Validator(schema).iter_errors(data)) == []
    assert data["explain"]["part"] == "U1"
    assert len(data["explain"]["links"]) == len(report.explain.links)
    data["explain"]["links"][0]["laws"] = None
    assert list(Draft202012Validator(schema).iter_errors(data)) != []


def test_a_plain_check_says_nothing_of_it(tmp_path):
    data = json.loads(write_json(report_of(tmp_path), WriterOptions()))
    assert "explain" not in data
    assert "explain" not in report_schema()["required"]
