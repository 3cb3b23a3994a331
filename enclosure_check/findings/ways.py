"""In what way heat goes between two things, and which laws tell how much."""

from collections.abc import Iterable, Sequence

import numpy as np

from enclosure_check.description.case import PartCase
from enclosure_check.findings.explanation import LinkLaw
from enclosure_check.findings.openings import openings_finding
from enclosure_check.findings.results import RangeFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.findings.things import INSIDE_AIR, Flow, Things
from enclosure_check.network.cables import CABLE_RISE_K
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import Radiation
from enclosure_check.network.outer_gap import OuterGap
from enclosure_check.network.units import metres
from enclosure_check.physics.air import air, pressure_at_altitude, rayleigh_number
from enclosure_check.physics.cavity import channel_drive
from enclosure_check.physics.correlation import CORRELATIONS

_WORDS = {
    "junction_to_case": "to its case",
    "to_board": "mount",
    "to_wall": "mount",
    "radiation_inside": "radiation",
    "radiation_under": "radiation",
    "radiation_outside": "radiation",
    "convection_inside": "convection",
    "convection_outside": "convection",
    "mounting": "contact",
    "along": "spreading along it",
    "cable": "cables",
    "trace": "none to speak of",
}
# Plain physics and stated numbers: no law of the register.
_PLAIN = {
    "junction_to_case": "stated theta_jc_top",
    "filler": "filler: thickness over conductivity and area, and contact faces",
    "still_air": "still air under the can: conductivity times area over gap",
    "frame": "stated conductance of the can's frame",
    "edge_clamp": "stated conductance of the clamp, half a cell, and the wall around the line",
    "mounting": "stated contact conductance",
    "through": "wall: conductivity times area over thickness",
    "corner": "walls joined along their edge: conduction of half a cell each",
}
_DRAUGHT = "flow by the balance of mass; R goes with one over the free area of all openings"
# The two ends of what a hole loses, by its Reynolds number.
_HOLES = ("perforated_plate", "creeping_hole")
_LISTED = "loss of louvres and filters by the library or as stated"
_PAD = "pad: thickness over conductivity and area, and contact faces"
_GREY = "grey-diffuse radiation (Stefan-Boltzmann)"
_UPRIGHT_BELOW = 0.5


def way_of(solved: Solved, things: Things, flow: Flow) -> str:
    """Give the word for how heat goes."""
    kind = solved.network.kinds[flow.bundle.kind]
    if isinstance(kind, OuterGap):
        return "convection" if flow.role == "convection_outside" else "gap"
    if isinstance(kind, InsideAir) and INSIDE_AIR not in _ends(things, flow):
        return "air gap"
    if flow.role == "mounting" and isinstance(kind, Radiation):
        return "radiation"
    return _WORDS.get(flow.role, flow.role.replace("_", " "))


def laws_of(
    solved: Solved, things: Things, flow: Flow, ranges: dict[str, RangeFinding]
) -> tuple[LinkLaw, ...]:
    """Give the laws a flow follows, with their films and whether they are inside their range."""
    kind = solved.network.kinds[flow.bundle.kind]
    owner = solved.network.labels[kind.label[flow.bundle.links[0]]].owner
    family, _, name = owner.partition(":")
    if isinstance(kind, InsideAir):
        ends = _ends(things, flow)
        if INSIDE_AIR not in ends:
            return _gaps(solved, kind, flow)
        own = things.names.index(next(end for end in ends if end != INSIDE_AIR))
        surfaces = np.flatnonzero(things.of_node[kind.surfaces.node] == own)
        return _audited(ranges, [kind.surfaces.names[int(surface)] for surface in surfaces])
    if isinstance(kind, BoxFilm):
        return _audited(ranges, [f"wall {name} outside", "whole box outside"])
    if isinstance(kind, OuterGap):
        return _outer_gap(solved, kind)
    if flow.role.startswith("radiation") or isinstance(kind, Radiation):
        return _radiation(solved, things, flow)
    if flow.role == "cable":
        return _cables(solved, name)
    if flow.role == "openings":
        return _openings(solved)
    return (LinkLaw(None, _plain(solved, flow.role, family, name), None, None, None),)


