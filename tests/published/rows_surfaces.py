"""Rung 2: one plate, cylinder or gap in our own air, as the program would film it."""

from collections.abc import Callable

import numpy as np
from published import sources as by
from published.evidence_row import SAME_LAW_PCT, Row, accuracy, row

from enclosure_check.findings.causes import CAUSES
from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.bodies import (
    cuboid_gravity_function,
    cuboid_nusselt,
    horizontal_cylinder,
)
from enclosure_check.physics.cavity import closed_cavity
from enclosure_check.physics.plates import (
    hot_side_down,
    hot_side_up,
    inclined_plate,
    vertical_plate,
)
from enclosure_check.physics.radiation import (
    STEFAN_BOLTZMANN,
    parallel_plates,
    radiation_coefficient,
)
from enclosure_check.physics.transition import transition_distance
from enclosure_check.physics.wind import wind_film, wind_past_box

ZERO, PRESSURE = 273.15, 101325.0
UPRIGHT = accuracy("churchill_chu_1975_vertical")
UP, DOWN = accuracy("lloyd_moran_hot_up"), accuracy("raithby_hollands_hot_down")
CYLINDER = accuracy("churchill_chu_1975_cylinder")
GAP, BELOW = accuracy("elsherbiny_vertical_gap"), accuracy("hollands_heated_below")
PER_BTU_H = 0.29307


# The faces of an oven, 40 F over air at 60 F.
OVEN_RISE_K, OVEN_FILM_K, OVEN_EDGE_M = 40 / 1.8, 299.82, 0.6096


def upright_pct(ra: float, prandtl: float) -> float:
    """Accuracy of the film of an upright plate, with the doubt about its flow [%]."""
    doubt = CAUSES["transition"].half_width * float(transition_distance(ra, prandtl))
    return float(np.hypot(UPRIGHT, doubt))


def doubt_pct(rise: float, film_k: float, height: float) -> float:
    """That doubt alone, of a plate in our own air [%]."""
    return float(np.sqrt(own_pct(rise, film_k, height) ** 2 - UPRIGHT**2))


def own_pct(rise: float, film_k: float, height: float) -> float:
    """Accuracy of the film of an upright plate in our own air [%]."""
    properties = air(film_k, PRESSURE)
    ra = float(rayleigh_number(rise, height, properties))
    return upright_pct(ra, float(properties.prandtl))


def vertical(rise: float, film_k: float, height: float) -> float:
    """Film of an upright plate [W/m2K]."""
    return float(inclined_plate(rise, film_k, PRESSURE, height, height / 4, 0.0).coefficient)


def root(too_little: Callable[[float], bool], low: float, high: float) -> float:
    """Where something begins to be enough, by halving."""
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if too_little(middle) else (low, middle)
    return middle


