"""The text report: what it says, to whom it says it, and that nothing breaks its lines."""

import re
from dataclasses import replace

import pytest
from support.reports import SAMPLES, SMALL, report_of, with_condition

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings.results import (
    BoardFinding,
    HandEstimate,
    Headroom,
    PartFinding,
    Report,
)
from enclosure_check.report.condition import (
    BOTH_SHOWN_K,
    MOST_LIMITS,
    headroom_words,
    nearer_limits,
)
from enclosure_check.report.heat import MOST_HEAT_ROWS, hand_words
from enclosure_check.report.layout import cells_of
from enclosure_check.report.limits import limits_of, worst_first
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.text import shared_assumptions, write_text

SAMPLE_IDS = [path.stem for path in SAMPLES]


@pytest.fixture(scope="module")
def small(tmp_path_factory) -> Report:
    return report_of(tmp_path_factory.mktemp("small"))


@pytest.fixture(scope="module", params=SAMPLES, ids=SAMPLE_IDS)
def sample(request) -> Report:
    return check(load_document(str(request.param)))


def flat(text: str) -> str:
    """The text on one line, however it was wrapped."""
    return " ".join(text.split())


def written(report: Report, **options) -> str:
    return write_text(report, WriterOptions(**options))


@pytest.mark.parametrize("width", [80, 100, 140])
def test_no_line_is_too_long_and_none_ends_in_blanks(sample, width):
    lines = written(sample, width=width).splitlines()
    assert max(map(cells_of, lines)) <= width
    assert not [line for line in lines if line != line.rstrip()]


def test_plain_ascii_without_colour(sample):
    assert written(sample).isascii()
    assert "\x1b" not in written(sample)


def test_says_nothing_a_reader_cannot_use(sample):
    assert not re.search(r"\bnan\b|\binf\b|None|np\.|\bnull\b|-0\.0\b", written(sample))


def test_first_screen_answers(sample):
    screen = "\n".join(written(sample).splitlines()[:24])
    assert sample.title in screen
    assert re.search(r"^(PASS|MARGINAL|FAIL): ", screen, re.MULTILINE)
    for condition in sample.conditions:
        assert re.search(rf"^  {condition.name} +(pass|MARGINAL|FAIL) ", screen, re.MULTILINE)


def test_every_part_limit_is_shown_or_counted(sample):
    text = written(sample)
    for condition in sample.conditions:
        section = text[text.index(f"\n{condition.name}: ") :]
        near = nearer_limits(condition.parts)
        hidden = len(near) - MOST_LIMITS
        rows = [f"{part.limit_kind} {part.limit_side}" for part in near[:MOST_LIMITS]]
        lines = section[section.index("Parts against") :].splitlines()[2 : 2 + len(rows)]
        assert [re.split(r"  +", line.strip())[1] for line in lines] == rows
        if hidden > 0:
            assert f"and {hidden} more with margins of" in section
        # Every point that has a limit keeps one, the nearer.
        points = {(part.name, part.limit_kind) for part in condition.parts}
        assert {(part.name, part.limit_kind) for part in near} == points
        left_out = len(condition.parts) - len(near)
        assert f"not shown: the farther limit of {left_out} point" in section


def two_sided(high: float, low: float, verdicts=("pass", "pass")) -> tuple[PartFinding, ...]:
    rows = part(high, verdicts[0]), part(low, verdicts[1], side="min")
    return tuple(sorted(rows, key=lambda row: row.margin_k))


@pytest.mark.parametrize(
    ("high", "low", "verdicts", "sides"),
    [
        (10.0, 90.0, ("pass", "pass"), ["max"]),
        (90.0, 10.0, ("pass", "pass"), ["min"]),
        (BOTH_SHOWN_K, 3.0, ("pass", "pass"), ["min", "max"]),
        (BOTH_SHOWN_K + 0.1, 3.0, ("pass", "pass"), ["min"]),
        (40.0, 60.0, ("pass", "pass"), ["max"]),
        # What does not pass is shown however far.
        (20.0, 30.0, ("marginal", "marginal"), ["max", "min"]),
        (-3.0, 200.0, ("fail", "pass"), ["max"]),
    ],
)
def test_the_farther_of_two_limits_is_left_out(small, high, low, verdicts, sides):
    rows = two_sided(high, low, verdicts)
    assert [row.limit_side for row in nearer_limits(rows)] == sides
    text = written(with_condition(small, parts=rows))
    assert ("not shown: the farther limit of 1 point\n" in text) == (len(sides) == 1)


