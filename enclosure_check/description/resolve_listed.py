"""Decide what becomes of parts from part lists: computed, folded into their board, or left out."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from enclosure_check.description.case import BoardCase
from enclosure_check.description.listed import Listed, ListedPart
from enclosure_check.description.quick import changed
from enclosure_check.description.remarks import Path, Remarks
from enclosure_check.description.resolve_board import mode_power

if TYPE_CHECKING:
    from enclosure_check.description.document import Document
    from enclosure_check.description.part import Part, PartType

# A part folded although it makes more than this share of its board's power is worth a warning.
LARGE_SHARE = 0.1
NOT_MODELLED = "listed without power or limit: left out"


def fold_listed(
    document: Document, listed: Listed, remarks: Remarks
) -> tuple[Document, dict[str, float]]:
    """Take out the listed parts that are not computed one by one.

    A listed part without power and limit is left out. One with power but without a size or a place
    on its board is folded, and so is one without a limit whose power stays below the list's
    `fold_below_w` in every mode. The others are computed.

    Returns
    -------
    tuple
        The document with the parts that are computed, and the power of those folded, by board [W].
    """
    _check_names(document, listed, remarks)
    for name in listed.left_out:
        remarks.assume(NOT_MODELLED, name)
    kept: dict[str, Part] = {}
    # Power by board and part, of those too small to matter and of those that lack something.
    small: dict[str, dict[str, float]] = {}
    unsized: dict[str, dict[str, float]] = {}
    for name, part in document.parts.items():
        known = listed.parts.get(name)
        if known is None:
            kept[name] = part
            continue
        part = _with_known_type(name, part, known, document, remarks)
        kind = document.part_types.get(part.type or "")
        power = _highest_power(part, kind)
        limited = bool(part.limits or (kind is not None and kind.limits))
        placed = _is_placed(part, kind)
        if power == 0 and not limited:
            remarks.assume(NOT_MODELLED, name)
        elif placed and (limited or power >= known.fold_below_w):
            kept[name] = part
        elif part.place not in document.boards:
            # Nowhere to fold it: let what is missing be told as for any other part.
            kept[name] = part
        else:
            folded = small if placed else unsized
            folded.setdefault(part.place, {})[name] = _power(part, kind, document)
            if limited:
                remarks.warn(
                    ("parts", name), "has a limit but no size or place, so it is not judged"
                )
    _note_folded("listed below `fold_below_w`", small, remarks)
    _note_folded("listed without size or place", unsized, remarks)
    boards = {
        board: sum(small.get(board, {}).values()) + sum(unsized.get(board, {}).values())
        for board in [*small, *unsized]
    }
    _warn_large(document, kept, unsized, boards, remarks)
    return changed(document, parts=kept), boards


def _note_folded(why: str, folded: Mapping[str, Mapping[str, float]], remarks: Remarks) -> None:
    for board, powers in folded.items():
        total = sum(powers.values())
        for name in powers:
            remarks.assume(
                f"{why}: {total:.3g} W in all, to the other power of board {board}", name
            )


def with_folded(
    boards: Mapping[str, BoardCase], folded: Mapping[str, float]
) -> dict[str, BoardCase]:
    """Give the boards with the power of the parts folded into them."""
    return {
        name: replace(board, other_power_w=board.other_power_w + folded[name])
        if name in folded
        else board
        for name, board in boards.items()
    }


def _check_names(document: Document, listed: Listed, remarks: Remarks) -> None:
    for path, kind in listed.types:
        if kind not in document.part_types:
            remarks.unknown(path, "part type", kind, list(document.part_types))
    for name, spec in document.part_lists.items():
        here: Path = ("part_lists", name)
        boards = list(document.boards)
        if spec.board is not None and spec.board not in boards:
            remarks.unknown((*here, "board"), "board", spec.board, boards)
        for word, board in spec.boards.items():
            if board not in boards:
                remarks.unknown((*here, "boards", word), "board", board, boards)
        for mode in spec.columns.power_by_mode:
            if mode not in document.modes:
                at = (*here, "columns", "power_by_mode", mode)
                remarks.unknown(at, "mode", mode, list(document.modes))
    remarks.finish()


def _with_known_type(
    name: str, part: Part, known: ListedPart, document: Document, remarks: Remarks
) -> Part:
    """Drop a type that only the list speaks of; one that the document names must exist."""
    word = part.type
    if word is None or word in document.part_types:
        return part
    if word != known.type_word:
        remarks.unknown(("parts", name, "type"), "part type", word, list(document.part_types))
        return part
    remarks.assume("types of a part list that are no part type here", word)
    return changed(part, type=None)


def _is_placed(part: Part, kind: PartType | None) -> bool:
    sized = all(
        getattr(part, key) is not None or (kind is not None and getattr(kind, key) is not None)
        for key in ("length_mm", "width_mm", "height_mm")
    )
    return sized and part.at_mm is not None and part.side is not None


def _stated(part: Part, kind: PartType | None) -> tuple[float, dict[str, float]]:
    power = part.power_w
    if power is None:
        power = kind.power_w if kind is not None else None
    of_type = kind.power_by_mode_w if kind is not None else {}
    return power or 0.0, {**of_type, **part.power_by_mode_w}


def _highest_power(part: Part, kind: PartType | None) -> float:
    power, by_mode = _stated(part, kind)
    return max(power, *by_mode.values()) if by_mode else power


def _power(part: Part, kind: PartType | None, document: Document) -> float:
    return mode_power(*_stated(part, kind), document)


def _warn_large(
    document: Document,
    kept: Mapping[str, Part],
    unsized: Mapping[str, Mapping[str, float]],
    folded: Mapping[str, float],
    remarks: Remarks,
) -> None:
    """Warn of folded parts that make much of their board's power, which is no even spread."""
    for board, powers in unsized.items():
        own = document.boards[board]
        total = folded[board] + mode_power(own.other_power_w, own.other_power_by_mode_w, document)
        for part in kept.values():
            if part.place == board:
                total += _power(part, document.part_types.get(part.type or ""), document)
        for name, power in powers.items():
            if power > LARGE_SHARE * total:
                remarks.warn(
                    ("parts", name),
                    f"its {power:g} W are {100 * power / total:.0f} % of the power of board "
                    f"{board!r}, spread evenly over it for want of a size or place, which hides "
                    "how hot it gets; give it a type or size",
                )
