"""The uncertain quantities of a solved case, and which knobs of its network each one turns."""

import numpy as np

from enclosure_check.description.case import BoardCase, PartCase, ShieldCanCase, WallCase
from enclosure_check.description.frames import AXIS, OPPOSITE, Vector
from enclosure_check.description.names import WALL_NAMES, WallName
from enclosure_check.findings.solved import Solved
from enclosure_check.findings.turning import Key, Turns
from enclosure_check.findings.turning_inside import outside_doubt, turn_inside_air
from enclosure_check.network.builder import LEAST_RESISTANCE
from enclosure_check.network.by_sheet import sub_cells_by_sheet
from enclosure_check.network.covering import shared
from enclosure_check.network.features import filler_over
from enclosure_check.network.films import BoxFilm
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.knobs import Knobs
from enclosure_check.network.links import Conduction, LinkLabel, Radiation
from enclosure_check.network.outer_gap import OuterGap
from enclosure_check.network.parts import pad_resistances, resistances
from enclosure_check.network.spots import FELT, LEAST_SHARE_LEFT
from enclosure_check.network.units import metres_3
from enclosure_check.network.wind import BoxFilmInWind
from enclosure_check.physics.radiation import sky_temperature_clear
from enclosure_check.records import dataclass

# Temperatures this close are one and the same. [K]
_SAME_K = 1e-9
# A step for the sky's answer to the air. [K]
_SKY_STEP_K = 0.01
# Spreading that is less of a resistance than this follows no plate.
_LEAST_SPREADING = 0.02
# Faces of the box that point up by more than this are its top. [-]
_UP_COSINE = 0.5


@dataclass(frozen=True)
class Quantity:
    """Something uncertain, and what a change of it by 1 does.

    A change of 1 is 100 % of a quantity in percent, 1 K of a temperature and 1 of an emissivity.
    """

    key: Key
    """Where it is in a case, or its family alone for laws."""
    family: str
    """Its row in `causes.CAUSES`."""
    name: str
    """Whose it is."""
    value: float | None
    """The number itself; None where it is none of the document's."""
    effects: tuple[tuple[int, float], ...]
    """Knob, and how far it is turned."""


