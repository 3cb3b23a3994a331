"""Fill in a validated document to a case: defaults, types, places, and checks across fields."""

from __future__ import annotations

from typing import TYPE_CHECKING

from enclosure_check.description.case import Case, PowerBudgetCase, ReadingCase
from enclosure_check.description.clearances import check_boards, check_bodies
from enclosure_check.description.remarks import Remarks
from enclosure_check.description.resolve_board import check_mode_names, mode_power, resolve_boards
from enclosure_check.description.resolve_box import (
    Rows,
    resolve_sizes,
    resolve_surroundings,
    resolve_walls,
    up_vector,
)
from enclosure_check.description.resolve_features import check_covered
from enclosure_check.description.resolve_part import PartResolver
from enclosure_check.description.resolve_wind import check_wind

if TYPE_CHECKING:
    from enclosure_check.description.document import Document
    from enclosure_check.description.listed import Listed


def resolve(
    document: Document, condition: str, option: str | None = None, listed: Listed | None = None
) -> Case:
    """Resolve one document, already patched by its option and condition.

    ``listed`` tells which of its parts come from part lists.

    Raises
    ------
    FieldErrors
        With everything that does not fit together, each at the path of its field.
    """
    remarks = Remarks()
    if document.mode is not None and document.mode not in document.modes:
        remarks.unknown(("mode",), "mode", document.mode, list(document.modes))
    for pattern, tolerance in document.tolerances.items():
        if (tolerance.pct is None) == (tolerance.plus_minus is None):
            remarks.error(("tolerances", pattern), "needs exactly one of pct and plus_minus")
    rows = Rows(document, remarks)
    walls = resolve_walls(document, rows, remarks)
    surroundings = resolve_surroundings(document, remarks)
    inside, outside = resolve_sizes(document, walls, remarks)
    if min(inside) <= 0:
        remarks.finish()
    vented = any(wall.openings for wall in document.walls.values())
    if vented:
        from enclosure_check.description.resolve_openings import check_uncovered, resolve_openings

        walls = resolve_openings(document, inside, walls, remarks)
    check_wind(surroundings, walls, remarks)
    folded: dict[str, float] = {}
    if listed is not None:
        from enclosure_check.description.resolve_listed import fold_listed

        document, folded = fold_listed(document, listed, remarks)
    boards = resolve_boards(document, inside, rows, remarks)
    check_boards(document, boards, remarks)
    parts = PartResolver(document, inside, walls, boards, rows, remarks).resolve()
    check_bodies(document, parts, boards, remarks)
    if folded:
        from enclosure_check.description.resolve_listed import with_folded

        boards = with_folded(boards, folded)
    check_covered(boards, parts, remarks)
    if vented:
        check_uncovered(walls, boards, parts, remarks)
    readings = _readings(document, condition, remarks, listed)
    budget = _power_budget(document, remarks)
    if document.stirred:
        remarks.assume("stirred inside air is at one temperature; films stay those of still air")
    remarks.finish()
    requirements = document.requirements
    return Case(
        title=document.title,
        condition=condition,
        option=option,
        mode=document.mode,
        inside_mm=inside,
        outside_mm=outside,
        up=up_vector(document.box.tilt),
        walls=walls,
        boards=boards,
        parts=parts,
        surroundings=surroundings,
        margin_k=requirements.margin_k,
        confidence_pct=requirements.confidence_pct,
        stirred=document.stirred,
        readings=readings,
        warnings=tuple(remarks.warnings),
        assumptions=remarks.assumptions(),
        power_budget=budget,
    )


def _power_budget(document: Document, remarks: Remarks) -> PowerBudgetCase | None:
    """Give power in and out in the mode that applies."""
    budget = document.power_budget
    if budget is None:
        return None
    for key in ("power_in_by_mode_w", "power_out_by_mode_w"):
        check_mode_names(getattr(budget, key), document, ("power_budget", key), remarks)
    power_in = mode_power(budget.power_in_w, budget.power_in_by_mode_w, document)
    power_out = mode_power(budget.power_out_w, budget.power_out_by_mode_w, document)
    if power_out > power_in:
        remarks.error(
            ("power_budget", "power_out_w"),
            f"{power_out:g} W out are more than the {power_in:g} W in",
        )
    return PowerBudgetCase(power_in, power_out, budget.tolerance_pct)


def _readings(
    document: Document, condition: str, remarks: Remarks, listed: Listed | None
) -> tuple[ReadingCase, ...]:
    """Give the readings taken under this condition; every name in them must exist."""
    readings: list[ReadingCase] = []
    for run, measured in document.measured.items():
        for part, points in measured.parts.items():
            if part not in document.parts:
                path = ("measured", run, "parts", part)
                if listed is not None and (part in listed.parts or part in listed.left_out):
                    message = f"given {part!r}, which is listed but not computed by itself"
                    remarks.error(path, message)
                else:
                    remarks.unknown(path, "part", part, list(document.parts))
            elif "board" in points and document.parts[part].place not in document.boards:
                remarks.error(
                    ("measured", run, "parts", part, "board"),
                    "a board reading needs a part on a board",
                )
        if (measured.condition or "base") != condition:
            continue
        for part, points in measured.parts.items():
            readings += [
                ReadingCase(run, "part", part, point, value) for point, value in points.items()
            ]
        for wall, reading in measured.walls.items():
            readings += [
                ReadingCase(run, "wall", wall, point, value)
                for point, value in (
                    ("outside", reading.outside_c),
                    ("inside", reading.inside_c),
                )
                if value is not None
            ]
        if measured.air_c is not None:
            readings.append(ReadingCase(run, "air", "air", "mean", measured.air_c))
    return tuple(readings)
