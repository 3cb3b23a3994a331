"""The numbers of a document: where they stand, and what each of them is in a case.

A number that is one thing in a case (the power of a part, the emissivity of a finish) is about
that thing; one that is shape, or several things at once, is about nothing here, and what it does is
found by building the case again.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import TYPE_CHECKING, NamedTuple

from enclosure_check.description.case import ToleranceCase
from enclosure_check.description.tolerances import matching_paths, number_paths
from enclosure_check.description.yaml_nodes import MappingNode, Node, ScalarNode, SequenceNode

if TYPE_CHECKING:
    from enclosure_check.description.document import Document, Tolerance
    from enclosure_check.description.part import PartType

Key = tuple[str, ...]

_OF_PARTS = (
    "theta_jc_top_k_per_w",
    "theta_jb_k_per_w",
    "theta_jc_bottom_k_per_w",
    "bottom_contact_k_per_w",
)
_OF_PADS = ("conductivity_w_per_mk", "contact_mm2k_per_w")
_OF_MOUNTINGS = ("gap_mm", "contact_w_per_m2k", "surface_c", "surface_emissivity")


class Meaning(NamedTuple):
    """What a number is in a case.

    ``about`` are the things it is in full; ``covers`` those whose default uncertainty it takes
    over, as far as it says anything of them.
    """

    about: tuple[Key, ...] = ()
    covers: tuple[Key, ...] = ()


def meaning(document: Document, path: Key) -> Meaning:
    """Give what the number at a path is in the case of a document."""
    match path:
        case ("parts", name, *rest):
            return _about(_of_part(document, name, document.parts[name], tuple(rest)))
        case ("part_types", kind, *rest):
            parts = {name: part for name, part in document.parts.items() if part.type == kind}
            row, own = document.part_types[kind], tuple(rest)
            return _about(
                key
                for name, part in parts.items()
                if not _overrides(part, own)
                for key in _of_part(document, name, row, own, part)
            )
        case ("boards", name, "other_power_w"):
            own_power = document.boards[name].other_power_by_mode_w
            taken = document.mode not in own_power
            return _about([("boards", name, "other_power_w")] if taken else [])
        case ("boards", name, "other_power_by_mode_w", mode):
            return _about([("boards", name, "other_power_w")] if mode == document.mode else [])
        case ("boards", name, "conductivity_in_plane_w_per_mk"):
            return _about([("boards", name, "copper")])
        case ("boards", name, "copper", *_) | ("boards", name, "zones", *_):
            return Meaning((), (("boards", name, "copper"),))
        case ("boards", name, ("fillers" | "edge_clamps" | "stand_offs") as family, *_):
            return Meaning((), (("boards", name, family),))
        case ("surroundings", "sun_w_per_m2", wall):
            return _about([("sun", wall)])
        case ("surroundings", "air_c" | "radiant_c" | "sky_c" | "wind_m_per_s"):
            return _about([path])
        case ("walls", _, "mounting", key) if key in _OF_MOUNTINGS:
            return _about([path])
        case ("finishes", _, "emissivity" | "solar_absorptivity"):
            return _about([path])
        case ("materials", _, "conductivity_w_per_mk"):
            return _about([path])
    return Meaning()


def _about(keys: Iterator[Key] | Sequence[Key]) -> Meaning:
    found = tuple(keys)
    return Meaning(found, found)


def _overrides(part: PartType, rest: Key) -> bool:
    """Tell whether a part states itself what its type states at a path."""
    if rest[:1] == ("power_by_mode_w",):
        return rest[1] in part.power_by_mode_w
    return getattr(part, rest[0], None) is not None


def _of_part(
    document: Document, name: str, row: PartType, rest: Key, part: PartType | None = None
) -> list[Key]:
    """Give what a number of a part, or of its type, is for that part."""
    match rest:
        case ("power_w",):
            kind = getattr(part or row, "type", None)
            of_type = document.part_types[kind].power_by_mode_w if kind is not None else {}
            by_mode = {**of_type, **(part or row).power_by_mode_w}
            return [] if document.mode in by_mode else [("parts", name, "power_w")]
        case ("power_by_mode_w", mode):
            return [("parts", name, "power_w")] if mode == document.mode else []
        case (key,) if key in _OF_PARTS:
            return [("parts", name, key)]
        case ("pad", key) if key in _OF_PADS:
            return [("parts", name, "pad", key)]
    return []


# Tolerances -------------------------------------------------------------------------------


def stated_tolerances(node: MappingNode, document: Document) -> tuple[ToleranceCase, ...]:
    """Give the tolerances of a document, number by number.

    Of patterns that lead to one number, the one with the fewest ``*`` counts, the last of equals.
    """
    by_path: dict[Key, Tolerance] = {}
    patterns = sorted(document.tolerances.items(), key=lambda item: -item[0].split(".").count("*"))
    for pattern, tolerance in patterns:
        for path in matching_paths(node, pattern):
            by_path[path] = tolerance
    found = []
    for path, tolerance in by_path.items():
        value = number_at(node, path)
        if value is None:
            continue
        half = tolerance.plus_minus
        if half is None:
            half = abs(value) * (tolerance.pct or 0.0) / 100
        own = meaning(document, path)
        found.append(ToleranceCase(path, value, half, tolerance.pct, own.about, own.covers))
    return tuple(found)


def number_at(node: Node, path: Key) -> float | None:
    """Give the number at a path of a document; None where there is none."""
    for step in path:
        if isinstance(node, MappingNode):
            if step not in node.entries:
                return None
            node = node.entries[step]
        elif isinstance(node, SequenceNode):
            node = node.items[int(step)]
        else:
            return None
    if isinstance(node, ScalarNode) and isinstance(node.value, int | float):
        return None if isinstance(node.value, bool) else float(node.value)
    return None


def numbers(node: MappingNode) -> Mapping[Key, float]:
    """Give every number of a document that describes the box, its parts or its surroundings."""
    found = {}
    for path in number_paths(node, top=True):
        value = number_at(node, path)
        if value is not None:
            found[path] = value
    return found