def upright_rows() -> list[Row]:
    """Upright plates."""
    both = [(vertical(110.0, 348.15, height) + 8.5) * area * 110.0
            for height, area in ((0.15, 0.03), (4.5, 0.9))]  # fmt: skip
    film = [watts - 8.5 * area * 110.0 for watts, area in zip(both, (0.03, 0.9), strict=True)]
    rise, height, area = 20 / 1.8, 5.5 * 0.3048, 5.5 * 2.33 * 0.3048**2
    door = vertical(rise, 299.8, height) * area * rise / PER_BTU_H
    ra = 9.81 / 343.0 * 60.0 * 0.5**3 / 20.02e-6**2 * 0.694
    flux = root(lambda dt: vertical(dt, 303.15 + dt / 2, 3.5) * dt < 800.0, 1.0, 400.0)
    near = (
        "at this Ra the book has the full law, ours is laminar to 1e9: the authors' two laws part"
    )
    wider = vertical(26.0, 300.0, 0.4)
    return [
        row(2, "worked example", "plate 0.71 m, Ra 1.8e9", by.INCROPERA, "example 9.2", "seen",
            "Nu", 147.0, vertical_plate(1.81e9, 0.69), pct=upright_pct(1.81e9, 0.69), why=near),
        row(2, "worked example", "plate 0.6 m, Ra 7.6e8", by.CENGEL, "example 9-2a", "seen", "Nu",
            113.3, vertical_plate(7.649e8, 0.7202), pct=upright_pct(7.649e8, 0.7202), why=near),
        row(2, "worked example", "plate 0.5 m, exact similarity", by.SUKHATME, "example 6.1",
            "seen", "Nu", 72.62, vertical_plate(ra, 0.694), pct=upright_pct(ra, 0.694)),
        row(2, "worked example", "plate 0.5 m, integral method", by.SUKHATME, "example 6.1", "seen",
            "Nu", 76.07, vertical_plate(ra, 0.694), pct=upright_pct(ra, 0.694), why="his integral method"),
        row(2, "worked example", "plate 0.5 m, 0.59 Ra^(1/4)", by.SUKHATME, "example 6.1", "seen",
            "Nu", 81.91, vertical_plate(ra, 0.694), pct=upright_pct(ra, 0.694),
            why="McAdams' law is 13 % above the exact solution of the same example"),
        row(2, "worked example", "plate 0.15 m both sides, 130/20 C", by.KREITH, "example 5.2",
            "seen", "heat with radiation, W", 50.8, both[0], band=film[0] * own_pct(110.0, 348.15, 0.15) / 100),
        row(2, "worked example", "plate 4.5 m both sides, 130/20 C", by.KREITH, "example 5.2",
            "seen", "heat with radiation, W", 1465.0, both[1], band=film[1] * own_pct(110.0, 348.15, 4.5) / 100,
            why="the book has a turbulent law of its own"),
        row(2, "worked example", "plate 0.4 m, 313/287 K", by.LIENHARD, "example 8.1", "seen",
            "h, W/m2K", 4.06, wider, pct=own_pct(26.0, 300.0, 0.4), why="Squire & Eckert's law"),
        row(2, "worked example", "door 5.5 x 2.33 ft, 90/70 F", by.JANNA, "example 8.3", "seen",
            "heat, Btu/h", 142.0, door, pct=own_pct(rise, 299.8, height),
            why="the book has the full law at Ra 4.9e9, where ours is between both"),
        row(2, "worked example", "plate 3.5 m, 800 W/m2, 30 C", by.HOLMAN, "example 7.1", "seen",
            "mean rise, K", 155.0, flux, pct=own_pct(flux, 303.15 + flux / 2, 3.5) / 1.33,
            why="the book has a law of even flux with other air; ours is that of even temperature"),
    ]  # fmt: skip


def level_rows() -> list[Row]:
    """Level plates."""
    properties = air(400.15, PRESSURE)
    ra = rayleigh_number(200.0, 0.25, properties)
    per_nu = properties.conductivity / 0.25 * 200.0
    up, down = hot_side_up(ra), hot_side_down(ra)
    heat = (up + down) * per_nu
    band = per_nu * np.hypot(up * UP, down * DOWN) / 100
    newer = "0.52 Ra^(1/5) of Raithby & Hollands in place of 0.27 Ra^(1/4)"
    return [
        row(2, "worked example", "plate 1 x 1 m, 227/27 C, upper side", by.KREITH, "example 5.3",
            "seen", "Nu", 63.4, up, pct=UP),
        row(2, "worked example", "plate 1 x 1 m, 227/27 C, lower side", by.KREITH, "example 5.3",
            "seen", "Nu", 25.2, down, pct=DOWN, why=newer),
        row(2, "worked example", "plate 1 x 1 m, 227/27 C", by.KREITH, "example 5.3", "seen",
            "heat, W", 2268.0, heat, band=float(band), why=newer),
        row(2, "worked example", "plate 0.6 m, warm side up, Ra 1.2e7", by.CENGEL, "example 9-2b",
            "memory", "Nu", 31.7, hot_side_up(1.195e7), pct=UP,
            why="the book keeps 0.54 Ra^(1/4) beyond 1e7, ours takes the larger law"),
        row(2, "worked example", "plate 0.6 m, warm side down, Ra 1.2e7", by.CENGEL, "example 9-2c",
            "memory", "Nu", 15.9, hot_side_down(1.195e7), pct=DOWN, why=newer),
    ]  # fmt: skip


_BOARD = (0.15, 0.20)


