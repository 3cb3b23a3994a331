"""Where the heat goes: air, walls, balance, boards, parts, and a hand estimate beside it."""

from collections.abc import Callable
from typing import NamedTuple

from enclosure_check.findings.results import ConditionFinding, HandEstimate, WallFinding
from enclosure_check.report.layout import LEAST_W, Cell, Column, Page, digits, tenths, watts
from enclosure_check.report.limits import WORDS

# Parts whose heat is followed.
MOST_HEAT_ROWS = 5
# Two temperatures closer than this read the same. [K]
_SAME_K = 0.05


def write_heat(page: Page, condition: ConditionFinding) -> None:
    """Put in all that is known of where the heat goes."""
    _air(page, condition)
    _walls(page, condition)
    _balance(page, condition)
    _boards(page, condition)
    _parts(page, condition)
    page.gap()
    page.paragraph(hand_words(condition.hand_estimate))


def _air(page: Page, condition: ConditionFinding) -> None:
    air = condition.air
    over = air.mean_c - condition.surrounding_air_c
    if abs(over) < _SAME_K:
        beside = "as the surrounding air"
    else:
        beside = f"{tenths(abs(over))} K {'over' if over > 0 else 'under'} the surrounding air"
    top = "" if abs(air.top_c - air.mean_c) < _SAME_K else f", {tenths(air.top_c)} C at the top"
    page.paragraph(f"Inside air: {tenths(air.mean_c)} C{top}, {beside}.")


# Walls ------------------------------------------------------------------------------------


class _WallColumn(NamedTuple):
    column: Column
    cell: Callable[[WallFinding], str | Cell]
    wanted: Callable[[WallFinding], bool] = lambda _: True
    """The column is left out where no wall wants it."""


def _right(title: str) -> Column:
    return Column(title, right=True)


_WALLS = (
    _WallColumn(Column("Wall"), lambda wall: wall.name),
    _WallColumn(Column("Faces", yields=True), lambda wall: wall.mounting.replace("_", " ")),
    _WallColumn(_right("Out C"), lambda wall: tenths(wall.outside_c)),
    _WallColumn(
        _right("Max C"),
        lambda wall: tenths(wall.outside_max_c),
        lambda wall: wall.outside_max_c - wall.outside_c >= _SAME_K,
    ),
    _WallColumn(_right("In C"), lambda wall: tenths(wall.inside_c)),
    _WallColumn(_right("Conv. W"), lambda wall: watts(wall.convection_w)),
    _WallColumn(_right("Rad. W"), lambda wall: watts(wall.radiation_w)),
    _WallColumn(
        _right("Vents W"),
        lambda wall: watts(wall.openings_w),
        lambda wall: abs(wall.openings_w) >= LEAST_W,
    ),
    _WallColumn(_right("Mount W"), lambda wall: watts(wall.mounting_w)),
    _WallColumn(_right("Sun W"), lambda wall: watts(wall.sun_w)),
    _WallColumn(
        _right("Touch K"),
        lambda wall: "-" if wall.touch_margin_k is None else tenths(wall.touch_margin_k),
        lambda wall: wall.touch_margin_k is not None,
    ),
    _WallColumn(
        Column("Touch"),
        lambda wall: (
            "-"
            if wall.touch_verdict is None
            else Cell(WORDS[wall.touch_verdict], wall.touch_verdict)
        ),
        lambda wall: wall.touch_verdict is not None,
    ),
)


