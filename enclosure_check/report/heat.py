"""Where the heat goes: air, walls, balance, boards, parts, and a hand estimate beside it."""

from enclosure_check.findings.results import (
    BoardFinding,
    ConditionFinding,
    HandEstimate,
    PartHeat,
    WallFinding,
)
from enclosure_check.findings.stated import PowerBudgetFinding
from enclosure_check.report.layout import (
    LEAST_W,
    Cell,
    Column,
    Page,
    Shown,
    digits,
    right,
    tenths,
    watts,
)
from enclosure_check.report.limits import WORDS
from enclosure_check.report.openings import write_openings
from enclosure_check.report.pictures import board_picture, profile_picture

# Parts whose heat is followed.
MOST_HEAT_ROWS = 5
# Two temperatures closer than this read the same. [K]
_SAME_K = 0.05


def write_heat(page: Page, condition: ConditionFinding) -> None:
    """Put in all that is known of where the heat goes."""
    _air(page, condition)
    write_openings(page, condition)
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
    page.gap()
    page.paragraph(f"Inside air: mean {tenths(air.mean_c)} C, {beside}{top}.")
    for line in profile_picture(air.profile):
        page.line(line)


# Walls ------------------------------------------------------------------------------------

_FACES = {
    "open_air": "open air",
    "against_surface": "surface",
    "standing_on": "stands on",
    "bolted_to": "bolted to",
    "insulated": "insulated",
}


def _touch(wall: WallFinding) -> str | Cell:
    if wall.touch_margin_k is None or wall.touch_verdict is None:
        return "-"
    return Cell(f"{tenths(wall.touch_margin_k)} {WORDS[wall.touch_verdict]}", wall.touch_verdict)


_WALL = Shown[WallFinding](Column("Wall"), lambda wall: wall.name)
_WALL_TEMPERATURES = (
    Shown[WallFinding](
        Column("Faces", yields=True),
        lambda wall: wall.wind_regime or _FACES.get(wall.mounting, wall.mounting.replace("_", " ")),
    ),
    Shown[WallFinding](right("Out C"), lambda wall: tenths(wall.outside_c)),
    Shown[WallFinding](
        right("Max C"),
        lambda wall: tenths(wall.outside_max_c),
        lambda wall: wall.outside_max_c - wall.outside_c >= _SAME_K,
    ),
    Shown[WallFinding](right("In C"), lambda wall: tenths(wall.inside_c)),
)
_WALL_HEATS = (
    Shown[WallFinding](right("Conv. W"), lambda wall: watts(wall.convection_w)),
    Shown[WallFinding](right("Rad. W"), lambda wall: watts(wall.radiation_w)),
    Shown[WallFinding](
        right("Open. W"),
        lambda wall: watts(wall.openings_w),
        lambda wall: abs(wall.openings_w) >= LEAST_W,
    ),
    Shown[WallFinding](
        right("Mount W"),
        lambda wall: watts(wall.mounting_w),
        lambda wall: abs(wall.mounting_w) >= LEAST_W,
    ),
    Shown[WallFinding](
        right("Cable W"),
        lambda wall: watts(wall.cables_w),
        lambda wall: abs(wall.cables_w) >= LEAST_W,
    ),
    Shown[WallFinding](
        right("Sun W"),
        lambda wall: watts(wall.sun_w),
        lambda wall: abs(wall.sun_w) >= LEAST_W,
    ),
)
_WALL_TOUCH = Shown[WallFinding](
    right("Touch K"), _touch, lambda wall: wall.touch_verdict is not None
)