def test_sections_come_worst_first(sample):
    text = written(sample)
    places = [text.index(f"\n{each.name}: ") for each in worst_first(sample.conditions)]
    assert places == sorted(places)


def test_assumptions_of_every_condition_are_shown_once(sample):
    text = flat(written(sample))
    for line in shared_assumptions(sample.conditions):
        assert text.count(flat(line)) == 1


def test_assumptions_of_one_condition_are_shown_there(tmp_path):
    document = {
        **SMALL,
        "conditions": {"one": {}, "two": {"surroundings": {"radiant_c": 20}}},
    }
    text = written(report_of(tmp_path, document))
    sections = {name: text[text.index(f"\n{name}: ") :] for name in ("one", "two")}
    first, last = sorted(sections, key=lambda name: -len(sections[name]))
    own = sections[first][: sections[first].index(f"\n{last}: ")]
    assert ("radiant surroundings" in own) == (first == "one")
    assert text.count("radiant surroundings are as warm as the air") == 1
    assert text.count("Assumed here") == 1


def test_caution_is_the_last_word_but_for_the_version(sample):
    text = written(sample)
    assert flat(text).endswith(
        f"{flat(sample.caution)} enclosure-check {sample.version}; the document's SHA-256: "
        f"{sample.digest}"
    )
    assert text.count("Caution") == 1


# Headlines --------------------------------------------------------------------------------


def part(margin: float, verdict: str, name: str = "X1", side: str = "max") -> PartFinding:
    return PartFinding(name, "case", side, 50.0, None, 60.0, False, margin, verdict, 30.0, None, ())


def with_verdicts(report: Report, *verdicts: str, wanted: float = 0.0) -> Report:
    """One condition per verdict, named after it."""
    margins = {"pass": 10.0, "marginal": 1.0, "fail": -2.0}
    first = report.conditions[0]
    conditions = tuple(
        replace(
            first,
            name=f"{verdict}_{place}",
            verdict=verdict,
            parts=(part(margins[verdict], verdict),),
            headroom=replace(first.headroom, wanted_margin_k=wanted),
        )
        for place, verdict in enumerate(verdicts)
    )
    worst = max(verdicts, key=("pass", "marginal", "fail").index)
    return replace(report, conditions=conditions, verdict=worst)


@pytest.mark.parametrize(
    ("verdicts", "wanted", "said"),
    [
        (("pass",), 0.0, "PASS: every limit is kept. Smallest margin 10.0 K: X1 case max."),
        (("pass",), 5.0, "PASS: every limit is kept with the 5.0 K wanted. "),
        (("pass", "pass"), 0.0, "PASS: every limit is kept under all 2 conditions. "),
        (
            ("pass", "marginal"),
            5.0,
            "MARGINAL: inside every limit, but closer than the 5.0 K wanted under 1 of 2 "
            "conditions: marginal_1. Smallest margin 1.0 K: X1 case max under marginal_1.",
        ),
        (
            ("pass", "fail", "marginal"),
            5.0,
            "FAIL: past a limit under 1 of 3 conditions: fail_1. Smallest margin -2.0 K: X1 case "
            "max under fail_1.",
        ),
        (
            ("fail",) * 6 + ("pass",),
            0.0,
            "FAIL: past a limit under 6 of 7 conditions: fail_0, fail_1, fail_2, fail_3 and 2 "
            "more. ",
        ),
    ],
)
def test_headline(small, verdicts, wanted, said):
    assert said in flat(written(with_verdicts(small, *verdicts, wanted=wanted)))


def test_headline_without_any_limit(small):
    report = with_condition(small, parts=())
    assert "PASS: no limit is stated, so there was nothing to fail." in flat(written(report))


