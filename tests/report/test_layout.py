import pytest

from enclosure_check.report.layout import (
    Cell,
    Column,
    Page,
    Shown,
    cells_of,
    clean,
    counted,
    cut,
    digits,
    listed,
    right,
    tenths,
    watts,
    wrapped,
)
from enclosure_check.report.options import WriterOptions


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (0.0, "0.0"),
        (-0.04, "0.0"),
        (-0.06, "-0.1"),
        (45.65, "45.6"),
        (99.96, "100.0"),
        (-15, "-15.0"),
    ],
)
def test_tenths(value, shown):
    assert tenths(value) == shown


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (0.0, "0"),
        (9.9e-7, "0"),
        (-9.9e-7, "0"),
        (1.26e-6, "1e-06"),
        (-0.00026, "-3e-04"),
        (0.0123456, "0.0123"),
        (-0.0123456, "-0.0123"),
        (0.5, "0.500"),
        (1.256, "1.26"),
        (9.996, "10.0"),
        (99.94, "99.9"),
        (99.96, "100"),
        (1234.5, "1234"),
        (123456.0, "123456"),
    ],
)
def test_watts(value, shown):
    assert watts(value) == shown


def test_digits_of_nothing():
    assert digits(0.0) == "0.00"


@pytest.mark.parametrize(
    ("given", "shown"),
    [
        ("plain text", "plain text"),
        ("\x1b[31mred\x1b[0m", "\\x1b[31mred\\x1b[0m"),
        ("a\nb\tc\rd\x07", "a\\nb\\tc\\rd\\x07"),
        ("\x9b31m", "\\x9b31m"),
        ("\u202eabc\u2028", "\\u202eabc\\u2028"),
        ("\ud800", "\\ud800"),
        ("Größe 電源", "Größe 電源"),
    ],
)
def test_clean_leaves_nothing_a_terminal_obeys(given, shown):
    assert clean(given, "utf-8") == shown


def test_clean_escapes_what_the_encoding_lacks():
    assert clean("Größe 電", "latin-1") == "Größe \\u96fb"
    assert clean("Größe", "ascii") == "Gr\\xf6\\xdfe"
    assert clean("Größe", "no such encoding") == "Gr\\xf6\\xdfe"


def test_cells_of_wide_and_combining_characters():
    assert cells_of("abc") == 3
    assert cells_of("電源") == 4
    assert cells_of("e\u0301") == 1


@pytest.mark.parametrize(
    ("text", "width", "shown"),
    [
        ("abcdef", 6, "abcdef"),
        ("abcdefg", 6, "abc..."),
        ("電源電源", 8, "電源電源"),
        ("電源電源電", 8, "電源..."),
        ("abc", 2, ".."),
        ("abc", 0, ""),
    ],
)
def test_cut(text, width, shown):
    assert cut(text, width) == shown
    assert cells_of(shown) <= width


def test_wrapped_keeps_the_width_and_all_words():
    text = (
        "one two three four five six seven eight nine ten "
        + "x" * 50
        + " 電源電源電源電源電源電源電源 end"
    )
    lines = wrapped(text, 20, "- ", "  ")
    assert lines[0].startswith("- one two")
    assert all(line.startswith("  ") for line in lines[1:])
    assert all(cells_of(line) <= 20 for line in lines)
    assert "".join("".join(line[2:].split()) for line in lines) == "".join(text.split())


def test_wrapped_of_nothing_is_one_line():
    assert wrapped("", 20, "- ") == ["- "]


@pytest.mark.parametrize(("number", "shown"), [(0, "0 steps"), (1, "1 step"), (2, "2 steps")])
def test_counted(number, shown):
    assert counted(number, "step") == shown


def test_listed():
    assert listed(["a", "b"], 2) == "a, b"
    assert listed(["a", "b", "c", "d"], 2) == "a, b and 2 more"


def page(width=40, colour=False):
    return Page(WriterOptions(width=width, colour=colour))


COLUMNS = [Column("Name", yields=True), right("Value"), Column("Word")]


def test_table_lines_up():
    sheet = page()
    sheet.table(COLUMNS, [["a", "1.0", "pass"], ["long name", "-12.5", "FAIL"]])
    assert sheet.text() == (
        "  Name       Value  Word\n  a            1.0  pass\n  long name  -12.5  FAIL\n"
    )


def test_table_cuts_the_column_that_yields():
    sheet = page(width=30)
    sheet.table(COLUMNS, [["x" * 60, "123456.0", "MARGINAL"]])
    assert sheet.lines == ["  Name         Value  Word", "  xxxxx...  123456.0  MARGINAL"]


@pytest.mark.parametrize("width", [24, 26, 28])
def test_table_gives_up_gaps_before_it_is_too_wide(width):
    sheet = page(width=width)
    sheet.table(COLUMNS, [["x" * 60, "-123456.0", "MARGINAL"]])
    assert all(len(line) <= width for line in sheet.lines)
    assert sheet.lines[0].startswith("  ") == (width == 28)
    assert all(word in sheet.text() for word in ("-123456.0", "MARGINAL"))


def test_records_leave_out_a_column_nobody_wants():
    shown = [
        Shown[float](right("Always"), str),
        Shown[float](right("Sun"), lambda value: f"sun {value}", lambda value: value > 2),
    ]
    sheet = page()
    sheet.records(shown, [1.0, 2.0])
    assert "Sun" not in sheet.text()
    sheet.records(shown, [1.0, 3.0])
    assert "sun 1.0" in sheet.text()


def test_user_text_in_a_table_is_cleaned():
    sheet = page()
    sheet.table([Column("Name")], [["\x1b[2Jgone"], [Cell("\x1b[2Jgone", "fail")]])
    assert "\x1b" not in sheet.text()


def test_colour_only_adds_to_the_words():
    plain, coloured = page(), page(colour=True)
    for sheet in (plain, coloured):
        sheet.heading("Heading")
        sheet.table(
            COLUMNS, [["a", "1.0", Cell("FAIL", "fail")], ["b", "2.0", Cell("pass", "pass")]]
        )
    assert "\x1b[38;5;160;1mFAIL\x1b[0m" in coloured.text()
    import re

    assert re.sub(r"\x1b\[[0-9;]*m", "", coloured.text()) == plain.text()
    assert "\x1b" not in plain.text()


def test_gap_is_one_empty_line_and_none_at_the_top():
    sheet = page()
    sheet.gap()
    sheet.heading("a")
    sheet.gap()
    sheet.gap()
    sheet.heading("b")
    assert sheet.text() == "a\n\nb\n"