def board_rows() -> list[Row]:
    """A board of 8 W in three attitudes, and transistors on an upright plate."""
    length, area = 0.03 / 0.7, _BOARD[0] * _BOARD[1]
    rows = []
    for name, up, theirs, pct, why in (
        ("upright", 0.0, 26.6, UPRIGHT, ""),
        ("warm side up", 1.0, 22.6, UP, ""),
        ("warm side down", -1.0, 30.7, DOWN, "0.52 Ra^(1/5) in place of 0.27 Ra^(1/4)"),
    ):

        def parts(rise: float, up: float = up) -> tuple[float, float]:
            mean = ZERO + 20.0 + rise / 2
            film = inclined_plate(rise, mean, PRESSURE, 0.2, length, up).coefficient
            return float(film), float(radiation_coefficient(ZERO + 20 + rise, ZERO + 20, 0.8))

        rise = root(lambda dt, parts=parts: sum(parts(dt)) * dt * area < 8.0, 0.1, 100.0)
        film, radiation = parts(rise)
        # Heat goes with rise^1.25 by the film and nearly rise^1.1 by radiation.
        band = rise * pct / 100 * film / (1.25 * film + 1.1 * radiation)
        rows.append(
            row(2, "worked example", f"board 15 x 20 cm, 8 W, {name}", by.CENGEL, "problem 9-33",
                "seen", "rise over 20 C, K", theirs, rise, band=band, why=why)
        )  # fmt: skip
    properties = air(305.65, PRESSURE)
    ours = hot_side_up(rayleigh_number(25.0, length, properties)) * properties.conductivity / length
    flux = float(radiation_coefficient(323.15, 303.15, 0.9)) * 20.0
    side = root(lambda s: s**2 * (vertical(20.0, 313.15, s) * 20.0 + flux) < 37.5, 0.1, 2.0)
    film = vertical(20.0, 313.15, side) * 20.0
    rows += [
        row(2, "worked example", "the same, warm side up at 45 C", by.CENGEL, "problem 9-33",
            "seen", "h, W/m2K", 6.696, ours, pct=UP),
        row(2, "worked example", "25 x 1.5 W on an upright plate, 50/30 C", by.CENGEL,
            "problem 9-129", "seen", "edge, cm", (42.5, 43.5), 100 * side,
            band=side * own_pct(20.0, 313.15, side) * film / (film + flux) / 2,
            why="printed to a centimetre"),
    ]  # fmt: skip
    return rows


def tilted_rows() -> list[Row]:
    """A roof at 45 degrees."""
    rows = []
    for length, theirs in ((0.02, 9.32), (0.04, 7.52), (0.1, 6.39), (1.0, 4.99), (5.0, 4.66)):
        film = inclined_plate(45.0, 315.65, PRESSURE, length, length / 4, np.sqrt(0.5)).coefficient
        why = "the book has an upright plate with all of gravity; the upper side is unstable"
        if length == 0.04:
            why += "; the author flags a slip in this number"
        rows.append(
            row(2, "worked example", f"roof at 45 deg, 65/20 C, {length:g} m", by.JANNA,
                "example 8.4", "seen", "h, W/m2K", theirs, film, pct=UP, why=why)
        )  # fmt: skip
    return rows


