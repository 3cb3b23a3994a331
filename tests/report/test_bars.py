"""Bars of margins: they read without colour, keep their limit in line and their scale."""

from types import SimpleNamespace

import pytest
from support.reports import SMALL, report_of, with_condition

from enclosure_check.records import replace
from enclosure_check.report.bars import NARROWEST, STEPS_K, WIDEST, Scale, bar, legend, scale_of
from enclosure_check.report.layout import STYLES
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import write_text


def row(margin, band=None):
    return SimpleNamespace(margin_k=margin, band_k=band)


@pytest.mark.parametrize(
    ("margin", "band", "drawn"),
    [
        (0.0, None, "    |"),
        (5.0, None, "    |#####"),
        (-3.0, None, " !!!|"),
        (5.0, 2.0, "    |###----"),
        (1.0, 3.0, "  --|----"),
        (-3.0, 1.0, "--!!|"),
        (12.0, None, "    |#####>"),
        (-9.0, None, "<!!!|"),
        (-0.1, None, "   !|"),
        (0.3, None, "    |"),
        (5.4, 0.0, "    |#####"),
    ],
)
def test_bars_by_hand(margin, band, drawn):
    assert bar(row(margin, band), Scale(1, 4, 6 if margin == 12.0 else 10)) == drawn


@pytest.mark.parametrize("width", [NARROWEST, 15, WIDEST, 100])
@pytest.mark.parametrize("band", [None, 4.0])
@pytest.mark.parametrize(
    "margins", [(11.4, 13.3, 50.0, 81.0), (-63.0, 3.0), (-200.0, -100.0), (0.0,)]
)
def test_every_bar_fits_and_limits_stand_in_line(margins, band, width):
    rows = [row(margin, band) for margin in margins]
    scale = scale_of(rows, width)
    assert scale.step_k in STEPS_K
    drawn = [bar(each, scale) for each in rows]
    assert max(map(len, drawn)) <= min(width, WIDEST)
    assert {each.index("|") for each in drawn} == {scale.before}
    for each in drawn:
        assert each.isascii()
        assert all(mark in "|#!-<> " for mark in each)


def test_the_scale_is_that_of_the_small_margins():
    assert scale_of([row(9.0), row(10.0), row(500.0)], 15).step_k == 1
    assert scale_of([row(20.0), row(500.0)], 15).step_k == 2
    assert scale_of([row(400.0), row(500.0)], 15).step_k == 5
    assert scale_of([row(-6.0), row(10.0), row(12.0)], 15).step_k == 2


def test_no_bars_where_there_is_no_room():
    assert scale_of([row(5.0)], NARROWEST - 1) is None
    assert scale_of([], 40) is None


def test_a_longer_bar_is_a_larger_margin():
    margins = [-30.0, -12.0, -4.0, 4.0, 12.0, 30.0]
    scale = scale_of([row(each) for each in margins], 30)
    ends = []
    for each in margins:
        drawn = bar(row(each), scale)
        ends.append(drawn.count("#") + drawn.count(">") - drawn.count("!") - drawn.count("<"))
    assert ends == sorted(ends)
    assert ends[0] < 0 < ends[-1]


def test_the_legend_tells_what_is_there_only():
    rows = [row(5.0), row(3.0)]
    assert legend(rows, scale_of(rows, 20)) == "| the limit, # kept to it"
    rows = [row(-5.0, 1.0), row(300.0, 1.0)]
    assert legend(rows, scale_of(rows, 20)) == (
        "| the limit, # kept to it, ! past it, - its band, > more"
    )


# In the report ------------------------------------------------------------------------------


@pytest.fixture
def report(tmp_path):
    return report_of(tmp_path)


@pytest.mark.parametrize("width", [80, 100, 140])
def test_the_table_of_limits_has_them(report, width):
    text = write_text(report, WriterOptions(width=width))
    head = next(line for line in text.splitlines() if "Limit at" in line)
    assert "K" in head.partition("# = ")[2]
    (line,) = (line for line in text.splitlines() if line.startswith("  X1 ") and "case" in line)
    assert line.index("|") == head.index("# = ")
    assert len(line) <= width
    assert "Bars: | the limit, # kept to it" in text


def test_a_margin_past_its_limit_reads_without_colour(report):
    (part,) = report.conditions[0].parts
    failed = with_condition(report, parts=(replace(part, margin_k=-12.0, verdict="fail"),))
    (line,) = (
        line
        for line in write_text(failed, WriterOptions()).splitlines()
        if line.startswith("  X1 ") and "FAIL" in line
    )
    assert "!|" in line
    assert "#" not in line


def test_a_long_name_comes_before_the_bars(tmp_path):
    document = {**SMALL, "parts": {"a part with a name of many words " * 2: SMALL["parts"]["X1"]}}
    text = write_text(report_of(tmp_path, document), WriterOptions())
    assert "# = " not in text
    assert "Bars:" not in text


# Colours ------------------------------------------------------------------------------------


def colour(index):
    """A colour of the fixed cube of 216, by its number (xterm)."""
    steps = (0, 95, 135, 175, 215, 255)
    place = index - 16
    return steps[place // 36], steps[place // 6 % 6], steps[place % 6]


def luminance(rgb):
    """Relative luminance as of the Web Content Accessibility Guidelines 2 (W3C)."""
    linear = [
        c / 255 / 12.92 if c / 255 <= 0.03928 else ((c / 255 + 0.055) / 1.055) ** 2.4 for c in rgb
    ]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


@pytest.mark.parametrize("style", ["pass", "marginal", "fail"])
def test_colours_read_on_dark_and_light(style):
    start, index = STYLES[style].split(";")[:2], int(STYLES[style].split(";")[2])
    assert start == ["38", "5"]
    own = luminance(colour(index))
    # Of 21 : 1 for black on white; the guidelines ask for 3 : 1 of large text and of marks.
    assert 1.05 / (own + 0.05) > 3.8
    assert (own + 0.05) / 0.05 > 3.8