def _walls(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    touch = any(wall.touch_verdict is not None for wall in condition.walls)
    windy = any(wall.wind_regime is not None for wall in condition.walls)
    page.paragraph(
        "Walls (W: heat that leaves there, negative where it enters, and sun absorbed"
        + ("; touch: margin to the highest temperature allowed" if touch else "")
        + ("; forced, mixed, natural: convection of open air in wind)" if windy else ")"),
        style="bold",
    )
    whole = (_WALL, *_WALL_TEMPERATURES, *_WALL_HEATS, _WALL_TOUCH)
    if page.holds(whole, condition.walls):
        page.records(whole, condition.walls)
    else:
        page.records((_WALL, *_WALL_TEMPERATURES, _WALL_TOUCH), condition.walls)
        page.records((_WALL, *_WALL_HEATS), condition.walls)


# Balance ----------------------------------------------------------------------------------


def _balance(page: Page, condition: ConditionFinding) -> None:
    balance = condition.heat_balance
    either_way = {
        "convection": balance.convection_w,
        "radiation": balance.radiation_w,
        "openings": balance.openings_w,
        "mounting": balance.mounting_w,
        "cables": balance.cables_w,
    }
    cabled = any(wall.cables_w != 0 for wall in condition.walls)
    made_by = "parts, boards and cables" if cabled else "parts and boards"
    into = {made_by: balance.generated_w, "sun": balance.sun_w}
    into |= {f"by {name}": -heat for name, heat in either_way.items() if heat < -LEAST_W}
    out = {
        name: heat
        for name, heat in either_way.items()
        if heat > LEAST_W or (abs(heat) <= LEAST_W and name in ("convection", "radiation"))
    }
    page.gap()
    if sum(into.values()) < LEAST_W:
        page.paragraph("Heat balance: no heat is put in and none passes.")
    else:
        page.paragraph(_shares(into), first="Heat in:  ", rest="          ")
        page.paragraph(_shares(out), first="Heat out: ", rest="          ")
    if condition.power_budget is not None:
        page.paragraph(budget_words(condition.power_budget), first="Power:    ", rest="          ")


def budget_words(budget: PowerBudgetFinding) -> str:
    """Say how power in, power out and the heat listed agree."""
    verdict = "agrees" if budget.agrees else "DIFFERS"
    return (
        f"{watts(budget.power_in_w)} W in - {watts(budget.power_out_w)} W out = "
        f"{watts(budget.stays_w)} W that stay; {watts(budget.generated_w)} W turn to heat, which "
        f"{verdict} ({watts(budget.unexplained_w)} W unexplained, {watts(budget.tolerance_w)} W "
        "allowed)"
    )


def _shares(heats: dict[str, float]) -> str:
    """Give terms with their share of the sum."""
    total = sum(heats.values())
    terms = [
        f"{name} {watts(heat)}" + (f" ({100 * heat / total:.0f} %)" if heat > LEAST_W else "")
        for name, heat in heats.items()
    ]
    return f"{watts(total)} W = {' + '.join(terms)}"


# Boards and parts -------------------------------------------------------------------------


def _boards(page: Page, condition: ConditionFinding) -> None:
    for board in condition.boards:
        page.gap()
        page.paragraph(page.clean(_board_words(board)), rest="  ")
        for line in board_picture(board):
            page.line(line)


def _board_words(board: BoardFinding) -> str:
    under = "" if board.hottest_at is None else f" under {board.hottest_at}"
    right, up = board.hottest_at_mm
    hottest = ""
    if board.hottest_c - board.mean_c >= _SAME_K:
        hottest = (
            f", hottest {tenths(board.hottest_c)} C{under}, {right:.0f} mm from the left and "
            f"{up:.0f} mm from the lower edge"
        )
    mean = f"Board {board.name}, seen from the {board.seen_from}: mean {tenths(board.mean_c)} C"
    return f"{mean}{hottest}."


_HEAT = (
    Shown[PartHeat](Column("Part", yields=True), lambda part: part.name),
    Shown[PartHeat](right("Power W"), lambda part: watts(part.power_w)),
    Shown[PartHeat](right("Junction C"), lambda part: tenths(part.junction_c)),
    Shown[PartHeat](right("Case C"), lambda part: tenths(part.case_c)),
    Shown[PartHeat](
        right("Board C"),
        lambda part: "-" if part.board_c is None else tenths(part.board_c),
        lambda part: part.board_c is not None,
    ),
    Shown[PartHeat](right("Mount W"), lambda part: watts(part.to_mount_w)),
    Shown[PartHeat](
        right("Pad W"),
        lambda part: watts(part.to_pad_w),
        lambda part: abs(part.to_pad_w) >= LEAST_W,
    ),
    Shown[PartHeat](right("Air W"), lambda part: watts(part.to_air_w)),
    Shown[PartHeat](right("Rad. W"), lambda part: watts(part.to_radiation_w)),
)


def _parts(page: Page, condition: ConditionFinding) -> None:
    rows = condition.part_heat
    if not any(_gives_or_takes(row) for row in rows):
        return
    page.gap()
    page.paragraph(
        "Where the heat of the hottest parts goes (mount: to the board or wall under it; negative "
        "where the part takes heat up)",
        style="bold",
    )
    page.records(_HEAT, rows[:MOST_HEAT_ROWS])
    if len(rows) > MOST_HEAT_ROWS:
        page.paragraph(f"and {len(rows) - MOST_HEAT_ROWS} more, none hotter", first="  ", rest="  ")


def _gives_or_takes(row: PartHeat) -> bool:
    heats = (row.power_w, row.to_mount_w, row.to_pad_w, row.to_air_w, row.to_radiation_w)
    return any(abs(heat) >= LEAST_W for heat in heats)


# Hand estimate ----------------------------------------------------------------------------


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
