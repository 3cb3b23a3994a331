"""Rows of tables that pages record, as the program gives them now."""

from functools import cache
from pathlib import Path

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.findings.causes import CAUSES
from enclosure_check.findings.results import ConditionFinding, PartFinding

SAMPLES = Path(__file__).parents[2] / "sample_boards"
FAILING = SAMPLES / "river_gauge_station.yaml"
VENTED = SAMPLES / "door_controller.yaml"
VENTED_CONDITIONS = ("warm_riser", "vent_blocked")

Found = dict[tuple[str | None, str], tuple[ConditionFinding, PartFinding]]


@cache
def battery() -> Found:
    """Findings of the failing sample and its battery's smallest margin, by option and condition."""
    return _found(FAILING, "BAT", None)


@cache
def processor() -> Found:
    """Findings of the vented sample and its processor's margin, by option and condition."""
    return _found(VENTED, "U3", VENTED_CONDITIONS)


def _found(path: Path, part: str, conditions: tuple[str, ...] | None) -> Found:
    document = load_document(str(path))
    found = {}
    for option in (None, *document.option_names()):
        for condition in check(document, option=option, conditions=conditions).conditions:
            own = [each for each in condition.parts if each.name == part]
            worst = min(own, key=lambda each: each.margin_k)
            found[option, condition.name] = (condition, worst)
    return found


def _name(option: str | None) -> str:
    return f"`{option}`" if option else "none"


def options() -> list[list[str]]:
    """The failing sample's battery under every option and condition."""
    rows = []
    for option in dict.fromkeys(option for option, _ in battery()):
        row = [_name(option)]
        for condition in dict.fromkeys(condition for _, condition in battery()):
            worst = battery()[option, condition][1]
            row.append(f"{worst.temperature_c:.1f} C, {worst.margin_k:+.1f} K, {worst.verdict}")
        rows.append(row)
    return rows


def vents() -> list[list[str]]:
    """The vented sample's processor under every option, and what the openings carry."""
    rows = []
    for option in dict.fromkeys(option for option, _ in processor()):
        row = [_name(option)]
        for name in VENTED_CONDITIONS:
            condition, worst = processor()[option, name]
            balance = condition.heat_balance
            share = 100 * balance.openings_w / balance.generated_w
            row.append(f"{worst.margin_k:+.1f} K, {worst.verdict}; {share:.0f} %")
        rows.append(row)
    return rows


def uncertainties() -> list[list[str]]:
    """Every default of what is uncertain."""
    units = {"%": " %", "K": " K", "mm": " mm", "-": ""}
    return [
        [
            row.words.format(name="NAME"),
            f"{row.half_width:g}{units[row.unit]}",
            row.basis,
            row.shared,
        ]
        for row in CAUSES.values()
    ]
