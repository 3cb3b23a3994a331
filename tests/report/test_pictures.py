"""The map of a board and the profile of the air, drawn in characters."""

import pytest
from support.reports import SAMPLES, report_of, with_condition

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings.results import AirFinding, AirLayer, BoardFinding
from enclosure_check.report.options import WriterOptions
from enclosure_check.report.pictures import (
    HOTTEST,
    INDENT,
    MAP_HEIGHT,
    MAP_WIDTH,
    PROFILE_WIDTH,
    STEPS,
    board_picture,
    map_size,
    profile_picture,
    resampled,
)
from enclosure_check.report.text import write_text


def board(rows, seen_from="front") -> BoardFinding:
    rows = tuple(tuple(map(float, row)) for row in rows)
    return BoardFinding("main", 0.0, 0.0, None, rows, seen_from, (0.0, 0.0))


def ramp(across: int, down: int):
    """Warmer to the right, and a little upwards."""
    return [[20.0 + 10 * j + (down - i) * 0.01 for j in range(across)] for i in range(down)]


def drawn(picture: list[str]) -> list[str]:
    """Only the rows of the map, without names and legend."""
    rows = []
    for line in picture[1:-1]:
        marks = [word for word in line.split() if set(word) <= {*STEPS, HOTTEST}]
        rows.append(marks[0])
    return rows


# The map ------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("across", "down", "size"),
    [
        # Square: twice as many characters as lines, since a character is twice as high as wide.
        (12, 12, (20, 10)),
        (6, 24, (5, 10)),
        (24, 6, (24, 3)),
        (18, 8, (24, 5)),
        (2, 70, (2, 10)),
        (70, 2, (24, 2)),
        (4, 4, (8, 4)),
    ],
)
def test_size_of_a_map_is_true_to_shape(across, down, size):
    assert map_size(across, down) == size
    width, height = size
    assert width <= MAP_WIDTH
    assert height <= MAP_HEIGHT


def test_resampling_keeps_the_mean_and_blocks():
    rows = [[float(10 * i + j) for j in range(7)] for i in range(5)]
    small = resampled(rows, 3, 2)
    mean = sum(map(sum, rows)) / 35
    assert sum(map(sum, small)) / 6 == pytest.approx(mean)
    # The first covers 7/3 columns of 5/2 rows: whole ones, and a third and a half of the next.
    columns = (0 + 1 + 2 / 3) / (7 / 3)
    lines = (0 + 10 + 20 / 2) / (5 / 2)
    assert small[0][0] == pytest.approx(columns + lines)
    for one, other in zip(resampled(rows, 7, 5), rows, strict=True):
        assert one == pytest.approx(other)


def test_the_hotter_the_higher_the_step():
    picture = board_picture(board(ramp(10, 10)))
    rows = drawn(picture)
    assert len(rows) == 10
    for row in rows[1:]:
        assert list(row) == sorted(row)
        assert (row[0], row[-1]) == ("0", "9")
    # The upper right corner is hottest: half a cell in from the edges.
    assert rows[0][-1] == HOTTEST or rows[0][-2] == HOTTEST
    assert sum(row.count(HOTTEST) for row in rows) == 1


def test_legend_gives_the_two_end_temperatures():
    text = "\n".join(board_picture(board([[20.0, 40.0], [20.0, 40.0]])))
    assert "0: 20.0 C, 9: 40.0 C, in even steps" in text
    assert f"{HOTTEST}: hottest cell" in text


@pytest.mark.parametrize(
    ("seen_from", "left", "right", "upper", "lower"),
    [
        ("front", "left", "right", "top", "bottom"),
        ("right", "front", "back", "top", "bottom"),
        ("top", "left", "right", "back", "front"),
    ],
)
def test_edges_are_named(seen_from, left, right, upper, lower):
    picture = board_picture(board(ramp(10, 10), seen_from))
    assert picture[0].split() == [upper]
    assert picture[-1].split() == [lower]
    (middle,) = [line for line in picture[1:-1] if line.split()[0] == left]
    assert middle.split()[2] == right


def test_a_board_that_is_even_is_not_drawn():
    assert board_picture(board([[20.0, 20.4], [20.2, 20.1]])) == []
    assert board_picture(board([[20.0, 20.6], [20.2, 20.1]])) != []
    assert board_picture(board([])) == []


def test_maps_of_the_samples_show_the_hottest_part_in_its_place():
    for path in SAMPLES:
        report = check(load_document(str(path)))
        for condition in report.conditions:
            for found in condition.boards:
                picture = board_picture(found)
                if not picture or found.hottest_at is None:
                    continue
                rows = drawn(picture)
                (row,) = [index for index, line in enumerate(rows) if HOTTEST in line]
                across = (rows[row].index(HOTTEST) + 0.5) / len(rows[row])
                down = (row + 0.5) / len(rows)
                cells = found.map_c
                hottest = max(max(line) for line in cells)
                (i, j) = next(
                    (i, j)
                    for i, line in enumerate(cells)
                    for j, value in enumerate(line)
                    if value == hottest
                )
                assert across == pytest.approx((j + 0.5) / len(cells[0]), abs=1 / len(rows[row]))
                assert down == pytest.approx((i + 0.5) / len(cells), abs=1 / len(rows))


# The profile --------------------------------------------------------------------------------


def profile(*temperatures: float) -> tuple[AirLayer, ...]:
    return tuple(AirLayer(10.0 * index, value, 1.0) for index, value in enumerate(temperatures))


def test_profile_is_drawn_from_the_top_down():
    lines = profile_picture(profile(20.0, 25.0, 40.0))
    assert [line.split()[0] for line in lines] == ["20", "10", "0"]
    assert [line.split()[2] for line in lines] == ["40.0", "25.0", "20.0"]
    places = [line.index("o") - line.index("|") - 1 for line in lines]
    assert places == [PROFILE_WIDTH, round(PROFILE_WIDTH / 4), 0]


def test_even_air_is_not_drawn():
    assert profile_picture(profile(20.0, 20.2, 20.4)) == []
    assert profile_picture(()) == []


def test_pictures_fit_any_page(tmp_path):
    report = with_condition(
        report_of(tmp_path),
        air=AirFinding(30.0, 1.0, 40.0, 1.0, profile(20.0, 30.0, 40.0)),
        boards=(board(ramp(24, 10)),),
    )
    for width in (80, 100):
        text = write_text(report, WriterOptions(width=width))
        assert max(map(len, text.splitlines())) <= width
        assert text.isascii()
    assert f"\n{INDENT}   20 mm   40.0 C |{' ' * PROFILE_WIDTH}o\n" in text
