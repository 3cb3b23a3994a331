"""The section of a text report on one condition."""

from collections.abc import Sequence

from enclosure_check.findings.results import ConditionFinding, PartFinding
from enclosure_check.report.bands import write_bands, write_readings
from enclosure_check.report.bars import Scale, bar, legend, scale_of
from enclosure_check.report.heat import write_heat
from enclosure_check.report.layout import (
    Cell,
    Column,
    Page,
    Shown,
    counted,
    cut,
    digits,
    right,
    tenths,
)
from enclosure_check.report.limits import WORDS

# Limits shown in full; those that do not pass are shown in any case.
MOST_LIMITS = 25
# Both limits of a point, highest and lowest, are shown where both are closer than this. [K]
BOTH_SHOWN_K = 15.0


def write_condition(page: Page, condition: ConditionFinding, shared: tuple[str, ...]) -> None:
    """Put in everything about one condition; ``shared`` assumptions are stated elsewhere."""
    page.gap()
    verdict = f": {WORDS[condition.verdict]}"
    name = cut(page.clean(condition.name), page.options.width - len(verdict))
    page.heading(name + verdict, condition.verdict)
    page.heading("-" * page.options.width, "")
    _site(page, condition)
    _limits(page, condition)
    _headroom(page, condition)
    write_bands(page, condition)
    write_heat(page, condition)
    write_readings(page, condition)
    own = [line for line in condition.assumptions if line not in shared]
    for words, lines in (("To be looked at", condition.warnings), ("Assumed here", own)):
        if lines:
            page.gap()
            page.heading(words)
            page.bullets(page.clean(line) for line in lines)
    page.gap()
    _solver(page, condition)


def _site(page: Page, condition: ConditionFinding) -> None:
    mode = "" if condition.mode is None else f"; mode {page.clean(condition.mode)}"
    wind = ""
    if condition.wind_m_per_s > 0:
        side = "any side" if condition.wind_from is None else f"the {condition.wind_from}"
        wind = f", wind {condition.wind_m_per_s:g} m/s from {side}"
    page.paragraph(
        f"Surrounding air {tenths(condition.surrounding_air_c)} C, altitude "
        f"{condition.altitude_m:.0f} m{wind}{mode}."
    )


# Limits -----------------------------------------------------------------------------------

_LIMITS = (
    Shown[PartFinding](Column("Part", yields=True), lambda row: row.name),
    Shown[PartFinding](Column("Limit at"), lambda row: f"{row.limit_kind} {row.limit_side}"),
    Shown[PartFinding](
        right("Temp. C"),
        lambda row: (
            tenths(row.temperature_c) + ("" if row.band_k is None else f" +-{tenths(row.band_k)}")
        ),
    ),
    Shown[PartFinding](
        right("Limit C"), lambda row: tenths(row.limit_c) + ("*" if row.derated else "")
    ),
    Shown[PartFinding](right("Margin K"), lambda row: tenths(row.margin_k)),
    Shown[PartFinding](Column("Verdict"), lambda row: Cell(WORDS[row.verdict], row.verdict)),
    Shown[PartFinding](right("Air C"), lambda row: tenths(row.local_air_c)),
)


def _bars(scale: Scale) -> Shown[PartFinding]:
    """Give the column that draws margins."""
    return Shown(Column(scale.title), lambda row: Cell(bar(row, scale), row.verdict))


def _limits(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    rows = condition.parts
    if not rows:
        page.paragraph("No part states a limit.")
        return
    page.heading("Parts against their limits (margin: distance to the limit, negative past it)")
    near = nearer_limits(rows)
    shown = near[: max(MOST_LIMITS, sum(row.verdict != "pass" for row in near))]
    scale = scale_of(shown, page.room_beside(_LIMITS, shown))
    page.records(_LIMITS if scale is None else (*_LIMITS, _bars(scale)), shown)
    if scale is not None:
        page.paragraph(f"Bars: {legend(shown, scale)}", first="  ", rest="  ")
    notes = ["* from the part's derating curve"] if any(row.derated for row in shown) else []
    if hidden := near[len(shown) :]:
        least = tenths(hidden[0].margin_k)
        notes.append(f"and {len(hidden)} more with margins of {least} K and over")
    if len(near) < len(rows):
        notes.append(f"not shown: the farther limit of {counted(len(rows) - len(near), 'point')}")
    for note in notes:
        page.paragraph(note, first="  ", rest="  ")


def nearer_limits(rows: Sequence[PartFinding]) -> list[PartFinding]:
    """Leave out, of a point's highest and lowest limit, the one that is far away and passes."""
    nearest: dict[tuple[str, str], float] = {}
    for row in rows:
        point = row.name, row.limit_kind
        nearest[point] = min(nearest.get(point, row.margin_k), row.margin_k)
    return [
        row
        for row in rows
        if row.verdict != "pass"
        or row.margin_k <= max(nearest[row.name, row.limit_kind], BOTH_SHOWN_K)
    ]


# Headroom ---------------------------------------------------------------------------------


def _headroom(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    page.paragraph(page.clean(headroom_words(condition)))


def headroom_words(condition: ConditionFinding) -> str:
    """Say how far surroundings and power can rise, each alone."""
    room = condition.headroom
    upper = any(part.limit_side == "max" for part in condition.parts)
    if not upper and all(wall.touch_max_c is None for wall in condition.walls):
        return "Headroom: no highest temperature is stated, so there is nothing to give it by."
    kept = f", {tenths(room.wanted_margin_k)} K kept" if room.wanted_margin_k else ""
    joint = "; " if room.power_pct is None else ", or "
    return f"Headroom{kept}: {_air_room(condition)}{joint}{_power_room(condition)}."


def _air_room(condition: ConditionFinding) -> str:
    room = condition.headroom
    if room.highest_air_c is None:
        return "no surrounding air was found at which a limit is just met"
    shift = room.highest_air_c - condition.surrounding_air_c
    only, way = ("only ", "below") if shift < 0 else ("", "above")
    return (
        f"limits hold {only}up to {tenths(room.highest_air_c)} C surrounding air, "
        f"{tenths(abs(shift))} K {way} that here ({room.air_limited_by})"
    )


def _power_room(condition: ConditionFinding) -> str:
    room = condition.headroom
    if room.power_pct is not None:
        only = "only " if room.power_pct < 100 else ""
        return f"{only}up to {digits(room.power_pct)} % of this power ({room.power_limited_by})"
    if condition.heat_balance.generated_w == 0:
        return "no power is put in that could grow"
    return "no power was found at which a limit is just met"


# Solver -----------------------------------------------------------------------------------


def _solver(page: Page, condition: ConditionFinding) -> None:
    solver = condition.solver
    back = f", {solver.fallbacks} of them taken back" if solver.fallbacks else ""
    page.paragraph(
        f"Solved: {counted(solver.unknowns, 'unknown temperature')} in "
        f"{counted(solver.iterations, 'step')}{back}; worst imbalance "
        f"{solver.worst_imbalance_w:.0e} W ({page.clean(solver.worst_node)})."
    )
