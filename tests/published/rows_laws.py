"""Rung 1: laws and properties against printed numbers, with the source's own properties of air.

Nothing but arithmetic can differ where the law is the same, so the band is one percent there; where
another law or measurement is beside ours it is the accuracy of ours by the register.
"""

import numpy as np
from published import sources as by
from published.evidence_row import SAME_LAW_PCT, Row, Seen, accuracy, row

from enclosure_check.physics import plates
from enclosure_check.physics.air import air, pressure_at_altitude
from enclosure_check.physics.bodies import horizontal_cylinder, morgan_cylinder
from enclosure_check.physics.cavity import channel_share, closed_cavity
from enclosure_check.physics.conduction import azar_graebner, effective_conductivity
from enclosure_check.physics.radiation import parallel_plates, radiation_coefficient
from enclosure_check.physics.wind import flat_plate_in_wind

G = 9.81


def _rayleigh(film_k: float, rise: float, length: float, nu: float, alpha: float) -> float:
    return G / film_k * rise * length**3 / (nu * alpha)


def plate_rows() -> list[Row]:
    """Upright and level plates."""
    rows = []
    for case, source, place, law, film, rise, height, nu, alpha, k, area, nusselt, watts in (
        ("plate 0.71 m, 232/23 C", by.INCROPERA, "example 9.2", plates.churchill_chu,
         400.0, 209.0, 0.71, 26.4e-6, 38.3e-6, 0.0338, 0.7242, 147.0, 1060.0),
        ("plate 0.6 m, 90/30 C", by.CENGEL, "example 9-2a", plates.churchill_chu,
         333.0, 60.0, 0.6, 1.896e-5, 1.896e-5 / 0.7202, 0.02808, 0.36, 113.3, 114.6),
        ("plate 4 m, 60/10 C", by.HOLMAN, "example 7-2", plates.vertical_plate,
         308.0, 50.0, 4.0, 16.5e-6, 16.5e-6 / 0.7, 0.02685, 40.0, 715.0, 9603.0),
    ):  # fmt: skip
        ours = float(law(_rayleigh(film, rise, height, nu, alpha), nu / alpha))
        heat = ours * k / height * area * rise
        for quantity, theirs, got in (("Nu", nusselt, ours), ("heat, W", watts, heat)):
            rows.append(
                row(1, "worked example", case, source, place, "seen", quantity, theirs, got,
                    pct=SAME_LAW_PCT)
            )  # fmt: skip
    ra = G / 343.0 * 60.0 * 0.5**3 / 20.02e-6**2 * 0.694
    level = 1.195e7
    for case, source, place, seen, theirs, ours in (
        ("plate 0.5 m, laminar law", by.SUKHATME, "example 6.1", "seen", 71.89,
         plates.vertical_plate(ra, 0.694)),
        ("plate, full law, Pr 0.69, Gr 2.63e9", by.HT_LIBRARY, "upright plate", "computed",
         147.1618522, plates.churchill_chu(0.69 * 2.63e9, 0.69)),
        ("level plate, warm side up, Ra 1.195e7", by.CENGEL, "example 9-2b", "memory", 31.7,
         plates.hot_side_up_laminar(level)),
        ("level plate, warm side down, Ra 1.195e7", by.CENGEL, "example 9-2c", "memory", 15.9,
         plates.mcadams_down(level)),
        ("level plate, warm side up, Ra 1.78e9", by.HT_LIBRARY, "McAdams", "computed", 181.7312,
         plates.hot_side_up(5.54 * 3.21e8)),
        ("level plate, warm side down, Ra 1.78e9", by.HT_LIBRARY, "McAdams", "computed", 55.4456,
         plates.mcadams_down(5.54 * 3.21e8)),
    ):  # fmt: skip
        rows.append(
            row(1, "worked example", case, source, place, _seen(seen), "Nu", theirs, ours,
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    return rows


def _seen(text: str) -> Seen:
    assert text in ("seen", "computed", "memory")
    return text  # type: ignore[return-value]  # one of the three, as just asserted


def cylinder_rows() -> list[Row]:
    """Horizontal cylinders."""
    rows = []
    for case, source, place, seen, theirs, ours in (
        ("cylinder, Ra 1.867e6", by.CENGEL, "example 9-1", "memory", 17.4,
         horizontal_cylinder(1.867e6, 0.7228)),
        ("cylinder, Churchill & Chu, Pr 0.69, Gr 2.63e9", by.HT_LIBRARY, "horizontal cylinder",
         "computed", 139.1349, horizontal_cylinder(0.69 * 2.63e9, 0.69)),
        ("cylinder, Morgan, Ra 1.867e6", by.HT_LIBRARY, "horizontal cylinder", "computed", 17.74,
         morgan_cylinder(1.867e6)),
    ):  # fmt: skip
        rows.append(
            row(1, "worked example", case, source, place, _seen(seen), "Nu", theirs, ours,
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    rows += [
        row(1, "measured", f"cylinder, Ra {ra:g}", by.MORGAN, "his table of laws", "memory", "Nu",
            float(morgan_cylinder(ra)), horizontal_cylinder(ra, 0.71),
            pct=accuracy("churchill_chu_1975_cylinder"),
            why="Churchill & Chu run low below Ra 1e4" if ra < 1e4 else "")
        for ra in (1e2, 1e4, 1e6)
    ]  # fmt: skip
    return rows


_HOLLANDS = (
    (3e3, (1.620, 1.262, 1.000)),
    (1e4, (2.391, 2.135, 1.649)),
    (1e5, (3.994, 3.850, 3.394)),
    (1e6, (6.994, 6.731, 5.841)),
)
_ELSHERBINY = (
    (20, 1e3, 1.000),
    (20, 1e4, 1.312),
    (20, 1e5, 3.002),
    (10, 1e6, 6.05),
    (40, 1.05e4, 1.325),
)


def cavity_rows() -> list[Row]:
    """Closed gaps: laws recalled, their numbers worked apart from the program."""
    rows = []
    for ra, numbers in _HOLLANDS:
        for tilt, theirs in zip((0, 30, 60), numbers, strict=True):
            ours = closed_cavity(ra, 20.0, np.cos(np.radians(tilt)))
            rows.append(
                row(1, "worked example", f"gap heated below, {tilt} deg from level, Ra {ra:g}",
                    by.HOLLANDS, "law", "computed", "Nu", theirs, ours, pct=SAME_LAW_PCT)
            )  # fmt: skip
    for aspect, ra, theirs in _ELSHERBINY:
        rows.append(
            row(1, "worked example", f"upright gap, height/width {aspect}, Ra {ra:g}",
                by.ELSHERBINY, "law", "computed", "Nu", theirs, closed_cavity(ra, aspect, 0.0),
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    rows.append(
        row(1, "worked example", "level gap heated below, Ra 10000", by.HT_LIBRARY,
            "Rayleigh-Benard after Hollands", "computed", "Nu", 2.360,
            closed_cavity(1e4, 20.0, 1.0), pct=accuracy("hollands_heated_below"),
            why="the library has the later form for any Pr, ours is that for air")
    )  # fmt: skip
    for ra, theirs in ((1e5, 3.12), (1e6, 6.73)):
        rows.append(
            row(1, "measured", f"level gap heated below, Ra {ra:g}", by.GLOBE_DROPKIN,
                "law through their data", "computed", "Nu", theirs, closed_cavity(ra, 20.0, 1.0),
                pct=accuracy("hollands_heated_below"),
                why="liquids; stated for Ra above 3e5 (from memory)" if ra < 3e5 else "liquids")
        )  # fmt: skip
    return rows


def channel_nusselt(elenbaas: float) -> float:
    """Our channel law as a Nusselt number on the width."""
    share = float(channel_share(elenbaas, 1.0, 1.0, 1.0, 1.0))
    return share * (elenbaas**0.5 / 2.873) ** 0.5


def channel_rows() -> list[Row]:
    """Parallel upright plates."""
    rows = []
    for elenbaas, theirs, measured in (
        (1.0, 0.0416, 0.0417), (10.0, 0.387, 0.407), (54.3, 1.307, 1.295), (100.0, 1.703, 1.669),
        (1e3, 3.307, 3.328), (1e4, 5.899, 5.988),
    ):  # fmt: skip
        ours, case = channel_nusselt(elenbaas), f"channel of two like plates, El {elenbaas:g}"
        rows.append(
            row(1, "worked example", case, by.BAR_COHEN, "law", "computed", "Nu", theirs, ours,
                pct=SAME_LAW_PCT)
        )  # fmt: skip
        rows.append(
            row(1, "measured", case, by.ELENBAAS, "law", "computed", "Nu", measured, ours,
                pct=accuracy("bar_cohen_rohsenow_channel"),
                why="Bar-Cohen & Rohsenow's own form is 4.9 % below Elenbaas' there"
                if elenbaas == 10 else "")
        )  # fmt: skip
    # Spacing 2.714 L / Ra^(1/4) at L = 0.18 m, 14 fins of 24 mm, 80 and 30 C.
    spacing = 2.714 * 0.18 / 1.845e7**0.25
    film = channel_nusselt(1.845e7 * (spacing / 0.18) ** 4) * 0.02772 / spacing
    case = "fins 180 mm high at their optimum spacing"
    for quantity, theirs, got in (
        ("h, W/m2K", 4.86, film),
        ("heat of 14 fins, W", 29.4, film * 2 * 14 * 0.18 * 0.024 * 50),
    ):
        rows.append(
            row(1, "worked example", case, by.CENGEL, "example 9-3", "seen", quantity, theirs, got,
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    return rows


def radiation_rows() -> list[Row]:
    """Radiation between two surfaces."""
    hot, cold = 333.15, 303.15
    return [
        row(1, "worked example", case, by.RADIATION, "formula", "computed", quantity, theirs, got,
            pct=SAME_LAW_PCT)
        for case, quantity, theirs, got in (
            ("plates 60/30 C, emissivity 0.9 and 0.9", "flux, W/m2", 179.68,
             parallel_plates(hot, cold, 0.9, 0.9)),
            ("plates 60/30 C, emissivity 0.1 and 0.9", "flux, W/m2", 21.72,
             parallel_plates(hot, cold, 0.1, 0.9)),
            ("emissivity 0.9, 60/25 C", "h, W/m2K", 6.440,
             radiation_coefficient(hot, 298.15, 0.9)),
        )
    ]  # fmt: skip


def air_rows() -> list[Row]:
    """Air and the pressure of altitude."""
    rows = []
    for kelvin, rho, nu, k in (
        (250, 1.4133, 1.135e-5, 0.02256), (300, 1.1770, 1.575e-5, 0.02638),
        (350, 1.0085, 2.069e-5, 0.03000), (400, 0.8823, 2.613e-5, 0.03345),
    ):  # fmt: skip
        found = air(kelvin, 101325.0)
        for quantity, theirs, got in (
            ("density, kg/m3", rho, found.density),
            ("viscosity / density, mm2/s", 1e6 * nu, 1e6 * found.kinematic_viscosity),
            ("conductivity, mW/mK", 1e3 * k, 1e3 * found.conductivity),
        ):
            rows.append(
                row(1, "worked example", f"air at {kelvin} K", by.COOLPROP, "library", "computed",
                    quantity, theirs, got, pct=SAME_LAW_PCT)
            )  # fmt: skip
    for kelvin, nu, k in ((350, 20.92, 30.0), (400, 26.4, 33.8)):
        found = air(kelvin, 101325.0)
        for quantity, theirs, got, why in (
            ("viscosity / density, mm2/s", nu, 1e6 * found.kinematic_viscosity,
             "the book's density is about 1 % low"),
            ("conductivity, mW/mK", k, 1e3 * found.conductivity,
             "the book is above CoolProp" if kelvin == 400 else ""),
        ):  # fmt: skip
            rows.append(
                row(1, "worked example", f"air at {kelvin} K", by.INCROPERA, "table A.4", "seen",
                    quantity, theirs, got, pct=SAME_LAW_PCT, why=why)
            )  # fmt: skip
    for metres, theirs in ((1000, 89876.0), (3000, 70121.0), (5000, 54048.0)):
        rows.append(
            row(1, "worked example", f"{metres} m above the sea", by.ISA, "table", "computed",
                "pressure, Pa", theirs, pressure_at_altitude(metres), pct=SAME_LAW_PCT)
        )  # fmt: skip
    return rows


def wind_rows() -> list[Row]:
    """A box in wind as a plate along it, beside square cylinders across it."""
    return [
        row(1, "measured", f"square cylinder across the wind, Re {re:g}", by.SPARROW_ABRAHAM_TONG,
            "0.158 Re^0.66 Pr^(1/3)", "memory", "Nu, mean of four faces",
            0.158 * re**0.66 * 0.71 ** (1 / 3), flat_plate_in_wind(re, 0.71),
            pct=accuracy("flat_plate_in_wind"),
            why="the plate law knows no wake; on a box it is low at higher Re" if re > 1e4 else "")
        for re in (5e3, 2e4, 6e4)
    ]  # fmt: skip


# Boards of 1.6 mm, copper 385 and laminate 0.3 W/mK: layers [um], their coverage, k of sums and fit.
_BOARDS = (
    ("one signal layer", (70,), (0.2,), 3.67, 3.86),
    ("two signal layers, two planes", (70, 35, 35, 70), (0.2, 1, 1, 0.2), 23.9, 22.2),
    ("two layers of 50 %", (35, 35), (0.5, 0.5), 8.72, 8.46),
    ("four layers, two of them planes", (35, 35, 35, 35), (0.3, 1, 1, 0.3), 22.2, 20.7),
)
# What the program takes the copper of a board to be uncertain by [%]: sum rule against the fit.
_COPPER_PCT = 10.0


def board_rows() -> list[Row]:
    """Conductivity of boards in their plane."""
    rows = []
    for name, copper_um, coverage, sums, fit in _BOARDS:
        copper = np.array(copper_um) * 1e-6
        ours = effective_conductivity(
            np.r_[copper, 1.6e-3 - copper.sum()],
            np.r_[np.full(copper.size, 385.0), 0.3],
            np.r_[coverage, 1.0],
        ).in_plane
        case = f"board 1.6 mm, {name}"
        rows.append(
            row(1, "worked example", case, by.LAYERS, "formula", "computed", "k, W/mK", sums, ours,
                pct=SAME_LAW_PCT)
        )  # fmt: skip
        rows.append(
            row(1, "measured", case, by.AZAR_GRAEBNER, "fit", "computed", "k, W/mK", fit, ours,
                pct=_COPPER_PCT)
        )  # fmt: skip
    found = azar_graebner(7e-6, 0.05)
    for quantity, theirs, got in (
        ("k in plane, W/mK", 0.849, found.in_plane),
        ("k through, W/mK", 0.592, found.through),
    ):
        rows.append(
            row(1, "worked example", "fit with 7 um copper in 50 mm", by.AZAR_GRAEBNER, "fit",
                "seen", quantity, theirs, got, pct=SAME_LAW_PCT)
        )  # fmt: skip
    return rows


def law_rows() -> list[Row]:
    """All rows of this file."""
    return [
        *plate_rows(),
        *cylinder_rows(),
        *cavity_rows(),
        *channel_rows(),
        *radiation_rows(),
        *air_rows(),
        *wind_rows(),
        *board_rows(),
    ]