def cylinder_rows() -> list[Row]:
    """Horizontal cylinders, and one in a slow stream."""
    rows = []
    for case, source, place, seen, d, length, hot, cold, eps, theirs in (
        ("pipe 0.1 m, 165/23 C, with radiation", by.INCROPERA, "example 9.4", "seen",
         0.1, 1.0, 165.0, 23.0, 0.85, 763.0),
        ("pipe 8 cm x 6 m, 70/20 C", by.CENGEL, "example 9-1", "memory",
         0.08, 6.0, 70.0, 20.0, 0.0, 443.0),
        ("pipe 15 cm x 4 m, 50/5 C", by.JANNA, "example 8.6", "seen",
         0.15, 4.0, 50.0, 5.0, 0.0, 477.0),
        ("wire 1 mm, 127/27 C", by.KREITH, "example 5.1", "seen",
         1e-3, 1.0, 127.0, 27.0, 0.0, 12.1),
    ):  # fmt: skip
        rise = hot - cold
        properties = air(0.5 * (hot + cold) + ZERO, PRESSURE)
        nu = horizontal_cylinder(rayleigh_number(rise, d, properties), properties.prandtl)
        film = float(np.pi * length * nu * properties.conductivity * rise)
        area = np.pi * d * length
        heat = film + area * eps * STEFAN_BOLTZMANN * ((hot + ZERO) ** 4 - (cold + ZERO) ** 4)
        why = "the book has a table of measurements; Churchill & Chu run low below Ra 1e4"
        rows.append(
            row(2, "worked example", case, source, place, seen, "heat, W", theirs, heat,
                band=film * CYLINDER / 100, why=why if d < 0.01 else "")
        )  # fmt: skip
    wind = wind_past_box((0.04, 0.04, 0.04), 0.3, None)
    ratio = wind_film(np.full(6, 40.0), np.full(6, 323.15), PRESSURE, wind)[3][0]
    rows.append(
        row(2, "worked example", "cylinder 40 mm, 70/30 C, 0.3 m/s", by.SUKHATME, "example 6.6",
            "seen", "Gr/Re2", 0.540, ratio, pct=SAME_LAW_PCT)
    )  # fmt: skip
    return rows


def _across(width: float, height: float, hot: float, cold: float, area: float, below: float):
    """Heat across a closed gap [W] and its Nusselt number."""
    properties = air(0.5 * (hot + cold) + ZERO, PRESSURE)
    ra = rayleigh_number(hot - cold, width, properties)
    nu = float(closed_cavity(ra, height / width, below))
    return nu * float(properties.conductivity) / width * (hot - cold) * area


def gap_rows() -> list[Row]:
    """Closed gaps in our own air."""
    window = _across(0.02, 0.8, 12.0, 2.0, 1.6, 0.0)
    tall = _across(0.015, 0.5, 100.0, 40.0, 0.25, 0.0)
    flat = _across(0.01, 0.2, 100.0, 40.0, 0.04, 1.0)
    tilted = _across(0.025, 2.0, 75.0, 55.0, 2.0, float(np.cos(np.radians(19.5))))
    grey = parallel_plates(373.15, 313.15, 0.2, 0.2) * 0.25
    return [
        row(2, "worked example", "window gap 20 mm, 0.8 x 2 m, 12/2 C", by.CENGEL, "example 9-4",
            "seen", "heat, W", 27.1, window, pct=GAP,
            why="the book has another law, which is 6 % above ElSherbiny's"),
        row(2, "worked example", "upright gap 15 mm, 0.5 x 0.5 m, 100/40 C", by.HOLMAN,
            "example 7.8", "seen", "convection, W", 39.6, tall, pct=GAP,
            why="the book has 0.197 Ra^(1/4) (h/d)^(-1/9), from memory"),
        row(2, "worked example", "the same, emissivity 0.2 both", by.HOLMAN, "example 7.8", "seen",
            "radiation, W", 15.4, grey, pct=SAME_LAW_PCT),
        row(2, "worked example", "level gap 10 mm, heated below, 100/40 C", by.HOLMAN,
            "example 7.9", "seen", "heat, W", 10.3, flat, pct=BELOW,
            why="the book has 0.059 Ra^0.4 (from memory), which is 11 % below Hollands' law there"),
        row(2, "worked example", "collector gap 25 mm at 19 to 20 deg, 75/55 C", by.SUKHATME,
            "example 6.5", "seen", "heat, W", 123.0, tilted, pct=BELOW),
    ]  # fmt: skip


def cube_rows() -> list[Row]:
    """A cube by another law for whole bodies."""
    nu, k, pr, beta, rise, area = 17.47e-6, 0.02685, 0.70, 3.25e-3, 50.0, 0.24
    ra = 9.81 * beta * rise * area**1.5 / nu**2 * pr
    ours = cuboid_nusselt(ra, pr, cuboid_gravity_function(1.0, 1.0, 1.0)) * k * area**0.5 * rise
    return [
        row(2, "worked example", "cube 0.2 m, 60/10 C", by.HOLMAN, "example 7-6", "seen", "heat, W",
            51.8, ours, pct=accuracy("yovanovich_cuboid"),
            why="King's law on twice the edge; ours is Yovanovich's")
    ]  # fmt: skip


