"""Steel cabinets: the air inside by our model beside two methods of practice.

Both methods rest on an effective area: every face of a cabinet times a factor for how it stands.

- Area method (DIN 57660-500 / VDE 0660-500): rise of the air inside, even throughout,
  ``P / (k A_e)`` with k = 5.5 W/(m2 K) for painted sheet steel. Formulas and k as published.
- IEC TR 60890: rise at mid height ``k d P^x``, d = 1 without partitions, x = 0.804. Its tables are
  recalled: ``k = 0.618 A_e^-0.737`` to 1.25 m2 (which fits what is remembered to the third digit),
  a table of medium confidence above.

They are rules of practice, no measurements, and differ from each other by a third.

Vented, with perforated areas low and high in the front: the constants of IEC's curves for vented
cabinets are not recalled, and the area method knows no vents. There is Ishizuka's set for naturally
cooled casings (M. Ishizuka, Y. Miyazaki, T. Sasaki, 1986, ASME HTD-57, 65-72, from memory, medium
confidence), ``Q = 1.78 S dT^1.25 + 300 A0 (h/K)^0.5 (1.3 dT)^1.5``: dT the mean rise of the air, S the
surface with half of the floor, A0 the outlet and h its height over the heater, ``K = 2.5 (1 - f)/f^2``.

The cabinets are invented. Their heat comes from one upright mounting plate of sheet steel at half
depth, all over it, once as radiating as painted parts are and once nearly as little as bare
galvanised sheet is: what goes straight to the walls by radiation does not warm the air.

Run it as ``python tests/published/cabinets.py`` for the table.
"""

import sys
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

if __name__ == "__main__":
    sys.path[:0] = [str(Path(__file__).resolve().parents[1])]

import numpy as np
from scipy.optimize import brentq
from support.cases import Data, solved

# Rise the power of each cabinet is chosen for, by the area method [K].
RISE_K = 15.0
STEEL_W_PER_M2K = 5.5
ROOM_C = 30.0
# Emissivity of the mounting plate and what stands on it.
PAINTED, BARE = 0.9, 0.1
# A wall-mounted cabinet's distance from the wall; the effective area takes the back as covered. [mm]
BEHIND_MM = 10.0
# Each vent, of the width and the height of the front, and what is open of it.
VENT_WIDE, VENT_HIGH, VENT_SHARE = 0.8, 0.1, 0.4

_LARGE_AREA = (1.25, 1.5, 2, 2.5, 3, 3.5, 4, 4.5, 5, 6, 7, 8, 9, 10, 12)
_LARGE_K = (0.524, 0.45, 0.35, 0.275, 0.225, 0.20, 0.185, 0.17, 0.16, 0.14, 0.13, 0.12, 0.11, 0.10)
_LARGE_K += (0.08,)


@dataclass(frozen=True)
class Cabinet:
    """A cabinet, sizes in m."""

    height: float
    width: float
    depth: float
    on_wall: bool

    @property
    def name(self) -> str:
        """Sizes and how it stands."""
        how = "on a wall" if self.on_wall else "free"
        return f"{self.height:g} x {self.width:g} x {self.depth:g}, {how}"

    @property
    def effective_area(self) -> float:
        """Area with its factors [m2]."""
        h, w, d = self.height, self.width, self.depth
        if self.on_wall:
            return 1.4 * w * (h + d) + 1.8 * d * h
        return 1.8 * h * (w + d) + 1.4 * w * d

    @property
    def power_w(self) -> float:
        """Power chosen for `RISE_K` [W]."""
        return STEEL_W_PER_M2K * self.effective_area * RISE_K


CABINETS = (
    Cabinet(0.3, 0.3, 0.2, True),
    Cabinet(0.6, 0.4, 0.25, True),
    Cabinet(0.8, 0.6, 0.3, True),
    Cabinet(1.2, 0.6, 0.4, False),
    Cabinet(1.8, 0.8, 0.5, False),
    Cabinet(2.0, 1.2, 0.6, False),
)


def iec_rise_k(area: float, power_w: float) -> float:
    """Rise of the air at mid height of a closed cabinet without partitions [K]."""
    small = 0.618 * area**-0.737
    k = small if area <= _LARGE_AREA[0] else float(np.interp(area, _LARGE_AREA, _LARGE_K))
    return k * power_w**0.804


def vents(cabinet: Cabinet) -> Data:
    """Perforated areas across most of the front, a tenth of its height, low and high."""
    width, height = 1000 * cabinet.width, 1000 * cabinet.height
    area = {
        "kind": "perforated",
        "width_mm": VENT_WIDE * width,
        "height_mm": VENT_HIGH * height,
        "hole_mm": 5,
        "free_area_pct": 100 * VENT_SHARE,
    }
    middle = (VENT_HIGH / 2 + 0.02) * height
    return {
        "front": {
            "low": {**area, "at_mm": [width / 2, middle]},
            "high": {**area, "at_mm": [width / 2, height - middle]},
        }
    }


