"""The heat balances of a case, written down a second time, as a dictionary of plain equations.

Not by the network: one node at a time, in plain Python and scalars, from the case alone. Laws come
from `physics`, nothing comes from `network` or `solve`. Temperatures in kelvin, by name of node.
"""

import math
from collections import defaultdict
from collections.abc import Callable

import numpy as np

from enclosure_check.description.case import Case, PartCase, WallCase
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.bodies import cuboid_film, cuboid_gravity_function_tilted
from enclosure_check.physics.box import box_film, box_geometry
from enclosure_check.physics.conduction import spreading_resistance
from enclosure_check.physics.plates import fall_length, inclined_plate
from enclosure_check.physics.radiation import mean_radiant_exchange_areas, sky_temperature_clear

Temperatures = dict[str, float]
Heat = Callable[[Temperatures], float]

ZERO_C = 273.15
SIGMA = 5.670374419e-8
COPPER = 386.0
WALLS = {
    "left": (0, -1),
    "right": (0, 1),
    "front": (1, -1),
    "back": (1, 1),
    "bottom": (2, -1),
    "top": (2, 1),
}
OTHER_SIDE = {"left": "right", "front": "back", "bottom": "top"}
OTHER_SIDE |= {value: key for key, value in OTHER_SIDE.items()}