class _Collector(Turns):
    """Goes through a network and finds out what turns what."""

    # Kinds of links ----------------------------------------------------------------------

    def go(self) -> None:
        """Go through all kinds of links, then sources and given temperatures."""
        for number, kind in enumerate(self.network.kinds):
            if isinstance(kind, BoxFilm):
                self._box_film(number, kind)
            elif isinstance(kind, OuterGap):
                self._outer_gap(number, kind)
            elif isinstance(kind, InsideAir):
                self._inside_air(number, kind)
            elif isinstance(kind, Radiation):
                self._radiation(number)
            elif isinstance(kind, Conduction):
                for label, knob, total in self.knobs_by_label(number):
                    self._conduction(label, knob, total)
            elif "loss" in kind.PARAMETERS:
                self.parameter.append((number, "loss"))
                self.turn(("openings",), "openings", "parameter", len(self.parameter) - 1)
            elif self.network.labels[kind.label[0]].role == "radiation":
                every = np.arange(len(kind.a))
                self.turn(("patches",), "patches", "link", self.knob(number, every))
        self._sheets()
        self._sources()
        self._given()

    def _box_film(self, number: int, kind: BoxFilm) -> None:
        by_wall = np.bincount(kind.surface, self.heat[number], 6)
        top = int(np.argmax(kind.geometry.up_cosine))
        beside = float(np.abs(by_wall).sum() - abs(by_wall[top]))
        shared = kind.geometry.up_cosine[top] > _UP_COSINE and beside > 0 and by_wall[top] != 0
        if isinstance(kind, BoxFilmInWind):
            self._in_wind(number)
        doubt = outside_doubt(kind, self.solved.solution.rise, self.network.reference_k)
        for label, knob, _ in self.knobs_by_label(number):
            index = WALL_NAMES.index(_wall(label))
            if not isinstance(kind, BoxFilmInWind):
                self.turn(("outside_films",), "outside_films", "link", knob)
            self.turn(("transition",), "transition", "link", knob, float(doubt[index]))
            if shared:
                given_up = -abs(by_wall[top]) / beside
                share = 1.0 if index == top else given_up
                self.turn(("top_share",), "top_share", "link", knob, share)

    def _in_wind(self, number: int) -> None:
        """Let the two laws of a box in wind, and the wind itself, turn their parameters."""
        self.parameter += [(number, "factor"), (number, "wind_factor")]
        free, forced = len(self.parameter) - 2, len(self.parameter) - 1
        self.turn(("outside_films",), "outside_films", "parameter", free)
        self.turn(("wind_films",), "wind_films", "parameter", forced)
        speed = self.case.surroundings.wind_m_per_s
        key = ("surroundings", "wind_m_per_s")
        # The film of a laminar layer goes with the square root of the speed.
        self.turn(key, "wind_m_per_s", "parameter", forced, 0.5, value=speed)

    def _outer_gap(self, number: int, kind: OuterGap) -> None:
        for label, knob, _ in self.knobs_by_label(number):
            name = _wall(label)
            self.turn(("outer_gap", name), "outer_gap", "link", knob, name=name)
            if label.role == "mounting":
                gap = self.case.walls[name].mounting.gap_mm
                key = ("walls", name, "mounting", "gap_mm")
                self.turn(key, "gap_mm", "link", knob, -1.0 / gap, name, gap)

    def _inside_air(self, number: int, kind: InsideAir) -> None:
        films, straights = 2 * len(kind.cell), len(kind.cell_a)
        roles = np.array([label.role for label in self.network.labels], dtype=object)
        lifts = np.flatnonzero(roles[kind.label] == "lift")
        knob = self.knob(number, np.arange(films, films + straights))
        self.turn(("gaps_inside",), "gaps_inside", "link", knob)
        self.turn(("streams",), "streams", "link", self.knob(number, lifts))
        turn_inside_air(self, kind, self.heat[number], knob)
        on_boards = np.array([self._carries(name) for name in kind.surfaces.names], dtype=float)
        if on_boards.any():
            self.turn_film(("board_films",), "board_films", kind, films=on_boards)

    def _carries(self, surface: str) -> bool:
        """Tell whether a surface inside is a board that carries parts, or a part on one."""
        what, _, name = surface.partition(" ")
        parts = self.case.parts
        if what == "part":
            return parts[name].place == "board"
        hosts = {part.host for part in parts.values() if part.place == "board"}
        return what == "board" and name.rpartition(",")[0] in hosts

    def _radiation(self, number: int) -> None:
        for label, knob, _ in self.knobs_by_label(number):
            self._finish(label)
            if label.role == "mounting":
                # 1 / (1/e + 1/e_s - 1): two parallel surfaces.
                name = _wall(label)
                wall = self.case.walls[name]
                own, far = wall.finish_outside.emissivity, wall.mounting.surface_emissivity
                key = ("walls", name, "mounting", "surface_emissivity")
                share = 1.0 / (far * (1.0 + far * (1.0 / own - 1.0))) if own * far > 0 else 0.0
                self.turn(key, "surface_emissivity", "link", knob, share, name, far)

    def _finish(self, label: LinkLabel) -> None:
        what, _, name = label.owner.partition(":")
        case = self.case
        if what == "wall":
            wall = case.walls[_wall(label)]
            inside = label.role == "radiation_inside"
            finish = wall.finish_inside if inside else wall.finish_outside
        elif what == "board":
            finish = case.boards[name].finish
        elif what == "part":
            finish = case.parts[name].finish
        elif what == "can":
            board, can = _can(case.boards, name)
            finish = board.finish if label.role == "radiation_under" else can.finish
        else:
            return
        number = self.finishes.setdefault(finish.name, len(self.finishes))
        self.finish_of_label[self.place[label]] = number
        key = ("finishes", finish.name, "emissivity")
        if key not in self.found:
            value = finish.emissivity
            self.turn(key, "emissivity", "finish", number, name=finish.name, value=value)

    def _conduction(self, label: LinkLabel, knob: int, total: float) -> None:
        what, _, name = label.owner.partition(":")
        role = label.role.removesuffix(FELT)
        if role != label.role:
            self._felt(LinkLabel(label.owner, role), knob)
        if what == "part":
            self._part(self.case.parts[name], role, knob, 1.0 / total)
        elif what == "stand_off":
            board = name.partition("/")[0]
            self.turn(("boards", board, "stand_offs"), "stand_offs", "link", knob, name=board)
        elif what == "can":
            family = "can_frames" if role == "frame" else "still_air"
            key: Key = ("cans", name) if role == "frame" else ("still_air",)
            self.turn(key, family, "link", knob, name=name)
        elif what == "board":
            family = {"along": "copper", "edge_clamp": "edge_clamps", "filler": "fillers"}[role]
            self.turn(("boards", name, family), family, "link", knob, name=name)
        elif what == "corner":
            for wall in name.split("-"):
                self._material(self.case.walls[_named(wall)], knob, 0.5)
        elif role == "cable":
            self.turn(("cables",), "cables", "link", knob)
        elif role == "mounting":
            value = self.case.walls[_wall(label)].mounting.contact_w_per_m2k
            key = ("walls", name, "mounting", "contact_w_per_m2k")
            self.turn(key, "contact_w_per_m2k", "link", knob, 1.0, name, value)
        elif what == "wall":
            self._material(self.case.walls[_wall(label)], knob, 1.0)

    def _felt(self, label: LinkLabel, knob: int) -> None:
        """Let a plate turn what contacts make each other feel below its cells."""
        spots = self.network.places.spots
        assert spots is not None
        what, _, name = label.owner.partition(":")
        host = name.partition("/")[0]
        if what == "part":
            part = self.case.parts[name]
            wall = part.pad.wall if label.role == "pad" and part.pad else OPPOSITE[part.side]
            if label.role == "filler":
                wall = part.side
            host = part.host if label.role == "to_board" else wall
        elif label.role == "to_wall":
            return
        share = spots.felt_by_sheet(label)
        if host in self.case.boards:
            self.turn(("boards", host, "copper"), "copper", "link", knob, share, host)
        else:
            self._material(self.case.walls[_named(host)], knob, share)

    def _material(self, wall: WallCase, knob: int, share: float) -> None:
        name, value = wall.material.name, wall.material.conductivity_w_per_mk
        key = ("materials", name, "conductivity_w_per_mk")
        self.turn(key, "conductivity", "link", knob, share, name, value)

    def _part(self, part: PartCase, role: str, knob: int, total: float) -> None:
        """Let what lies in series between a part and its surroundings turn its links."""
        if role == "still_air":
            self.turn(("still_air",), "still_air", "link", knob)
        elif role == "filler":
            self._filler(part, knob, total)
        elif role == "junction_to_case":
            family, value = "theta_jc_top_k_per_w", part.theta_jc_top_k_per_w
            self.turn(("parts", part.name, family), family, "link", knob, -1.0, part.name, value)
        elif role == "pad":
            assert part.pad is not None
            series = pad_resistances(part.pad)
            self._series(part, series, knob, total)
            foot = metres_3(part.pad.low_mm), metres_3(part.pad.size_mm)
            self._spreads(foot, knob, series, total, part.pad.wall)
        else:
            series = resistances(part, self.air_conductivity)
            self._series(part, series, knob, total)
            on_wall = role == "to_wall"
            under = part.pad if on_wall and part.pad is not None else part
            foot = metres_3(under.low_mm), metres_3(under.size_mm)
            self._spreads(foot, knob, series, total, OPPOSITE[part.side] if on_wall else part.host)

    def _filler(self, part: PartCase, knob: int, total: float) -> None:
        """Let the filler over a part turn its links: the first, where several touch it."""
        name = part.host
        over = [
            filler
            for filler in self.case.boards[name].fillers
            if filler.side == part.side and all(_flat(shared(part, filler)[1], part.side))
        ]
        series = {"filler": filler_over(part, over[0])}
        share = series["filler"] / total
        self.turn(("boards", name, "fillers"), "fillers", "link", knob, share, name)
        self._spreads(shared(part, over[0]), knob, series, total, over[0].side)

    def _series(self, part: PartCase, series: dict[str, float], knob: int, total: float) -> None:
        own: Key = ("parts", part.name)
        whole = max(total, sum(series.values())) if _is_least(series, total) else total
        for family, value in series.items():
            share = -value / whole
            if family == "pad":
                assert part.pad is not None
                conductivity = part.pad.conductivity_w_per_mk
                key = (*own, "pad", "conductivity_w_per_mk")
                self.turn(key, family, "link", knob, -share, part.name, conductivity)
            elif family == "pad_contact":
                assert part.pad is not None
                contact = part.pad.contact_mm2k_per_w
                key = (*own, "pad", "contact_mm2k_per_w")
                self.turn(key, family, "link", knob, share, part.name, contact)
            else:
                self.turn((*own, family), family, "link", knob, share, part.name, value)

    def _spreads(
        self,
        foot: tuple[Vector, Vector],
        knob: int,
        series: dict[str, float],
        total: float,
        host: str,
    ) -> None:
        """Let the spreading law turn what cells do not resolve, and note it for the plate."""
        added = (total - sum(series.values())) / total
        if _is_least(series, total):
            return
        self.turn(("spreading",), "spreading", "link", knob, -added)
        if abs(added) < _LEAST_SPREADING:
            return
        self.spread.setdefault(host, []).append((foot, knob, total))

    def _sheets(self) -> None:
        """Let plates turn what cells do not resolve of the spreading in them."""
        for host, rows in self.spread.items():
            feet = tuple(row[0] for row in rows)
            by_sheet = sub_cells_by_sheet(self.network.places.grids[host], feet)
            for change, (_, knob, total) in zip(by_sheet.tolist(), rows, strict=True):
                if host in self.case.boards:
                    key = ("boards", host, "copper")
                    self.turn(key, "copper", "link", knob, -change / total, host)
                else:
                    self._material(self.case.walls[_named(host)], knob, -change / total)

    # Sources and given temperatures ------------------------------------------------------

    def _sources(self) -> None:
        labels = self.network.labels
        for index in np.flatnonzero(
            np.bincount(self.network.sources.label, minlength=len(labels))
        ).tolist():
            what, _, name = labels[index].owner.partition(":")
            self.source.append(index)
            number = len(self.source) - 1
            if labels[index].role == "sun":
                self._sun(self.case.walls[_named(name)], number)
            elif what == "cable":
                self.turn(("cables",), "cables", "source", number)
            elif what == "board":
                other, value = "other_power_w", self.case.boards[name].other_power_w
                self.turn(("boards", name, other), other, "source", number, 1.0, name, value)
            else:
                own, value = "power_w", self.case.parts[name].power_w
                self.turn(("parts", name, own), own, "source", number, 1.0, name, value)

    def _sun(self, wall: WallCase, number: int) -> None:
        sun, finish = wall.sun_w_per_m2, wall.finish_outside
        self.turn(("sun", wall.name), "sun_w_per_m2", "source", number, 1.0, wall.name, sun)
        value = finish.solar_absorptivity
        if value > 0:
            family = "solar_absorptivity"
            key = ("finishes", finish.name, family)
            self.turn(key, family, "source", number, 1.0 / value, finish.name, value)

    def _given(self) -> None:
        """Let given temperatures turn their nodes: what is as warm as the air follows it."""
        around, network = self.case.surroundings, self.network
        nodes = {label: index for index, label in enumerate(network.node_labels)}
        air_key = ("surroundings", "air_c")
        stated = {key for tolerance in self.case.tolerances for key in tolerance.covers}
        # The air takes all that is given along; what does not follow it is turned back.
        self.turn(air_key, "air_c", "air", 0, value=around.air_c)

        def given(label: str, key: Key, name: str, value: float) -> None:
            if label in nodes and (abs(value - around.air_c) >= _SAME_K or key in stated):
                self.node.append(nodes[label])
                number = len(self.node) - 1
                self.turn(air_key, "air_c", "node", number, -1.0)
                self.turn(key, key[-1], "node", number, 1.0, name, value)

        given("radiant surroundings", ("surroundings", "radiant_c"), "", around.radiant_c)
        for wall in self.case.walls.values():
            if wall.mounting.surface_c is not None:
                key = ("walls", wall.name, "mounting", "surface_c")
                label = f"surface behind the {wall.name} wall"
                given(label, key, wall.name, wall.mounting.surface_c)
        if "sky" in nodes:
            self.node.append(nodes["sky"])
            number = len(self.node) - 1
            follows = {"clear": self._sky_by_air(), "overcast": 1.0}.get(around.sky, 0.0)
            self.turn(air_key, "air_c", "node", number, follows - 1.0)
            self.turn(("surroundings", "sky_c"), "sky_c", "node", number, value=around.sky_c)

    def _sky_by_air(self) -> float:
        """How far a clear sky follows the air [K/K]."""
        air_k = float(self.network.reference_k[0])
        moved = sky_temperature_clear(np.array([air_k + _SKY_STEP_K, air_k]))
        return float(moved[0] - moved[1]) / _SKY_STEP_K


