"""Rung 3: the program's own nodes, cells and solver on problems with a known answer."""

import numpy as np
from published import sources as by
from published.evidence_row import SAME_LAW_PCT, Row, Source, row
from support.networks import LABEL, finished, started
from support.plates import Plates, at_edge, flat, on_edges

from enclosure_check.physics.conduction import (
    contact,
    disc_source_on_infinite_plate,
    plate_source_rise,
    slab,
)
from enclosure_check.solve.steady import solve_steady

ZERO = 273.15
WATT, KELVIN = "heat, W", "rise, K"

# A plate 100 x 100 mm with 1 W on 20 x 20 mm in the middle: words, k t, h, rises [K].
_CENTRAL = (
    ("k 20, 1.6 mm, h 20", 20.0 * 1.6e-3, 20.0, (11.244, 4.268, 3.633, 5.000)),
    ("k 40, 1.6 mm, h 20", 40.0 * 1.6e-3, 20.0, (8.256, 4.615, 4.247, 5.000)),
    ("k 0.3, 1.6 mm, h 20", 0.3 * 1.6e-3, 20.0, (96.99, 0.017, 0.0005, 5.000)),
    ("k 205, 2 mm, h 12", 205.0 * 2e-3, 12.0, (8.863, 8.270, 8.204, 8.333)),
)


def plate_rows() -> list[Row]:
    """Plates on cells; the rise at the centre is cells and sub-cell spreading."""
    rows = []
    for words, kt, film, exact in _CENTRAL:
        plates = Plates()
        nodes = plates.add("plate", flat(0.1, 0.1, kt), film)
        spot = plates.heated("plate", (0.04, 0.04, 0.0), (0.02, 0.02, 0.0), 1.0)
        rise = plates.rise()
        places = (rise[spot.node] + spot.peak_k_per_w, *on_edges(rise[nodes.cells]))
        names = ("centre", "middle of an edge", "corner", "mean")
        for name, theirs, ours in zip(names, exact, (*places, rise[nodes.mean]), strict=True):
            # Laminate alone is colder at its edges than its wide cells can tell: of the mean there.
            least = exact[3] if theirs < 0.1 else None
            rows.append(
                row(3, "worked example", f"plate with a central source, {words}", by.SERIES,
                    "series", "computed", f"{name}, {KELVIN}", theirs, ours, scale=least,
                    band=SAME_LAW_PCT / 100 * (least or ours))
            )  # fmt: skip
    plates = Plates()
    nodes = plates.add("plate", flat(0.1, 0.1, 0.032), 20.0)
    spot = plates.heated("plate", (0.02, 0.02, 0.0), (0.02, 0.01, 0.0), 2.0)
    rise = plates.rise()
    case = "plate with an offset source of 2 W, k 20, 1.6 mm, h 20"
    for name, theirs, ours in (
        ("centre of the source", 28.900, rise[spot.node] + 2 * spot.peak_k_per_w),
        ("far corner", 3.938, on_edges(rise[nodes.cells][::-1, ::-1])[1]),
        ("mean", 10.000, rise[nodes.mean]),
    ):
        rows.append(_exact(case, by.SERIES, f"{name}, {KELVIN}", theirs, ours))
    for k, theirs in ((20.0, 13.439), (40.0, 7.574)):
        side, plates = np.sqrt(np.pi) * 5e-3, Plates()
        plates.add("plate", flat(0.6, 0.6, k * 1.6e-3), 20.0)
        spot = plates.heated("plate", (0.3 - side / 2,) * 2 + (0.0,), (side, side, 0.0), 1.0)
        ours = plates.rise()[spot.node] + spot.peak_k_per_w
        case = f"disc source of 5 mm radius, 1 W, k {k:g}, 1.6 mm, h 20; ours a square of its area"
        rows.append(_exact(case, by.DISC, f"centre, {KELVIN}", theirs, ours))
    plates = Plates()
    nodes = plates.add("plate", flat(0.05, 0.1, 0.032), 20.0)
    spot = plates.heated("plate", (0.0, 0.0, 0.0), (1e-5, 0.1, 0.0), 1.0)
    rise = plates.rise()
    case = "fin 50 mm long, 100 mm wide, k 20, 1.6 mm, h 20, 1 W into its end"
    tip = at_edge(rise[nodes.cells][::-1]).mean()
    rows.append(_exact(case, by.FIN, f"end, {KELVIN}", 14.736, rise[spot.node]))
    rows.append(_exact(case, by.FIN, f"tip, {KELVIN}", 7.803, tip))
    return rows


def closed_rows() -> list[Row]:
    """The closed forms that spreading terms rest on."""
    case = "plate with an offset source of 2 W, closed form"
    place = (0.02, 0.01, 0.03, 0.025, 0.1, 0.1, 0.032, 20.0, 2.0)
    at = plate_source_rise([0.03, 0.1], [0.025, 0.1], *place)
    rows = [
        _exact(case, by.SERIES, f"centre of the source, {KELVIN}", 28.900, at[0]),
        _exact(case, by.SERIES, f"far corner, {KELVIN}", 3.938, at[1]),
    ]
    for k, centre, edge in ((20.0, 13.439, 11.003), (40.0, 7.574, 6.345)):
        found = disc_source_on_infinite_plate(5e-3, k * 1.6e-3, 20.0)
        case = f"disc source of 5 mm radius, 1 W, k {k:g}, 1.6 mm, h 20, closed form"
        rows.append(_exact(case, by.DISC, f"centre, {KELVIN}", centre, found[0]))
        rows.append(_exact(case, by.DISC, f"edge, {KELVIN}", edge, found[1]))
    return rows