class Balances:
    """Equations of one case: who gives heat to whom."""

    def __init__(self, case: Case) -> None:
        self.case = case
        around = case.surroundings
        self.given: Temperatures = {
            "ambient": around.air_c + ZERO_C,
            "radiant": around.radiant_c + ZERO_C,
        }
        self.pressure = float(pressure_at_altitude(around.altitude_m))
        if around.sky != "none":
            self.given["sky"] = {
                "clear": float(sky_temperature_clear(self.given["ambient"])),
                "overcast": self.given["ambient"],
                "given": (around.sky_c or 0.0) + ZERO_C,
            }[around.sky]
        self.between: list[tuple[str, str, Heat]] = []
        self.into: list[tuple[str, Heat]] = []
        self.covered: dict[str, float] = defaultdict(float)
        self.radiating: list[tuple[str, float, float]] = []
        self.inside = [size / 1000 for size in case.inside_mm]
        self.outside = [size / 1000 for size in case.outside_mm]
        self.still_air = float(air(self.given["ambient"], self.pressure).conductivity)
        for part in case.parts.values():
            self._cover(part)
        for wall in case.walls.values():
            self._wall(wall)
        self._corners()
        self._box()
        self._boards()
        for part in case.parts.values():
            self._part(part)
        self._inside_radiation()
        nodes = {node for one, other, _ in self.between for node in (one, other)}
        self.unknown = sorted(nodes - set(self.given))

    def residual(self, values: np.ndarray) -> np.ndarray:
        """Heat leaving each unknown node less heat put in [W]."""
        at = {**self.given, **dict(zip(self.unknown, values.tolist(), strict=True))}
        leaves: dict[str, float] = dict.fromkeys(at, 0.0)
        for one, other, heat in self.between:
            watts = heat(at)
            leaves[one] += watts
            leaves[other] -= watts
        for node, heat in self.into:
            leaves[node] -= heat(at)
        return np.array([leaves[node] for node in self.unknown])

    # The few ways heat goes ------------------------------------------------------------------

    def _conducts(self, one: str, other: str, conductance: float) -> None:
        self.between.append((one, other, lambda at: conductance * (at[one] - at[other])))

    def _radiates(self, one: str, other: str, grey_area: float) -> None:
        factor = SIGMA * grey_area
        self.between.append((one, other, lambda at: factor * (at[one] ** 4 - at[other] ** 4)))

    def _plate(self, node: str, area: float, size: list[float], axis: int, sign: int) -> None:
        """A plane face in the inside air."""
        first, second = (other for other in range(3) if other != axis)
        a, b, up = size[first], size[second], self.case.up
        fall = float(fall_length(a, b, up[first], up[second]))
        span, cosine = a * b / (2 * a + 2 * b), sign * up[axis]

        def heat(at: Temperatures) -> float:
            rise, film = at[node] - at["air"], 0.5 * (at[node] + at["air"])
            law = inclined_plate(rise, film, self.pressure, fall, span, cosine)
            return float(law.coefficient) * area * rise

        self.between.append((node, "air", heat))

    # The box ---------------------------------------------------------------------------------

    def _face(self, size: list[float], axis: int) -> float:
        return math.prod(size[other] for other in range(3) if other != axis)

    def _wall(self, wall: WallCase) -> None:
        axis, sign = WALLS[wall.name]
        outer, inner = f"{wall.name} outside", f"{wall.name} inside"
        area_in, area_out = self._face(self.inside, axis), self._face(self.outside, axis)
        through = wall.material.conductivity_w_per_mk * math.sqrt(area_in * area_out)
        self._conducts(inner, outer, through / (wall.thickness_mm / 1000))
        free = area_in - self.covered[wall.name]
        self._plate(inner, free, self.inside, axis, -sign)
        self.radiating.append((inner, free, wall.finish_inside.emissivity))
        self._mounting(wall, outer, area_out, sign * self.case.up[axis])

    def _mounting(self, wall: WallCase, outer: str, area: float, cosine: float) -> None:
        emissivity, made = wall.finish_outside.emissivity, wall.mounting
        if made.kind == "open_air":
            to_sky = (1 + cosine) / 2 if "sky" in self.given else 0.0
            self._radiates(outer, "radiant", emissivity * area * (1 - to_sky))
            if to_sky > 0:
                self._radiates(outer, "sky", emissivity * area * to_sky)
            absorbed = wall.finish_outside.solar_absorptivity * area * wall.sun_w_per_m2
            self.into.append((outer, lambda _: absorbed))
            return
        if made.kind == "insulated":
            return
        surface = f"behind {wall.name}"
        self.given[surface] = made.surface_c + ZERO_C
        if made.kind == "against_surface":
            self._conducts(outer, surface, self.still_air * area / (made.gap_mm / 1000))
            if emissivity > 0 and made.surface_emissivity > 0:
                grey = area / (1 / emissivity + 1 / made.surface_emissivity - 1)
                self._radiates(outer, surface, grey)
        else:
            self._conducts(outer, surface, made.contact_w_per_m2k * area)

    def _sheet(self, name: str) -> float:
        wall = next(wall for wall in self.case.walls.values() if wall.name == name)
        return wall.material.in_plane_conductivity_w_per_mk * wall.thickness_mm / 1000

    def _corners(self) -> None:
        names = list(WALLS)
        for index, one in enumerate(names):
            for other in names[index + 1 :]:
                a, b = WALLS[one][0], WALLS[other][0]
                if a == b:
                    continue
                edge = self.inside[3 - a - b]
                # Each half of the wall's thickness at one of its faces.
                away_one = self.inside[b] / (3 * self._sheet(one) / 2 * edge)
                away_other = self.inside[a] / (3 * self._sheet(other) / 2 * edge)
                for face in ("outside", "inside"):
                    joint = 1 / (away_one + away_other)
                    self._conducts(f"{one} {face}", f"{other} {face}", joint)

    def _box(self) -> None:
        is_open = [self.case.walls[name].mounting.kind == "open_air" for name in WALLS]  # type: ignore[index]
        shape = box_geometry(self.outside, self.case.up, is_open)
        nodes = [f"{name} outside" for name in WALLS]

        def face_heat(index: int) -> Heat:
            def heat(at: Temperatures) -> float:
                faces = np.array([at[node] for node in nodes])
                film = box_film(faces, at["ambient"], self.pressure, shape)
                area = self._face(self.outside, index // 2)
                return float(film.coefficient[index]) * area * float(faces[index] - at["ambient"])

            return heat

        for index, node in enumerate(nodes):
            self.between.append((node, "ambient", face_heat(index)))

    # Boards ----------------------------------------------------------------------------------

    def _board_conductivity(self, name: str) -> tuple[float, float]:
        """Along the board the layers act side by side, through it one after the other."""
        board = self.case.boards[name]
        whole = board.size_mm[board.axis]
        rest = whole - sum(layer.thickness_um / 1000 for layer in board.copper)
        along = rest * board.laminate.in_plane_conductivity_w_per_mk
        across = rest / board.laminate.conductivity_w_per_mk
        for layer in board.copper:
            thickness, share = layer.thickness_um / 1000, layer.coverage_pct / 100
            fill = board.laminate.in_plane_conductivity_w_per_mk
            along += thickness * (COPPER * share + fill * (1 - share))
            fill = board.laminate.conductivity_w_per_mk
            across += thickness / (COPPER * share + fill * (1 - share))
        given = board.conductivity_in_plane_w_per_mk
        return (along / whole if given is None else given), whole / across

    def _boards(self) -> None:
        for name, board in self.case.boards.items():
            size = [length / 1000 for length in board.size_mm]
            first, second = (axis for axis in range(3) if axis != board.axis)
            area, thick = size[first] * size[second], size[board.axis]
            rim = (size[first] + size[second]) * thick
            sides = [side for side, (axis, _) in WALLS.items() if axis == board.axis]
            for side in sides:
                node = f"{name} {side}"
                bare = area - self.covered[node] + rim
                self._plate(node, bare, size, board.axis, WALLS[side][1])
                self.radiating.append((node, bare, board.finish.emissivity))
                half = board.other_power_w / 2
                self.into.append((node, lambda _, half=half: half))
            through = self._board_conductivity(name)[1] * area / thick
            self._conducts(f"{name} {sides[0]}", f"{name} {sides[1]}", through)

    # Parts -----------------------------------------------------------------------------------

    def _foot(self, part: PartCase) -> float:
        axis = WALLS[part.side][0]
        return math.prod(part.size_mm[other] for other in range(3) if other != axis) * 1e-6

    def _cover(self, part: PartCase) -> None:
        if part.place == "board":
            self.covered[f"{part.host} {part.side}"] += self._foot(part)
            if part.pad is not None:
                self.covered[part.pad.wall] += part.pad.area_mm2 * 1e-6
        elif part.place == "wall":
            self.covered[part.host] += self._foot(part)

    def _part(self, part: PartCase) -> None:
        junction, case = f"{part.name} junction", f"{part.name} case"
        if not part.theta_jc_top_k_per_w:
            case = junction
        else:
            self._conducts(junction, case, 1 / part.theta_jc_top_k_per_w)
        self.into.append((junction, self._power(part, junction)))
        size = [length / 1000 for length in part.size_mm]
        whole = 2 * (size[0] * size[1] + size[1] * size[2] + size[2] * size[0])
        bare = whole
        if part.place == "air":
            self._body(case, bare, whole, size)
        elif part.place == "wall":
            bare -= self._foot(part)
            doubled = [*size]
            doubled[WALLS[part.side][0]] *= 2
            self._body(case, bare, 2 * bare, doubled)
            self._to_plate(part, junction, OTHER_SIDE[part.side])
        else:
            bare -= self._foot(part) + (part.pad.area_mm2 * 1e-6 if part.pad else 0.0)
            board = [length / 1000 for length in self.case.boards[part.host].size_mm]
            axis, sign = WALLS[part.side]
            self._plate(case, bare, board, axis, sign)
            self._to_plate(part, junction, part.host)
            if part.pad is not None:
                spread = self._spread(part.pad.wall, part.pad.low_mm, part.pad.size_mm)
                spot = f"{part.name} pad foot"
                self._resists(spot, f"{part.pad.wall} inside", spread)
                self._conducts(case, spot, 1 / self._pad(part))
        self.radiating.append((case, bare, part.finish.emissivity))

    def _power(self, part: PartCase, junction: str) -> Heat:
        stated, slope = part.power_at_c + ZERO_C, part.power_slope_pct_per_k / 100

        def heat(at: Temperatures) -> float:
            over = at[junction] - stated
            line = max(1 + slope * over, 0.0)
            double = 1.0 if part.power_doubling_k is None else 2 ** (over / part.power_doubling_k)
            return part.power_w * line * double

        return heat

    def _body(self, node: str, area: float, law_area: float, size: list[float]) -> None:
        gravity = float(cuboid_gravity_function_tilted(size, self.case.up))

        def heat(at: Temperatures) -> float:
            rise, film = at[node] - at["air"], 0.5 * (at[node] + at["air"])
            law = cuboid_film(rise, film, self.pressure, law_area, gravity)
            return float(law.coefficient) * area * rise

        self.between.append((node, "air", heat))

    def _resists(self, one: str, other: str, resistance: float) -> None:
        if resistance > 0:
            self._conducts(one, other, 1 / resistance)
        else:
            raise ValueError("a spot as large as its plate: join it to the plate itself")

    def _to_plate(self, part: PartCase, junction: str, host: str) -> None:
        foot = f"{part.name} foot"
        if part.place == "board":
            under = f"{host} {part.side}"
            spread = self._spread(host, part.low_mm, part.size_mm)
        else:
            under = f"{host} inside"
            touches = part if part.pad is None else part.pad
            spread = self._spread(host, touches.low_mm, touches.size_mm)
        self._resists(foot, under, spread)
        bottom, joint = part.theta_jc_bottom_k_per_w, part.bottom_contact_k_per_w
        air_gap = 1e-4 / (self.still_air * self._foot(part))
        if part.place == "board" and part.theta_jb_k_per_w is not None:
            resistance = part.theta_jb_k_per_w
        elif part.place == "board":
            if joint is None:
                joint = 0.0 if bottom is not None else air_gap
            resistance = (bottom or 0.0) + joint
        elif part.pad is not None:
            resistance = (bottom or 0.0) + self._pad(part)
        else:
            resistance = (bottom or 0.0) + (air_gap if joint is None else joint)
        self._conducts(junction, foot, 1 / max(resistance, 1e-4))

    def _pad(self, part: PartCase) -> float:
        pad = part.pad
        assert pad is not None
        area = pad.area_mm2 * 1e-6
        bulk = pad.distance_mm / 1000 / (pad.conductivity_w_per_mk * area)
        return bulk + pad.contact_mm2k_per_w * 1e-6 / area

    def _spread(self, host: str, low_mm: tuple[float, ...], size_mm: tuple[float, ...]) -> float:
        """From the spot to the mean of its plate; two films of 10 W/m2K assumed."""
        if host in WALLS:
            axis, corner, plate = WALLS[host][0], (0.0, 0.0, 0.0), self.inside
            sheet = self._sheet(host)
        else:
            board = self.case.boards[host]
            axis, corner = board.axis, board.low_mm
            plate = [length / 1000 for length in board.size_mm]
            sheet = self._board_conductivity(host)[0] * board.size_mm[axis] / 1000
        p, q = (other for other in range(3) if other != axis)
        centre = [(low_mm[i] + size_mm[i] / 2 - corner[i]) / 1000 for i in range(3)]
        return float(
            spreading_resistance(
                size_mm[p] / 1000,
                size_mm[q] / 1000,
                centre[p],
                centre[q],
                plate[p],
                plate[q],
                sheet,
                20.0,
            )
        )

    # Radiation inside ------------------------------------------------------------------------

    def _inside_radiation(self) -> None:
        seen = [row for row in self.radiating if row[1] > 0]
        exchange = mean_radiant_exchange_areas([area for _, area, _ in seen])
        for (node, area, emissivity), space in zip(seen, exchange.tolist(), strict=True):
            if emissivity > 0:
                grey = 1 / (1 / space + (1 - emissivity) / (emissivity * area))
                self._radiates(node, "radiant mean", grey)
