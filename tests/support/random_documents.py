"""Random valid documents of sealed boxes, as plain data.

Import it as ``from support.random_documents import random_document``. The same random state gives
the same document. Boxes of 30 mm to 2 m inside, up to 2 kW per square metre of open wall, air of
-40 to 70 C, 0 to 5000 m, wind of up to 5 m/s, any tilt, every kind of mounting, up to four boards
in any plane that share no space, most of them one behind the other, up to twenty parts with every
kind of path. Power that grows with temperature stays so small beside what cools its part that a
steady state exists.
"""

import math
import random
from collections.abc import Callable
from typing import Any

from enclosure_check.description.frames import AXIS, wall_pair
from enclosure_check.description.names import WALL_NAMES, WallName

Data = dict[str, Any]

MATERIALS = (
    "abs",
    "pc_abs",
    "polyester_smc",
    "aluminium_5052",
    "aluminium_die_cast",
    "copper",
    "mild_steel",
    "stainless_304",
    "glass",
)
FINISHES = (
    "white_paint",
    "grey_paint",
    "black_anodised",
    "bare_aluminium_rolled",
    "polished_steel",
    "galvanised_aged",
    "light_grey_plastic",
)
# Least free length, so that nothing pokes through by rounding. [mm]
_CLEAR = 0.2
# How often a place is looked for that is free.
_TRIES = 8
# What limits the power of a board or part: flux through its own surface, and rise over its paths.
_MOST_FLUX_W_PER_M2, _MOST_PATH_RISE_K = 2_000.0, 50.0


def random_document(rng: random.Random, most_boards: int = 4) -> Data:
    """Make one document."""
    return _Maker(rng, most_boards).document()