def _exact(case: str, source: Source, quantity: str, theirs: float, ours: float) -> Row:
    return row(3, "worked example", case, source, "formula", "computed", quantity, theirs, ours,
               pct=SAME_LAW_PCT)  # fmt: skip


def chain(resistances: tuple[float, ...], difference: float) -> tuple[float, np.ndarray]:
    """Heat [W] and drops [K] of resistances [K/W] in a row between two given temperatures."""
    builder, ambient = started()
    hot = builder.node("hot", 298.15 + difference)
    nodes = [hot]
    for index, resistance in enumerate(resistances[:-1]):
        nodes.append(builder.behind(nodes[-1], resistance, f"node {index}", LABEL))
    builder.resist(nodes[-1], ambient, resistances[-1], LABEL)
    rise = _rise(builder)
    drops = -np.diff([*(rise[node] for node in nodes), 0.0])
    return float(drops[0] / resistances[0]), drops


def _rise(builder) -> np.ndarray:
    solution = solve_steady(finished(builder))
    assert solution.converged
    return solution.rise[:, 0]


def joint_rows() -> list[Row]:
    """Joints, and resistances in a row."""
    area = 0.01
    plate = (1 / (42000 * 8e-4), 0.01 / (386 * area), 1 / (25 * area))
    transistor, drops = chain(plate, 50.0)
    bars = 7.069e-4
    bar, joint = 0.1 / (16.3 * bars), 5.28e-4 / bars
    steel, steel_drops = chain((bar, joint, bar), 100.0)
    # A chip of 1 m2 between a film and epoxy, metal and a film.
    builder, ambient = started()
    chip = builder.node("chip")
    builder.conduct(chip, ambient, 100.0, LABEL)
    under = builder.behind(builder.behind(chip, 0.9e-4, "a", LABEL), 0.008 / 239, "b", LABEL)
    builder.conduct(under, ambient, 100.0, LABEL)
    builder.heat(chip, 1e4, LABEL)
    chip_c = float(_rise(builder)[chip])
    # Junction, case, and a sink 46 K over its air at 90 W.
    builder, ambient = started()
    sink = builder.node("sink")
    builder.resist(sink, ambient, 46 / 90, LABEL)
    case_ = builder.behind(sink, 0.075, "case", LABEL)
    junction = builder.behind(case_, 0.15, "junction", LABEL)
    builder.heat(junction, 90.0, LABEL)
    rises = _rise(builder)
    metal = float(slab(1.0, 1.0, 237.0) / contact(1.0, 11000.0))
    return [
        row(3, "worked example", case, source, place, seen, quantity, theirs, ours,
            pct=SAME_LAW_PCT)
        for case, source, place, seen, quantity, theirs, ours in (
            ("joint of 11000 W/m2K as aluminium of 237 W/mK", by.CENGEL, "example 3-4", "seen",
             "length, mm", 21.5, 1e3 * metal),
            ("transistor on a copper plate, 70/20 C", by.CENGEL, "example 3-5", "seen", WATT, 12.4,
             transistor),
            ("transistor on a copper plate, 70/20 C", by.CENGEL, "example 3-5", "seen",
             "drop in the joint, K", 0.37, drops[0]),
            ("transistor of 20 K/W, 85/25 C", by.CENGEL, "example 3-10", "seen", WATT, 3.0,
             chain((10.0, 10.0), 60.0)[0]),
            ("sink for 60 W, 90/30 C", by.CENGEL, "example 3-11", "seen", WATT, 60.0,
             chain((0.5, 0.5), 60.0)[0]),
            ("chip of 1 W/cm2 on epoxy and 8 mm of metal", by.INCROPERA, "example 3.2", "seen",
             "rise over 25 C, K", 50.3, chip_c),
            ("two steel bars, 100 K", by.HOLMAN, "example 2.11 (inputs from memory)", "computed",
             WATT, 5.52, steel),
            ("two steel bars, 100 K", by.HOLMAN, "example 2.11 (inputs from memory)", "computed",
             "drop in the joint, K", 4.13, steel_drops[1]),
            ("transistor of 90 W on a sink, 40 C", by.BIMBHRA, "example 4.19", "seen",
             "case rise, K", 52.75, rises[case_]),
            ("transistor of 90 W on a sink, 40 C", by.BIMBHRA, "example 4.19", "seen",
             "junction rise, K", 66.25, rises[junction]),
        )
    ]  # fmt: skip


def sun_rows() -> list[Row]:
    """Surfaces in the sun."""
    rows = []
    for paint, absorbed, emissivity, theirs in (
        ("white paint", 0.12, 0.90, 14.5), ("flat black lacquer", 0.96, 0.95, 79.8),
    ):  # fmt: skip
        builder, ambient = started(ZERO + 25)
        node = builder.node("surface")
        builder.radiate(node, ambient, 1.0, 1.0, emissivity, LABEL)
        builder.heat(node, 700.0 * absorbed, LABEL)
        rows.append(
            row(3, "worked example", f"{paint} in 700 W/m2, radiation alone", by.HOLMAN,
                "example 8.20", "computed", "rise over 25 C, K", theirs, _rise(builder)[node],
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    builder, ambient = started(ZERO + 25)
    node = builder.node("surface")
    builder.conduct(node, ambient, 50.0, LABEL)
    builder.heat(node, 700.0 * 0.6, LABEL)
    rows.append(
        row(3, "worked example", "plate in 700 W/m2, absorbs 0.6, h 50", by.CENGEL, "example 1-13",
            "seen", "rise over 25 C, K", 8.4, _rise(builder)[node], pct=SAME_LAW_PCT)
    )  # fmt: skip
    return rows


def network_rows() -> list[Row]:
    """All rows of this file."""
    return [*plate_rows(), *closed_rows(), *joint_rows(), *sun_rows()]