def _walls(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    touch = any(wall.touch_margin_k is not None for wall in condition.walls)
    allowed = "; touch K: margin to the highest touch temperature" if touch else ""
    page.paragraph(
        f"Walls (W: heat that leaves there, negative where it enters; sun absorbed{allowed})",
        style="bold",
    )
    shown = [each for each in _WALLS if any(each.wanted(wall) for wall in condition.walls)]
    page.table(
        [each.column for each in shown],
        ([each.cell(wall) for each in shown] for wall in condition.walls),
    )


# Balance ----------------------------------------------------------------------------------


def _balance(page: Page, condition: ConditionFinding) -> None:
    balance = condition.heat_balance
    either_way = {
        "convection": balance.convection_w,
        "radiation": balance.radiation_w,
        "openings": balance.openings_w,
        "mounting": balance.mounting_w,
    }
    into = {"parts and boards": balance.generated_w, "sun": balance.sun_w}
    into |= {f"by {name}": -heat for name, heat in either_way.items() if heat < 0}
    out = {name: heat for name, heat in either_way.items() if heat > 0}
    page.gap()
    if sum(into.values()) < LEAST_W:
        page.paragraph("Heat balance: no heat is put in and none passes.")
        return
    page.paragraph(f"Heat in:  {_shares(into)}", rest="          ")
    page.paragraph(f"Heat out: {_shares(out)}", rest="          ")


def _shares(heats: dict[str, float]) -> str:
    total = sum(heats.values())
    terms = [
        f"{name} {watts(heat)} W ({100 * heat / total:.0f} %)"
        for name, heat in heats.items()
        if heat >= LEAST_W
    ]
    return f"{watts(total)} W = {' + '.join(terms)}"


# Boards and parts -------------------------------------------------------------------------


def _boards(page: Page, condition: ConditionFinding) -> None:
    for board in condition.boards:
        under = "" if board.hottest_at is None else f" under {page.clean(board.hottest_at)}"
        page.paragraph(
            f"Board {page.clean(board.name)}: mean {tenths(board.mean_c)} C, hottest "
            f"{tenths(board.hottest_c)} C{under}.",
            rest="  ",
        )


_HEAT = (
    Column("Part", yields=True),
    _right("Power W"),
    _right("Junct. C"),
    _right("Case C"),
    _right("Board C"),
    _right("Mount W"),
    _right("Pad W"),
    _right("Air W"),
    _right("Rad. W"),
)


def _parts(page: Page, condition: ConditionFinding) -> None:
    if not condition.part_heat:
        return
    page.gap()
    page.paragraph(
        "Where the heat of the hottest parts goes (mount: to the board or wall under it; negative "
        "where the part takes heat up)",
        style="bold",
    )
    page.table(
        _HEAT,
        (
            [
                page.clean(row.name),
                watts(row.power_w),
                tenths(row.junction_c),
                tenths(row.case_c),
                "-" if row.board_c is None else tenths(row.board_c),
                watts(row.to_mount_w),
                watts(row.to_pad_w),
                watts(row.to_air_w),
                watts(row.to_radiation_w),
            ]
            for row in condition.part_heat[:MOST_HEAT_ROWS]
        ),
    )
    hidden = len(condition.part_heat) - MOST_HEAT_ROWS
    if hidden > 0:
        page.paragraph(f"  and {hidden} cooler")


def hand_words(hand: HandEstimate) -> str:
    """Say what a hand calculation gives, beside the answer."""
    if abs(hand.heat_w) < LEAST_W:
        return "By hand: no heat leaves by the open walls, so they are as warm as what they face."
    way = "leaves" if hand.heat_w > 0 else "enters"
    text = (
        f"By hand: {watts(abs(hand.heat_w))} W {way} by {digits(hand.area_m2)} m2 of open wall, "
        f"{digits(abs(hand.flux_w_per_m2))} W/m2."
    )
    if hand.film_w_per_m2k is not None:
        text += (
            f" Over the mean wall rise of {tenths(hand.wall_rise_k)} K that is "
            f"{digits(hand.film_w_per_m2k)} W/m2K, convection and radiation together."
        )
    if hand.plates_wall_rise_k is not None:
        text += (
            f" Isolated-plate laws and radiation alone would give a rise of "
            f"{tenths(hand.plates_wall_rise_k)} K."
        )
    return text