def ishizuka_rise_k(cabinet: Cabinet) -> float:
    """Rise of the air that leaves the vented cabinet [K]."""
    h, w, d = cabinet.height, cabinet.width, cabinet.depth
    surface = w * d + 2 * h * (w + d) + 0.5 * w * d
    if cabinet.on_wall:
        surface -= w * h
    outlet = VENT_WIDE * w * VENT_HIGH * h
    loss = 2.5 * (1 - VENT_SHARE) / VENT_SHARE**2
    # From the middle of the plate, which is heated all over, to the middle of the outlet.
    over = (0.5 - VENT_HIGH / 2 - 0.02) * h

    def heat(rise: float) -> float:
        drawn = 300 * outlet * (over / loss) ** 0.5 * (1.3 * rise) ** 1.5
        return float(1.78 * surface * rise**1.25 + drawn) - cabinet.power_w

    return 1.3 * float(brentq(heat, 0.01, 500.0))


def document(cabinet: Cabinet, emissivity: float, openings: Data | None = None) -> Data:
    """The cabinet as a document; ``openings`` by wall."""
    mm = {key: 1000 * getattr(cabinet, key) for key in ("width", "height", "depth")}
    walls: Data = {"bottom": {"mounting": {"kind": "standing_on"}}}
    if cabinet.on_wall:
        walls = {"back": {"mounting": {"kind": "against_surface", "gap_mm": BEHIND_MM}}}
    for wall, rows in (openings or {}).items():
        walls.setdefault(wall, {})["openings"] = rows
    return {
        "title": cabinet.name,
        "defaults": {
            "wall": {
                "material": "mild_steel",
                "thickness_mm": 1.5,
                "finish_outside": "light_grey_paint",
            }
        },
        "box": {f"{key}_mm": value for key, value in mm.items()},
        "finishes": {"plate": {"emissivity": emissivity, "solar_absorptivity": 0.5}},
        "walls": walls,
        "boards": {
            "plate": {
                "parallel_to": "back",
                "length_mm": 0.86 * mm["width"],
                "width_mm": 0.9 * mm["height"],
                "thickness_mm": 2,
                "material": "mild_steel",
                "finish": "plate",
                "other_power_w": cabinet.power_w,
            }
        },
        "surroundings": {"air_c": ROOM_C},
    }


@dataclass(frozen=True)
class Ours:
    """What our model finds, rises over the room."""

    middle_k: float
    top_k: float
    outlet_k: float
    """Rise of the air at the height of the upper vent, or where it would be."""
    straight: float
    """Share of the power that the plate radiates to the walls."""
    vented: float
    """Share that air through openings carries away."""


@cache
def ours(cabinet: Cabinet, emissivity: float, vented: bool = False) -> Ours:
    """Solve a cabinet and read off its air."""
    openings = vents(cabinet) if vented else None
    found: Any = solved(document(cabinet, emissivity, openings))
    places = found.network.places
    air = found.temperature_c[places.air_nodes] - ROOM_C
    heights = np.asarray(places.air_heights) / cabinet.height
    return Ours(
        middle_k=float(np.interp(0.5, heights, air)),
        top_k=float(air[-1]),
        outlet_k=float(np.interp(1 - VENT_HIGH / 2 - 0.02, heights, air)),
        vented=sum(found.flow(f"opening:front/{name}", "openings") for name in ("low", "high"))
        / cabinet.power_w,
        straight=found.flow("board:plate", "radiation_inside") / cabinet.power_w,
    )


def rows() -> list[list[str]]:
    """The table of sealed cabinets, as cells of text."""
    table = []
    for cabinet in CABINETS:
        area, power = cabinet.effective_area, cabinet.power_w
        iec = iec_rise_k(area, power)
        for emissivity in (PAINTED, BARE):
            found = ours(cabinet, emissivity)
            table.append(
                [
                    cabinet.name,
                    f"{area:.2f}",
                    f"{power:.0f}",
                    f"{found.straight:.2f}",
                    f"{found.middle_k:.1f}",
                    f"{found.top_k:.1f}",
                    f"{RISE_K:.0f}",
                    f"{iec:.1f}",
                    f"{found.middle_k / RISE_K:.2f}",
                    f"{found.middle_k / iec:.2f}",
                ]
            )
    return table


def vented_rows() -> list[list[str]]:
    """The table of vented cabinets, as cells of text."""
    table = []
    for cabinet in CABINETS:
        practice = ishizuka_rise_k(cabinet)
        for emissivity in (PAINTED, BARE):
            found, sealed = ours(cabinet, emissivity, True), ours(cabinet, emissivity)
            table.append(
                [
                    cabinet.name,
                    f"{cabinet.power_w:.0f}",
                    f"{found.straight:.2f}",
                    f"{found.vented:.2f}",
                    f"{found.middle_k:.1f}",
                    f"{found.top_k:.1f}",
                    f"{found.outlet_k:.1f}",
                    f"{practice:.1f}",
                    f"{found.outlet_k / practice:.2f}",
                    f"{found.middle_k / sealed.middle_k:.2f}",
                ]
            )
    return table


if __name__ == "__main__":
    for cells in rows() + vented_rows():
        print(" | ".join(cells))