def test_a_wall_that_is_too_hot_to_touch_is_the_worst_limit(small):
    walls = tuple(
        replace(wall, touch_max_c=30.0, touch_margin_k=-3.0, touch_verdict="fail")
        if wall.name == "top"
        else wall
        for wall in small.conditions[0].walls
    )
    report = replace(with_condition(small, walls=walls, verdict="fail"), verdict="fail")
    text = written(report)
    assert limits_of(report.conditions[0])[0].label == "top wall touch"
    assert "Smallest margin -3.0 K: top wall touch." in text
    assert re.search(r"^  top .* -3\.0 FAIL$", text, re.MULTILINE)
    assert re.search(r"^  left .* -$", text, re.MULTILINE)


def test_all_failing_limits_are_shown_however_many(small):
    rows = tuple(part(-50.0 + n, "fail", f"P{n}") for n in range(40))
    rows += tuple(part(5.0 + n, "pass", f"Q{n}") for n in range(20))
    text = written(with_condition(small, parts=rows))
    assert all(re.search(rf"^  P{n} .* FAIL ", text, re.MULTILINE) for n in range(40))
    assert "  Q0 " not in text
    assert "and 20 more with margins of 5.0 K and over" in text


def test_a_band_and_a_derated_limit_are_marked(small):
    row = replace(part(10.0, "pass"), band_k=2.25, derated=True)
    text = written(with_condition(small, parts=(row,)))
    assert re.search(r"X1 +case max +50\.0 \+-2\.2 +60\.0\* +10\.0 +pass", text)
    assert "* from the part's derating curve" in text


# Headroom ---------------------------------------------------------------------------------


def room(small: Report, generated: float = 1.5, **changes) -> str:
    usual = Headroom(0.0, 55.72, "X1 case", 153.0, "X1 case")
    first = small.conditions[0]
    return headroom_words(
        replace(
            first,
            headroom=replace(usual, **changes),
            heat_balance=replace(first.heat_balance, generated_w=generated),
        )
    )


def test_headroom_upwards(small):
    assert room(small) == (
        "Headroom: limits hold up to 55.7 C surrounding air, 30.7 K above that here (X1 case), "
        "or up to 153 % of this power (X1 case)."
    )


def test_headroom_that_is_not_there(small):
    assert room(small, highest_air_c=18.2, power_pct=64.7, wanted_margin_k=3.0) == (
        "Headroom, 3.0 K kept: limits hold only up to 18.2 C surrounding air, 6.8 K below that "
        "here (X1 case), or only up to 64.7 % of this power (X1 case)."
    )


def test_headroom_without_power(small):
    text = room(small, generated=0.0, power_pct=None, power_limited_by=None)
    assert text.endswith("(X1 case); no power is put in that could grow.")


def test_headroom_that_was_not_found(small):
    text = room(
        small, highest_air_c=None, air_limited_by=None, power_pct=None, power_limited_by=None
    )
    assert text == (
        "Headroom: no surrounding air was found at which a limit is just met; no power was found "
        "at which a limit is just met."
    )


def test_headroom_with_lowest_limits_only(small):
    report = with_condition(small, parts=(part(10.0, "pass", side="min"),))
    assert "no highest temperature is stated" in headroom_words(report.conditions[0])


# Heat -------------------------------------------------------------------------------------


def balance_lines(report: Report) -> str:
    text = written(report)
    return flat(text[text.index("Heat ") : text.index("\n\n", text.index("Heat "))])


def test_balance_with_heat_from_outside(small):
    balance = replace(
        small.conditions[0].heat_balance,
        generated_w=3.0,
        sun_w=0.0,
        convection_w=4.0,
        radiation_w=0.0,
        mounting_w=-1.0,
    )
    assert balance_lines(with_condition(small, heat_balance=balance)) == (
        "Heat in: 4.00 W = parts and boards 3.00 (75 %) + sun 0 + by mounting 1.00 (25 %) "
        "Heat out: 4.00 W = convection 4.00 (100 %) + radiation 0"
    )


def test_balance_of_nothing(small):
    zero = dict.fromkeys(
        ("generated_w", "sun_w", "convection_w", "radiation_w", "openings_w", "mounting_w"), 0.0
    )
    balance = replace(small.conditions[0].heat_balance, **zero)
    said = balance_lines(with_condition(small, heat_balance=balance))
    assert said == "Heat balance: no heat is put in and none passes."