def _ends(things: Things, flow: Flow) -> tuple[str, str]:
    return things.names[flow.start], things.names[flow.end]


def _law(key: str, inside: bool | None = None, outside_by: float | None = None) -> LinkLaw:
    return LinkLaw(key, CORRELATIONS[key].name, None, inside, outside_by)


def _audited(ranges: dict[str, RangeFinding], surfaces: Iterable[str]) -> tuple[LinkLaw, ...]:
    """Give one row per law over some surfaces of the range audit."""
    by_law: dict[str, list[RangeFinding]] = {}
    for surface in surfaces:
        if surface in ranges:
            by_law.setdefault(ranges[surface].correlation, []).append(ranges[surface])
    return tuple(_over(key, rows) for key, rows in by_law.items())


def _over(key: str, rows: Sequence[RangeFinding]) -> LinkLaw:
    furthest = max(rows, key=lambda row: max(row.outside_by, 1 / max(row.outside_by, 1e-300)))
    films = [row.film_w_per_m2k for row in rows]
    return LinkLaw(
        key,
        CORRELATIONS[key].name,
        (min(films), max(films)),
        all(row.inside_range for row in rows),
        furthest.outside_by,
    )


def _gaps(solved: Solved, kind: InsideAir, flow: Flow) -> tuple[LinkLaw, ...]:
    """Give the laws of the gaps that a flow crosses, audited by the mean of either face."""
    straight = flow.bundle.links - 2 * len(kind.cell)
    pairs = np.array(sorted(set(kind.pair[straight].tolist())), dtype=np.intp)
    rise, reference = solved.solution.rise[:, 0], float(solved.network.reference_k[0])
    first = rise[kind.surfaces.node[kind.pairs.first[pairs]]]
    second = rise[kind.surfaces.node[kind.pairs.second[pairs]]]
    properties = air(reference + 0.5 * (first + second), kind.pressure_pa)
    width = kind.pairs.width[pairs, 0]
    rayleigh = rayleigh_number(np.abs(first - second), width, properties)
    up = kind.pairs.up_cosine[pairs, 0]
    upright = np.abs(up) < _UPRIGHT_BELOW
    below = ~upright & (up * (first - second) > 0)
    laws = []
    for key, hit in (("elsherbiny_vertical_gap", upright), ("hollands_heated_below", below)):
        if hit.any():
            # Below its range the law is that of air at rest, which holds there.
            beyond = max(float(rayleigh[hit].max()) / CORRELATIONS[key].valid_to, 1.0)
            laws.append(_law(key, beyond == 1.0, beyond))
    if (~upright & ~below).any():
        laws.append(LinkLaw(None, "air at rest, warmer above", None, None, None))
    return tuple(laws)


def _outer_gap(solved: Solved, kind: OuterGap) -> tuple[LinkLaw, ...]:
    """Give the laws of the gap behind a wall, audited by the means of the two surfaces."""
    rise, reference = solved.solution.rise[kind.nodes, 0], float(solved.network.reference_k[0])
    wall, surface = float(rise[0] - rise[2]), float(rise[1] - rise[2])
    properties = air(reference + 0.5 * float(rise[0] + rise[1]), kind.pressure_pa)
    across = float(rayleigh_number(abs(wall - surface), kind.width, properties))
    drive = float(channel_drive(wall, surface))
    channel = float(rayleigh_number(drive, kind.width, properties)) * kind.width / kind.length
    laws = []
    for key, group in (
        ("bar_cohen_rohsenow_channel", channel),
        ("elsherbiny_vertical_gap", across),
    ):
        law = CORRELATIONS[key]
        # Below its range the law of gaps is that of air at rest, which holds there.
        low = law.valid_from if key == "bar_cohen_rohsenow_channel" else 0.0
        within = min(max(group, low), law.valid_to)
        laws.append(_law(key, group == within, group / within if within > 0 else 1.0))
    return tuple(laws)