class _Maker:
    def __init__(self, rng: random.Random, most_boards: int) -> None:
        self.rng = rng
        self.most_boards = most_boards
        self.inside = [self.log(30, 2000) for _ in range(3)]
        self.heat: list[tuple[Data, str, float]] = []
        """Who takes power: the mapping, its key, and the most it may take [W]."""
        self.boards: list[tuple[list[float], list[float]]] = []
        """Low corners and sizes of the boards [mm]."""
        self.plane: WallName | None = None
        """The wall that most boards are parallel to."""

    def log(self, low: float, high: float) -> float:
        return math.exp(self.rng.uniform(math.log(low), math.log(high)))

    def chance(self, share: float) -> bool:
        return self.rng.random() < share

    def document(self) -> Data:
        rng = self.rng
        air_c = rng.uniform(-40, 70)
        walls = self.walls(air_c)
        boards: Data = {}
        for index in range(rng.randint(0, self.most_boards)):
            made = self.tried(self.board)
            if made is not None:
                boards[f"board {index}"] = made
        parts: Data = {}
        for index in range(rng.randint(0, 20)):
            made = self.part(boards)
            if made is not None:
                parts[f"P{index}"] = made
        self.share_power(walls, boards, parts)
        document: Data = {
            "title": "Made at random",
            "defaults": {
                "wall": {
                    "material": rng.choice(MATERIALS),
                    "thickness_mm": self.log(0.8, 6),
                    "finish_outside": rng.choice(FINISHES),
                }
            },
            "finishes": {"own": {"emissivity": rng.choice([0, 1, rng.random()])}},
            "box": {
                "width_mm": self.inside[0],
                "depth_mm": self.inside[1],
                "height_mm": self.inside[2],
                "tilt": self.tilt(),
            },
            "walls": walls,
            "boards": boards,
            "parts": parts,
            "modes": {"full": {}, "low": {"power_pct": 20}, "off": {"power_pct": 0}},
            "surroundings": self.surroundings(air_c, walls),
        }
        if self.chance(0.5):
            document["mode"] = rng.choice(["full", "full", "low", "off"])
        if self.chance(0.4):
            document["surroundings"] |= self.wind(walls)
        return document

    def wind(self, walls: Data) -> Data:
        """Wind of 0 to 5 m/s, as often weak as strong, from any side or from one that is free."""
        speed = self.rng.choice([0, self.rng.uniform(0, 5), self.log(0.01, 5)])
        given: Data = {"wind_m_per_s": speed}
        mounted = {
            name: wall["mounting"]["kind"] for name, wall in walls.items() if "mounting" in wall
        }
        free = [name for name in WALL_NAMES if mounted.get(name) in (None, "insulated")]
        if self.chance(0.5):
            given["wind_from"] = self.rng.choice(["any", *free])
        return given

    def tilt(self) -> Data:
        kind = self.rng.choice(["upright", "quarter", "any"])
        if kind == "upright":
            return {}
        if kind == "quarter":
            angles = [-180, -90, 0, 90, 180]
            return {
                "lean_back_deg": self.rng.choice(angles),
                "roll_right_deg": self.rng.choice(angles),
            }
        return {
            "lean_back_deg": self.rng.uniform(-180, 180),
            "roll_right_deg": self.rng.uniform(-180, 180),
        }

    def surroundings(self, air_c: float, walls: Data) -> Data:
        rng = self.rng
        given: Data = {"air_c": air_c, "altitude_m": rng.uniform(0, 5000)}
        if self.chance(0.3):
            given["radiant_c"] = air_c + rng.uniform(-20, 20)
        sky = rng.choice(["none", "none", "clear", "overcast", "given"])
        given["sky"] = sky
        if sky == "given":
            given["sky_c"] = air_c - rng.uniform(0, 40)
        if self.chance(0.4):
            lit = [name for name in WALL_NAMES if "mounting" not in walls.get(name, {})]
            given["sun_w_per_m2"] = {
                name: rng.uniform(0, 1100) for name in rng.sample(lit, rng.randint(1, len(lit)))
            }
        return given

    # Walls ---------------------------------------------------------------------------------

    def walls(self, air_c: float) -> Data:
        rng = self.rng
        walls: Data = {}
        mounted = rng.sample(WALL_NAMES, rng.choice([0, 1, 1, 1, 2, 3, 5]))
        for name in WALL_NAMES:
            wall: Data = {}
            if self.chance(0.25):
                wall["material"] = rng.choice(MATERIALS)
            if self.chance(0.25):
                wall["thickness_mm"] = self.log(0.8, 8)
            for key in ("finish_outside", "finish_inside"):
                if self.chance(0.25):
                    wall[key] = rng.choice([*FINISHES, "own"])
            if name in mounted:
                wall["mounting"] = self.mounting(air_c)
            if wall:
                walls[name] = wall
        return walls

    def mounting(self, air_c: float) -> Data:
        rng = self.rng
        kind = rng.choice(["against_surface", "neighbour", "standing_on", "bolted_to", "insulated"])
        mounting: Data = {"kind": kind}
        if kind != "insulated" and self.chance(0.6):
            mounting["surface_c"] = air_c + rng.uniform(-20, 30)
        if kind in ("against_surface", "neighbour"):
            if self.chance(0.7):
                mounting["gap_mm"] = self.log(0.1, 80)
            if self.chance(0.3):
                mounting["edges"] = rng.choice(["open", "closed"])
            if self.chance(0.5):
                mounting["surface_emissivity"] = rng.random()
        if kind == "bolted_to" or (kind == "standing_on" and self.chance(0.6)):
            mounting["contact_w_per_m2k"] = self.log(5, 5000)
        return mounting

    # Boards --------------------------------------------------------------------------------

    def tried(self, make: Callable[[], Data | None]) -> Data | None:
        """Try a few times to make what shares no space with a board."""
        return next((made for _ in range(_TRIES) if (made := make()) is not None), None)

    def corner(self, size: list[float], from_walls: dict[WallName, float]) -> list[float]:
        """Low corner of a body that stands so far from walls, in the middle of the others."""
        low = [(inside - edge) / 2 for inside, edge in zip(self.inside, size, strict=True)]
        for wall, distance in from_walls.items():
            axis = AXIS[wall]
            first, _ = wall_pair(axis)
            low[axis] = distance if wall == first else self.inside[axis] - size[axis] - distance
        return low

    def is_free(self, low: list[float], size: list[float]) -> bool:
        """Tell whether a body shares no space with any board."""
        return not any(
            all(
                a < b + of_b + _CLEAR and b < a + of_a + _CLEAR
                for a, of_a, b, of_b in zip(low, size, board_low, board_size, strict=True)
            )
            for board_low, board_size in self.boards
        )

    def board(self) -> Data | None:
        rng = self.rng
        parallel = rng.choice(WALL_NAMES)
        if self.plane is not None and self.chance(0.7):
            parallel = self.plane
        axis = AXIS[parallel]
        along = {0: (1, 2), 1: (0, 2), 2: (0, 1)}[axis]
        made: Data = {
            "parallel_to": parallel,
            "length_mm": self.inside[along[0]] * rng.uniform(0.3, 0.98),
            "width_mm": self.inside[along[1]] * rng.uniform(0.3, 0.98),
            "thickness_mm": rng.uniform(0.8, 2.4),
            "from_walls_mm": {},
        }
        if self.chance(0.8):
            room = self.inside[axis] - made["thickness_mm"] - 2 * _CLEAR
            made["from_walls_mm"][parallel] = rng.uniform(_CLEAR, room)
        size = [made["thickness_mm"]] * 3
        size[along[0]], size[along[1]] = made["length_mm"], made["width_mm"]
        low = self.corner(size, made["from_walls_mm"])
        if not self.is_free(low, size):
            return None
        self.boards.append((low, size))
        self.plane = parallel
        choice = rng.choice(["layers", "layers", "given", "bare"])
        if choice == "layers":
            made["copper"] = {
                f"layer {index}": {
                    "thickness_um": rng.choice([18, 35, 70]),
                    "coverage_pct": rng.uniform(0, 100),
                }
                for index in range(rng.randint(1, 6))
            }
        elif choice == "given":
            made["conductivity_in_plane_w_per_mk"] = self.log(0.5, 200)
        area = made["length_mm"] * made["width_mm"] * 2e-6
        self.heat.append((made, "other_power_w", area * _MOST_FLUX_W_PER_M2))
        return made

    # Parts ---------------------------------------------------------------------------------

    def part(self, boards: Data) -> Data | None:
        rng = self.rng
        place = rng.choice([*boards, *boards, *WALL_NAMES, "air"])
        if place in boards:
            return self.on_board(place, boards[place])
        if place == "air":
            return self.tried(self.in_the_air)
        axis = AXIS[place]
        right, up = {0: (1, 2), 1: (0, 2), 2: (0, 1)}[axis]
        made = self.on_face(self.inside[right], self.inside[up], self.inside[axis] * 0.6)
        made["place"] = place
        if self.chance(0.4):
            made["pad"] = self.pad(self.log(0.1, 3), made)
        self.paths(made, "wall")
        return made

    def in_the_air(self) -> Data | None:
        rng = self.rng
        size = [self.inside[axis] * rng.uniform(0.02, 0.5) for axis in range(3)]
        walls = [rng.choice(wall_pair(axis)) for axis in range(3) if self.chance(0.5)]
        from_walls = {
            wall: (self.inside[AXIS[wall]] - size[AXIS[wall]]) * rng.random() for wall in walls
        }
        if not self.is_free(self.corner(size, from_walls), size):
            return None
        made = self.body(size)
        made["place"], made["from_walls_mm"] = "air", from_walls
        if self.chance(0.3):
            made["rotation_deg"] = rng.choice([0, 180])
        self.paths(made, "air")
        return made

    def on_board(self, name: str, board: Data) -> Data | None:
        rng = self.rng
        axis = AXIS[board["parallel_to"]]
        side = rng.choice(wall_pair(axis))
        room = self.inside[axis] - board["thickness_mm"]
        near = board["from_walls_mm"].get(board["parallel_to"], room / 2)
        distance = near if side == board["parallel_to"] else room - near
        if distance < 2 * _CLEAR:
            return None
        made = self.on_face(board["length_mm"], board["width_mm"], distance - _CLEAR)
        made["place"], made["side"] = name, side
        free = distance - made["height_mm"]
        if self.chance(0.3):
            made["pad"] = self.pad(free * rng.uniform(1.001, 1.9), made)
            made["pad"]["to"] = side
        self.paths(made, "board")
        return made

    def on_face(self, along: float, across: float, most_height: float) -> Data:
        """A body somewhere on a face of the given size, turned or not."""
        rng = self.rng
        length, width = along * self.log(0.02, 0.5), across * self.log(0.02, 0.5)
        made = self.body([length, width, min(self.log(0.5, 40), most_height)])
        made["at_mm"] = [
            rng.uniform(length / 2, along - length / 2),
            rng.uniform(width / 2, across - width / 2),
        ]
        made["at_from"] = rng.choice(["lower_left", "lower_right", "upper_left", "upper_right"])
        turn = rng.choice([0, 90, 180, 270])
        if turn in (90, 270):
            made["length_mm"], made["width_mm"] = width, length
        made["rotation_deg"] = turn
        return made

    def body(self, size: list[float]) -> Data:
        made: Data = {"length_mm": size[0], "width_mm": size[1], "height_mm": size[2]}
        if self.chance(0.4):
            made["finish"] = self.rng.choice([*FINISHES, "own"])
        return made

    def pad(self, thickness: float, made: Data) -> Data:
        pad: Data = {
            "thickness_mm": thickness,
            "conductivity_w_per_mk": self.log(0.8, 8),
            "contact_mm2k_per_w": self.rng.choice([0, self.rng.uniform(5, 100)]),
        }
        if self.chance(0.3):
            small = 0.9 * min(made["length_mm"], made["width_mm"])
            pad["length_mm"] = pad["width_mm"] = small
        return pad

    def paths(self, made: Data, place: str) -> None:
        """Thermal resistances, and the most power that they let the part take."""
        rng = self.rng
        for key, share in (
            ("theta_jc_top_k_per_w", 0.5),
            ("theta_jc_bottom_k_per_w", 0.4),
            ("theta_jb_k_per_w", 0.4),
            ("bottom_contact_k_per_w", 0.4),
        ):
            if self.chance(share):
                made[key] = rng.choice([0, self.log(0.1, 80)])
        a, b, c = made["length_mm"], made["width_mm"], made["height_mm"]
        surface = 2e-6 * (a * b + b * c + c * a)
        most = surface * _MOST_FLUX_W_PER_M2
        top = made.get("theta_jc_top_k_per_w", 0)
        if top:
            most = min(most, _MOST_PATH_RISE_K / top)
        self.heat.append((made, "power_w", most))

    # Power ---------------------------------------------------------------------------------

    def share_power(self, walls: Data, boards: Data, parts: Data) -> None:
        """Share a total out, up to what each may take; sometimes none at all."""
        rng = self.rng
        kept = [*boards.values(), *parts.values()]
        takers = [row for row in self.heat if any(row[0] is each for each in kept)]
        if not takers or self.chance(0.05):
            return
        sizes = self.inside
        area = sum(
            1e-6 * math.prod(size for axis, size in enumerate(sizes) if axis != AXIS[name])
            for name in WALL_NAMES
            if "mounting" not in walls.get(name, {})
        )
        total = area * self.log(1, 2000)
        weights = [rng.random() ** 3 for _ in takers]
        scale = total / sum(weights)
        for (owner, key, most), weight in zip(takers, weights, strict=True):
            owner[key] = min(weight * scale, most)
            if key == "power_w" and self.chance(0.25):
                owner["power_by_mode_w"] = {"low": owner[key] * rng.random()}
            if key == "power_w" and self.chance(0.25):
                self.growth(owner, most, area)

    def growth(self, owner: Data, most: float, area: float) -> None:
        """Let the power of a part grow with its temperature, a little."""
        rng = self.rng
        # At 10 W/m2K, what a further watt warms the part and the box by.
        surface = most / _MOST_FLUX_W_PER_M2
        warms = 0.1 / surface + 0.1 / area + owner.get("theta_jc_top_k_per_w", 0)
        least_k = max(30.0, 10 * owner["power_w"] * warms)
        owner["power_at_c"] = rng.uniform(25, 125)
        if self.chance(0.5):
            owner["power_slope_pct_per_k"] = rng.choice([-1, 1]) * min(0.5, 20 / least_k)
        elif least_k < 900:
            owner["power_doubling_k"] = rng.uniform(least_k, 1000)


def with_strong_growth(document: Data, rng: random.Random) -> Data:
    """Let the power of half of the parts grow with temperature, enough to run away here and there."""
    image = {**document, "parts": {name: {**row} for name, row in document["parts"].items()}}
    for row in image["parts"].values():
        if row.get("power_w") and rng.random() < 0.5:
            for key in ("power_slope_pct_per_k", "power_doubling_k"):
                row.pop(key, None)
            row["power_at_c"] = rng.uniform(0, 150)
            if rng.random() < 0.5:
                row["power_slope_pct_per_k"] = rng.uniform(0, 3)
            else:
                row["power_doubling_k"] = rng.uniform(5, 60)
    return image