def oven_rows() -> list[Row]:
    """Faces of an oven, each alone."""
    rise, edge, mean = OVEN_RISE_K, OVEN_EDGE_M, OVEN_FILM_K
    side, top = inclined_plate(rise, mean, PRESSURE, edge, edge / 4, [0.0, 1.0]).coefficient
    heat = edge**2 * rise
    return [
        row(2, "worked example", "oven side alone, 2 x 2 ft, 100/60 F", by.JANNA, "example 8.5",
            "seen", "heat, W", 27.5, side * heat, pct=own_pct(rise, mean, edge)),
        row(2, "worked example", "oven top alone, 2 x 2 ft, 100/60 F", by.JANNA, "example 8.5",
            "seen", "heat, W", 40.4, top * heat, pct=UP,
            why="at Ra 7.4e6 ours has gone over to 0.15 Ra^(1/3)"),
    ]  # fmt: skip


# Simplified relations of air: C, attitude; beside ours at 30 K on a plate of 0.15 m, air at 25 C.
_SIMPLIFIED = (
    ("upright plate", 1.42, 0.0, UPRIGHT, ""),
    ("level plate, warm side up", 1.32, 1.0, UP,
     "the edge as length; later work puts area over perimeter into the same law, 1.41 times more"),
    ("level plate, warm side down", 0.59, -1.0, DOWN,
     "likewise; and 0.52 Ra^(1/5) in place of 0.27 Ra^(1/4)"),
    ("board with components, upright", 2.44, 0.0, 20.0,
     "its own wakes are not in a law of smooth plates; the program's band of boards is 20 %"),
)  # fmt: skip


def simplified_rows() -> list[Row]:
    """Simplified relations; their length 4 A/P is the edge of a square."""
    rows = []
    for name, constant, up, pct, why in _SIMPLIFIED:
        ours = inclined_plate(30.0, 313.15, PRESSURE, 0.15, 0.15 / 4, up).coefficient
        theirs = constant * (30.0 / 0.15) ** 0.25
        rows.append(
            row(2, "practice rule", f"{name}, 0.15 m, 30 K", by.SIMPLIFIED, f"C = {constant}",
                "seen", "h, W/m2K", theirs, ours, pct=pct, why=why)
        )  # fmt: skip
    return rows


_GAPS = (
    ("upright, 150 mm high, 10 mm", 1777, 15.0, 0.0, (1.07, 1.07), ""),
    ("upright, 150 mm high, 20 mm", 1.42e4, 7.5, 0.0, (2.02, 2.02), ""),
    ("upright, 150 mm high, 40 mm", 1.14e5, 3.75, 0.0, (4.04, 4.04), ""),
    ("heated below, 200 mm long, 20 mm", 1.42e4, 10.0, 1.0, (2.84, 2.91), ""),
    ("heated below, 200 mm long, 40 mm", 1.14e5, 5.0, 1.0, (4.9, 5.1),
     "two-dimensional rolls run high; real air moves in three dimensions, as Hollands measured"),
    ("heated above, 200 mm long, 20 mm", 1.42e4, 10.0, -1.0, (1.0, 1.0), ""),
)  # fmt: skip


def experiment_gap_rows() -> list[Row]:
    """Two-dimensional gaps at 20 K, G."""
    return [
        row(2, "numerical experiment", f"G, gap {name}", by.EXPERIMENT, f"Ra {ra:g}", "seen", "Nu",
            theirs, closed_cavity(ra, aspect, below), pct=BELOW if below else GAP, why=why)
        for name, ra, aspect, below, theirs, why in _GAPS
    ]  # fmt: skip


def surface_rows() -> list[Row]:
    """All rows of this file."""
    return [
        *upright_rows(),
        *level_rows(),
        *board_rows(),
        *tilted_rows(),
        *cylinder_rows(),
        *gap_rows(),
        *cube_rows(),
        *oven_rows(),
        *simplified_rows(),
        *experiment_gap_rows(),
    ]
