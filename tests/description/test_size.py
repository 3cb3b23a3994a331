"""What is too large for a stranger's document, and how it is allowed."""

import pytest
from support.hanging import ends

from enclosure_check.cli import main
from enclosure_check.description.load import load_document
from enclosure_check.description.problems import DocumentError
from enclosure_check.description.size import MOST_POINTS, points

TOP = """\
title: Large
defaults: {wall: {material: abs, thickness_mm: 2, finish_outside: white_paint}}
box: {width_mm: 500, height_mm: 500, depth_mm: 200}
surroundings: {air_c: 30}
boards: {b: {parallel_to: back, length_mm: 480, width_mm: 480}}
"""


def parts(count: int, place: str = "b, side: front") -> str:
    rows = "".join(
        f"  P{i}: {{place: {place}, at_mm: [{5 + i % 100 * 4}, {5 + i // 100 * 4}], length_mm: 2, "
        "width_mm: 2, height_mm: 1}\n"
        for i in range(count)
    )
    return f"parts:\n{rows}"


def conditions(count: int) -> str:
    return "conditions:\n" + "".join(f"  c{i}: {{}}\n" for i in range(count))


def test_points(tmp_path):
    path = tmp_path / "box.yaml"
    path.write_text(TOP + parts(40))
    assert points(load_document(str(path)).cases()[0]) == 10 + 20 + 40 + 40 * 40 / 200


def test_more_than_a_run_may_take_is_refused_with_ways_out(tmp_path, capsys):
    path = tmp_path / "box.yaml"
    path.write_text(TOP + parts(100) + conditions(20))
    with ends():
        assert main(["check", str(path)]) == 2
    said = capsys.readouterr().err
    assert f"count 3600 points, allowed: {MOST_POINTS}" in said
    assert "--condition" in said
    assert "--large" in said


def test_fewer_conditions_or_a_word_of_trust_are_ways_out(tmp_path, capsys):
    path = tmp_path / "box.yaml"
    path.write_text(TOP + parts(10) + conditions(45))
    assert main(["check", str(path)]) == 2
    assert main(["check", str(path), "--condition", "c7"]) == 0
    assert main(["check", str(path), "--large", "--quiet"]) == 0


@pytest.mark.parametrize(
    ("more", "message"),
    [
        (
            parts(201),
            "201 parts make 40401 pairs on their boards, allowed: 40000 (200 parts on one",
        ),
        (
            parts(75, "front") + parts(75, "back").replace("P", "Q").replace("parts:", ""),
            "",
        ),
    ],
)
def test_one_case_too_large(tmp_path, capsys, more, message):
    path = tmp_path / "box.yaml"
    path.write_text(TOP + more)
    refused = main(["check", str(path), "--quiet"]) == 2
    assert refused is bool(message)
    assert message in capsys.readouterr().err


@pytest.mark.parametrize(
    ("more", "message"),
    [
        (parts(5001), "parts: given a mapping, allowed: a mapping by name of 0 to 5000 entries"),
        (parts(101) + conditions(100), "101 parts in 100 combinations"),
        (
            "tolerances: {" + ", ".join(f'"*.*.x{i}": {{pct: 3}}' for i in range(51)) + "}\n",
            "0 to 50 entries",
        ),
    ],
)
def test_documents_too_large_to_load(tmp_path, more, message):
    path = tmp_path / "box.yaml"
    path.write_text(TOP + more)
    with pytest.raises(DocumentError) as caught:
        load_document(str(path))
    (problem,) = caught.value.problems
    assert message in str(problem)


def test_many_misspelt_names_are_told_quickly(tmp_path):
    path = tmp_path / "box.yaml"
    types = ", ".join(f"kind_{i:04d}: {{}}" for i in range(900))
    rows = "".join(f"  P{i}: {{place: left, type: kynd_{i}}}\n" for i in range(3000))
    path.write_text(f"{TOP}part_types: {{{types}}}\nparts:\n{rows}")
    with ends(), pytest.raises(DocumentError) as caught:
        load_document(str(path))
    assert any("stopped here" in str(each) for each in caught.value.problems)
