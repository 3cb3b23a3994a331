"""The section of a text report on one condition."""

from enclosure_check.findings.results import ConditionFinding, Headroom, PartFinding
from enclosure_check.report.heat import write_heat
from enclosure_check.report.layout import Cell, Column, Page, counted, digits, tenths
from enclosure_check.report.limits import WORDS

# Limits shown in full; those that do not pass are shown in any case.
MOST_LIMITS = 25


def write_condition(page: Page, condition: ConditionFinding, shared: tuple[str, ...]) -> None:
    """Put in everything about one condition; ``shared`` assumptions are stated elsewhere."""
    page.gap()
    title = f"{page.clean(condition.name)}: {WORDS[condition.verdict]}"
    page.heading(title)
    page.heading("-" * page.options.width, "")
    _site(page, condition)
    _limits(page, condition)
    _headroom(page, condition)
    write_heat(page, condition)
    _readings(page, condition)
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
    page.paragraph(
        f"Surrounding air {tenths(condition.surrounding_air_c)} C, altitude "
        f"{condition.altitude_m:.0f} m{mode}."
    )


# Limits -----------------------------------------------------------------------------------

_LIMITS = (
    Column("Part", yields=True),
    Column("Limit at"),
    Column("Temp. C", right=True),
    Column("Limit C", right=True),
    Column("Margin K", right=True),
    Column("Verdict"),
    Column("Air C", right=True),
)


def _limits(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    rows = condition.parts
    if not rows:
        page.paragraph("No part states a limit.")
        return
    failing = sum(row.verdict != "pass" for row in rows)
    shown = rows[: max(MOST_LIMITS, failing)]
    page.heading("Parts against their limits (margin: distance to the limit, negative past it)")
    page.table(_LIMITS, (_limit_row(page, row) for row in shown))
    hidden = rows[len(shown) :]
    if hidden:
        least = tenths(hidden[0].margin_k)
        page.paragraph(f"  and {len(hidden)} more with margins of {least} K and over")
    if any(row.derated for row in shown):
        page.paragraph("* from the part's derating curve", first="  ", rest="    ")


def _limit_row(page: Page, row: PartFinding) -> list[str | Cell]:
    band = "" if row.band_k is None else f" +-{tenths(row.band_k)}"
    return [
        page.clean(row.name),
        f"{row.limit_kind} {row.limit_side}",
        tenths(row.temperature_c) + band,
        tenths(row.limit_c) + ("*" if row.derated else ""),
        tenths(row.margin_k),
        Cell(WORDS[row.verdict], row.verdict),
        tenths(row.local_air_c),
    ]


# Headroom ---------------------------------------------------------------------------------


def _headroom(page: Page, condition: ConditionFinding) -> None:
    page.gap()
    page.paragraph(headroom_words(page, condition.headroom, condition))


def headroom_words(page: Page, room: Headroom, condition: ConditionFinding) -> str:
    """Say how far surroundings and power can rise."""
    upper = any(part.limit_side == "max" for part in condition.parts)
    if not upper and all(wall.touch_max_c is None for wall in condition.walls):
        return "Headroom: no highest temperature is stated, so there is none to give."
    kept = f" with {tenths(room.wanted_margin_k)} K to spare" if room.wanted_margin_k else ""
    if room.highest_air_c is None:
        air = "surrounding air: no temperature was found at which a limit is just met"
    else:
        shift = room.highest_air_c - condition.surrounding_air_c
        only, way = ("only ", "less") if shift < 0 else ("", "more")
        air = (
            f"highest limits hold{kept} {only}up to {tenths(room.highest_air_c)} C surrounding "
            f"air, {tenths(abs(shift))} K {way} than here ({page.clean(room.air_limited_by or '')})"
        )
    if room.power_pct is not None:
        only = "only " if room.power_pct < 100 else ""
        power = f"{only}up to {digits(room.power_pct)} % of this power "
        power += f"({page.clean(room.power_limited_by or '')})"
    elif condition.heat_balance.generated_w == 0:
        power = "no power is put in here that could grow"
    else:
        power = "no power was found at which a limit is just met"
    return f"Headroom: {air}; at this air, {power}."


# Readings and solver ----------------------------------------------------------------------

_READINGS = (
    Column("Run", yields=True),
    Column("Point", yields=True),
    Column("Measured C", right=True),
    Column("Predicted C", right=True),
    Column("Difference K", right=True),
)


def _readings(page: Page, condition: ConditionFinding) -> None:
    if not condition.readings:
        return
    page.gap()
    page.heading("Readings beside the prediction (difference: prediction less reading)")
    page.table(
        _READINGS,
        (
            [
                page.clean(row.run),
                page.clean(f"{row.name} {row.point}"),
                tenths(row.measured_c),
                tenths(row.predicted_c),
                tenths(row.difference_k),
            ]
            for row in condition.readings
        ),
    )


def _solver(page: Page, condition: ConditionFinding) -> None:
    solver = condition.solver
    back = f", {solver.fallbacks} of them taken back" if solver.fallbacks else ""
    page.paragraph(
        f"Solved: {counted(solver.unknowns, 'unknown temperature')} in "
        f"{counted(solver.iterations, 'step')}{back}; worst imbalance "
        f"{solver.worst_imbalance_w:.1e} W ({page.clean(solver.worst_node)})."
    )