def quantities(solved: Solved) -> tuple[Knobs, tuple[Quantity, ...]]:
    """Give the knobs of a solved case's network, and what is uncertain about it."""
    collector = _Collector(solved)
    collector.go()
    knobs = collector.knobs()
    sorts = ("parameter", "film", "finish", "source", "node")
    start = {"link": 0, **dict(zip(sorts, knobs.starts, strict=False)), "air": knobs.starts[-1] - 1}
    return knobs, tuple(
        Quantity(
            key,
            turned.family,
            turned.name,
            turned.value,
            tuple((start[sort] + number, share) for sort, number, share in turned.effects),
        )
        for key, turned in collector.found.items()
    )


def _flat(size: Vector, side: WallName) -> tuple[bool, ...]:
    """Tell along which axes of a side something extends at all."""
    return tuple(size[axis] > 0 for axis in range(3) if axis != AXIS[side])


def _is_least(series: dict[str, float], total: float) -> bool:
    """Tell whether a spreading term below zero left no more of a resistance than it may."""
    least = max(LEAST_SHARE_LEFT * sum(series.values()), LEAST_RESISTANCE)
    return total <= least * (1.0 + 1e-9)


def _wall(label: LinkLabel) -> WallName:
    return _named(label.owner.partition(":")[2])


def _named(name: str) -> WallName:
    return next(wall for wall in WALL_NAMES if wall == name)


def _can(boards: dict[str, BoardCase], name: str) -> tuple[BoardCase, ShieldCanCase]:
    board, _, can = name.partition("/")
    return boards[board], next(each for each in boards[board].shield_cans if each.name == can)
