"""The openings: what comes and goes through each, and what that carries beside the walls."""

from enclosure_check.findings.results import ConditionFinding, OpeningFinding
from enclosure_check.report.layout import Column, Page, Shown, digits, right, tenths, watts

# Less flow than this reads as none. [g/s]
_LEAST_FLOW = 1e-6


def _grams(flow: float) -> str:
    return digits(flow) if flow > _LEAST_FLOW else "-"


_OPENINGS = (
    Shown[OpeningFinding](Column("Opening", yields=True), lambda row: f"{row.wall} {row.name}"),
    Shown[OpeningFinding](right("At mm"), lambda row: f"{row.height_mm:.0f}"),
    Shown[OpeningFinding](right("Free cm2"), lambda row: digits(row.free_area_mm2 / 100)),
    Shown[OpeningFinding](right("In g/s"), lambda row: _grams(row.inflow_g_per_s)),
    Shown[OpeningFinding](right("Out g/s"), lambda row: _grams(row.outflow_g_per_s)),
    Shown[OpeningFinding](
        right("Out C"), lambda row: "-" if row.air_out_c is None else tenths(row.air_out_c)
    ),
    Shown[OpeningFinding](right("Re"), lambda row: digits(row.reynolds)),
    Shown[OpeningFinding](right("Loss K"), lambda row: digits(row.loss_coefficient)),
    Shown[OpeningFinding](right("Heat W"), lambda row: watts(row.heat_w)),
)


def write_openings(page: Page, condition: ConditionFinding) -> None:
    """Put in the openings, where there are any."""
    openings = condition.openings
    if not openings.each:
        return
    page.gap()
    page.paragraph(
        "Openings (at: height of the middle; air in and out; loss in velocity heads)", style="bold"
    )
    page.records(_OPENINGS, openings.each)
    page.paragraph(_words(condition), first="  ", rest="  ")


def _words(condition: ConditionFinding) -> str:
    balance, openings = condition.heat_balance, condition.openings
    walls = balance.convection_w + balance.radiation_w + balance.mounting_w + balance.cables_w
    carried = (
        f"{digits(openings.flow_g_per_s)} g/s of air carries {watts(balance.openings_w)} W; the "
        f"walls pass {watts(walls)} W."
    )
    if openings.neutral_height_mm is None:
        return carried
    return f"{carried} Neutral level at {openings.neutral_height_mm:.0f} mm of height."