def _cables(solved: Solved, wall: str) -> tuple[LinkLaw, ...]:
    """Give the laws of the cables through a wall, the film's audited at its nominal rise."""
    fin = LinkLaw(None, "conductors as fins through the wall", None, None, None)
    case = next(each for each in solved.case.walls.values() if each.name == wall)
    outer = np.array([metres(cable.outer_mm) for cable in case.cables])
    air_k = float(solved.network.reference_k[0])
    pressure = float(pressure_at_altitude(solved.case.surroundings.altitude_m))
    rayleigh = rayleigh_number(CABLE_RISE_K, outer, air(air_k + CABLE_RISE_K / 2, pressure))
    return (fin, _within("churchill_chu_1975_cylinder", rayleigh.tolist()))


def _openings(solved: Solved) -> tuple[LinkLaw, ...]:
    """Give the laws of what openings lose, audited by the Reynolds numbers of their holes."""
    openings = openings_finding(solved).each
    holes = [row.reynolds for row in openings if row.kind not in ("mesh", "filter", "louvre")]
    laws = [LinkLaw(None, _DRAUGHT, None, None, None)]
    if holes:
        laws += [_within(key, holes) for key in _HOLES]
    if any(row.kind == "mesh" for row in openings):
        laws.append(_law("woven_mesh"))
    if any(row.kind in ("filter", "louvre") for row in openings):
        laws.append(LinkLaw(None, _LISTED, None, None, None))
    return tuple(laws)


def _within(key: str, groups: Sequence[float]) -> LinkLaw:
    """Audit a law by the groups it was used at, the furthest outside its range."""
    law = CORRELATIONS[key]
    over = [group / min(max(group, law.valid_from), law.valid_to) for group in groups if group > 0]
    furthest = max(over, key=lambda by: max(by, 1 / by), default=1.0)
    return _law(key, furthest == 1.0, furthest)


def _radiation(solved: Solved, things: Things, flow: Flow) -> tuple[LinkLaw, ...]:
    grey = LinkLaw(None, _GREY, None, None, None)
    if flow.role == "radiation_inside" and "radiation inside" in _ends(things, flow):
        return (grey, _law("view_factors", True, 1.0))
    if "sky" in _ends(things, flow) and solved.case.surroundings.sky == "clear":
        law, air_k = CORRELATIONS["swinbank_sky"], float(solved.network.reference_k[0])
        within = min(max(air_k, law.valid_from), law.valid_to)
        return (grey, _law("swinbank_sky", air_k == within, air_k / within))
    return (grey,)


def _plain(solved: Solved, role: str, family: str, name: str) -> str:
    """Name stated numbers and plain conduction."""
    if family == "part" and role in ("to_board", "to_wall"):
        return _mount(solved.case.parts[name])
    if family == "stand_off":
        return "half of the column and its contacts"
    if role == "pad":
        return _PAD
    if role == "along":
        what = "copper and laminate in the plane" if family == "board" else "in its plane"
        return f"conduction along the cells, {what}"
    return _PLAIN.get(role, role.replace("_", " "))


def _mount(part: PartCase) -> str:
    """Say what lies between a part and what it sits on."""
    beyond = "and spreading finer than the cells"
    if part.place == "board" and part.theta_jb_k_per_w is not None:
        return f"stated theta_jb, {beyond}"
    inner = [] if part.theta_jc_bottom_k_per_w is None else ["stated theta_jc_bottom"]
    if part.place == "wall" and part.pad is not None:
        inner.append(_PAD)
    elif part.bottom_contact_k_per_w is not None:
        inner.append("stated bottom contact")
    elif not inner or part.place == "wall":
        inner.append("0.1 mm of air under it")
    return f"{', '.join(inner)}, {beyond}"
