"""Power in against power out: whether what stays in the box is the heat of what is listed."""

from enclosure_check.description.case import Case
from enclosure_check.findings.stated import PowerBudgetFinding


def power_budget(case: Case, generated_w: float) -> PowerBudgetFinding | None:
    """Compare the power that stays in the box with the heat computed, None where none is stated.

    Parameters
    ----------
    case
        The case, with the power budget of its mode.
    generated_w
        Heat of parts, boards and cables inside, at the temperatures found. [W]
    """
    budget = case.power_budget
    if budget is None:
        return None
    stays = budget.power_in_w - budget.power_out_w
    tolerance = budget.tolerance_pct / 100 * budget.power_in_w
    unexplained = stays - generated_w
    return PowerBudgetFinding(
        power_in_w=budget.power_in_w,
        power_out_w=budget.power_out_w,
        stays_w=stays,
        generated_w=generated_w,
        unexplained_w=unexplained,
        tolerance_w=tolerance,
        # What rounding leaves of an exact balance is no difference.
        agrees=abs(unexplained) <= tolerance + 1e-9 * budget.power_in_w,
    )


def budget_warnings(finding: PowerBudgetFinding | None) -> list[str]:
    """Say that heat and budget differ by more than is stated to be no warning."""
    if finding is None or finding.agrees:
        return []
    amount, stays = abs(finding.unexplained_w), finding.stays_w
    if finding.unexplained_w > 0:
        what = f"{amount:.3g} W more stay in the box than parts, boards and cables turn to heat"
        way_out = "power is missing from the parts, or leaves the box unstated"
    else:
        what = f"parts, boards and cables turn {amount:.3g} W more to heat than stay in the box"
        way_out = "parts are listed with too much power or twice, or too little goes in"
    return [
        f"power_budget: {what} ({stays:.3g} W); that is more than the {finding.tolerance_w:.3g} W "
        f"of the tolerance: {way_out}"
    ]