def test_shares_of_heat_out_add_up(sample):
    for match in re.finditer(r"Heat out: (.*?)(?=\n[A-Z\n])", written(sample), re.DOTALL):
        shares = [int(share) for share in re.findall(r"\((\d+)\s%\)", flat(match[1]))]
        # Rounded to whole percents, each by up to a half.
        assert abs(sum(shares) - 100) <= len(shares) / 2


def test_hottest_parts_only(sample):
    text = written(sample)
    for condition in sample.conditions:
        if not any(row.power_w for row in condition.part_heat):
            continue
        section = text[text.index(f"\n{condition.name}: ") :]
        table = section[section.index("  Part  Power W") :].splitlines()
        names = [line.split()[0] for line in table[1 : 1 + MOST_HEAT_ROWS]]
        assert names == [row.name for row in condition.part_heat[:MOST_HEAT_ROWS]]
        assert table[1 + MOST_HEAT_ROWS].strip() == (
            f"and {len(condition.part_heat) - MOST_HEAT_ROWS} more, none hotter"
        )


def test_board_without_parts(small):
    boards = (BoardFinding("main", 40.0, 41.0, None, ((40.0, 41.0),), "front", (30.0, 10.0)),)
    assert "Board main, seen from the front: mean 40.0 C, hottest 41.0 C, 30 mm" in written(
        with_condition(small, boards=boards)
    )


@pytest.mark.parametrize(
    ("hand", "said"),
    [
        (
            HandEstimate(1.26, 0.0525, 24.0, 8.82, 2.72, 2.62),
            "By hand: 1.26 W leaves by 0.0525 m2 of open wall, 24.0 W/m2. Over the mean wall rise "
            "of 2.7 K that is 8.82 W/m2K, convection and radiation together. Isolated-plate laws "
            "and radiation alone would give a rise of 2.6 K.",
        ),
        (
            HandEstimate(-1.0, 0.05, -20.0, None, -4.0, None),
            "By hand: 1.00 W enters by 0.0500 m2 of open wall, 20.0 W/m2.",
        ),
        (
            HandEstimate(0.0, 0.05, 0.0, None, 0.0, None),
            "By hand: no heat leaves by the open walls, so they are as warm as what they face.",
        ),
    ],
)
def test_hand_estimate(hand, said):
    assert hand_words(hand) == said


# Names ------------------------------------------------------------------------------------

NASTY = "\x1b]0;owned\x07\x1b[2J\nX\u202e"


def test_no_user_text_reaches_the_terminal_unescaped(small):
    """Every text of a report may hold control characters, whatever the loader refuses."""
    first = small.conditions[0]
    row = replace(first.parts[0], name=NASTY)
    report = replace(
        small,
        title=NASTY,
        document=NASTY,
        conditions=(
            replace(
                first,
                name=NASTY,
                option=NASTY,
                mode=NASTY,
                parts=(row,),
                part_heat=(replace(first.part_heat[0], name=NASTY),),
                boards=(
                    BoardFinding(NASTY, 40.0, 41.0, NASTY, ((40.0, 41.0),), "top", (3.0, 1.0)),
                ),
                headroom=replace(first.headroom, air_limited_by=NASTY, power_limited_by=NASTY),
                solver=replace(first.solver, worst_node=NASTY),
                warnings=(NASTY,),
                assumptions=(NASTY,),
            ),
        ),
    )
    for width in (80, 140):
        text = written(report, width=width)
        assert re.sub(r"[^\n -~]", "", text) == text
        assert max(map(len, text.splitlines())) <= width


def test_a_long_name_does_not_push_its_verdict_out(small):
    report = with_condition(small, name="x" * 80)
    assert f"\n{'x' * 71}...: pass\n" in written(report)


def test_encoding_of_the_terminal_is_kept_to(small):
    report = replace(small, title="Größe 電源 ±2")
    assert "Größe 電源 ±2" in written(report)
    assert "Größe \\u96fb\\u6e90 ±2" in written(report, encoding="latin-1")
    written(report, encoding="ascii").encode("ascii")


def test_colour_adds_to_the_words_and_changes_none(sample):
    coloured = written(sample, colour=True)
    assert "\x1b[" in coloured
    assert re.sub(r"\x1b\[[0-9;]*m", "", coloured) == written(sample)
