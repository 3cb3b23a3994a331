"""Rung 4: whole boxes, each a document beside this file, run through the real command.

Bands are those of the report. What a source gives has no tolerance in its document; what it leaves
open, such as an emissivity, has the program's default.
"""

from typing import Any

import numpy as np
from published import sources as by
from published.command import board_band_k, condition, reported, wall
from published.evidence_row import Kind, Row, Seen, Source, accuracy, row
from published.rows_surfaces import OVEN_EDGE_M, OVEN_FILM_K, OVEN_RISE_K, doubt_pct
from published.vented_slices import F_SLICES_K, slice_of_f

from enclosure_check.findings.causes import CAUSES
from enclosure_check.physics.air import GRAVITY, air

STRAIGHT = "the methods take all heat through the air; here a painted plate radiates most of it"


def wall_rise(found: dict[str, Any]) -> tuple[float, float]:
    """Area-mean rise of the open walls and its band, the walls taken to move together [K]."""
    bands = [w["outside_band_k"] for w in found["walls"] if w["mounting"] == "open_air"]
    return found["hand_estimate"]["wall_rise_k"], float(np.mean(bands))


def air_at(found: dict[str, Any], share: float) -> tuple[float, float]:
    """Rise of the inside air at a share of the height, and its band [K]."""
    layers = found["air"]["profile"]
    height = np.array([layer["height_mm"] for layer in layers])
    rise = np.array([layer["air_c"] for layer in layers]) - found["surrounding_air_c"]
    band = np.array([layer["band_k"] for layer in layers])
    at = share * height[-1]
    return float(np.interp(at, height, rise)), float(np.interp(at, height, band))


def mean_air(found: dict[str, Any]) -> tuple[float, float]:
    """Mean rise of the inside air and its band [K]."""
    return found["air"]["mean_c"] - found["surrounding_air_c"], found["air"]["mean_band_k"]


def _row(
    kind: Kind, case: str, source: Source, place: str, seen: Seen, quantity: str,
    theirs: float | tuple[float, float], found: tuple[float, float], why: str = "",
    scale: float | None = None, own: bool = False,
) -> Row:  # fmt: skip
    ours, band = found
    return row(4, kind, case, source, place, seen, quantity, theirs, ours, band=band, why=why,
               scale=scale, own=own)  # fmt: skip


def isothermal_rows() -> list[Row]:
    """Boxes of one wall temperature: wall rises at the power of the source."""
    mean = "mean rise of the walls, K"
    rows = [
        _row("worked example", "duct 0.75 x 0.30 m, 246 W/m", by.INCROPERA, "example 9.3",
             "seen", mean, 30.0, wall_rise(condition("duct_of_two_dimensions")),
             "the book sums isolated plates; on a box the top stands in the plume of the sides"),
        _row("worked example", "cube 0.2 m, 51.8 W", by.HOLMAN, "example 7-6", "seen", mean,
             50.0, wall_rise(condition("cube", "book"))),
    ]  # fmt: skip
    for case, document, which, theirs in (
        ("X1: cube, 54.3 W", "cube", "experiment", 50.0),
        ("X2: flat box, 12.8 W", "flat_box", "free", 30.0),
        ("X3: tall box, 25.5 W", "tall_box", "free", 30.0),
        ("X5: tall box on a wall, 17.8 W", "tall_box", "on_a_wall", 30.0),
        ("X6: flat box on a table, 10.2 W", "flat_box", "on_a_table", 30.0),
    ):
        rows.append(
            _row("numerical experiment", case, by.EXPERIMENT, "total heat", "seen", mean, theirs,
                 wall_rise(condition(document, which)))
        )  # fmt: skip
    return rows


def oven_rows() -> list[Row]:
    """one side and the top of an oven, as they stand on a box."""
    found = condition("oven")
    side, top = wall(found, "left")["convection_w"], wall(found, "top")["convection_w"]
    shelter = accuracy("box_shelter")
    side_pct = np.hypot(shelter, doubt_pct(OVEN_RISE_K, OVEN_FILM_K, OVEN_EDGE_M))
    top_pct = np.hypot(shelter, CAUSES["top_share"].half_width)
    return [
        _row("worked example", "side of an oven 2 x 2 ft, 40 F", by.JANNA, "example 8.5",
             "seen", "heat, W", 27.5, (side, float(side * side_pct / 100)),
             "the book has a plate alone; on a box a side gives 0.9 of that"),
        _row("worked example", "top of an oven 2 x 2 ft, 40 F", by.JANNA, "example 8.5",
             "seen", "heat, W", 40.4, (top, float(top * top_pct / 100)),
             "the book has a plate alone; on a box the top stands in the plume of the sides"),
    ]  # fmt: skip


def heated_rows() -> list[Row]:
    """Boxes with their power given."""
    code, report = reported("housing_600_w")
    hot = max(each["outside_max_c"] for each in report["conditions"][0]["walls"])
    panel = wall_rise(condition("floor_panel"))
    rows = [
        _row("worked example", "panel 4 x 8 x 2 ft on the floor, 2 kW", by.WILDI,
             "problem 3-27 (relations from memory)", "computed", "mean rise of the walls, K", 16.9,
             panel, "his 3 A dT^1.25 for convection is twice the law of a plate 2.4 m high"),
        row(4, "worked example", "housing 400 x 400 x 500 mm, 600 W, 40 C asked",
            by.HOUSING_2021, "inputs seen, answer not", "seen",
            "hottest wall, C, flagged by exit code 1", 40.0, hot if code == 1 else 0.0, flag=True),
    ]  # fmt: skip
    for which, power in (("low", 10), ("high", 40)):
        balance = condition("anodised_box", which)["heat_balance"]
        share = balance["radiation_w"] / (balance["radiation_w"] + balance["convection_w"])
        # Film law 10 % and emissivity 0.05 of 0.8, both ways.
        band = share * (1 - share) * float(np.hypot(accuracy("box_shelter") / 100, 0.05 / 0.8))
        rows.append(
            _row("measured", f"bare anodised box on a wall, {power} W", by.TAMAYOL, "abstract",
                 "seen", "share of radiation", (0.4, 0.6), (share, band),
                 "about 50 % is said, read as 0.4 to 0.6; sizes are ours", scale=1.0)
        )  # fmt: skip
    return rows


def cabinet_rows() -> list[Row]:
    """worked numbers of the area method, and six cabinets beside it and IEC TR 60890."""
    from published.cabinets import CABINETS, RISE_K, iec_rise_k

    rows = []
    for case, document, which, theirs in (
        ("cabinet 1.2 x 2.0 x 0.6 m on a wall, 179.5 W", "cabinet_worked_wall", "base", 5.0),
        ("free cabinet 0.6 x 2.0 x 0.5 m, 242 W", "cabinet_worked_free", "base", 10.0),
        ("free cabinet of 3.96 m2, 350 W", "cabinet_worked_three_powers", "w350", 16.0),
        ("free cabinet of 3.96 m2, 653 W", "cabinet_worked_three_powers", "w653", 30.0),
        ("free cabinet of 3.96 m2, 1000 W", "cabinet_worked_three_powers", "w1000", 46.0),
    ):
        found = mean_air(condition(document, which))
        far = abs(found[0] - theirs) > found[1]
        why = "the method has a constant k; ours grows with the rise" if far else ""
        rows.append(
            _row("practice rule", case, by.VDE, "worked number", "seen", "mean rise of the air, K",
                 theirs, found, why)
        )  # fmt: skip
    for index, cabinet in enumerate(CABINETS, 1):
        for plate in ("painted", "bare"):
            found = air_at(condition(f"cabinet_{index}", plate), 0.5)
            case = f"cabinet {cabinet.name}, {plate} plate"
            why = (
                STRAIGHT if plate == "painted" else
                "here 8 tenths of the heat go through the air; the methods lie a third apart"
            )  # fmt: skip
            for source, rise in (
                (by.VDE, RISE_K),
                (by.IEC_60890, iec_rise_k(cabinet.effective_area, cabinet.power_w)),
            ):
                seen: Seen = "computed" if source is by.VDE else "memory"
                rows.append(
                    _row("practice rule", case, source, "formula", seen,
                         "rise of the air at mid height, K", rise, found,
                         why if abs(found[0] - rise) > found[1] else "")
                )  # fmt: skip
    return rows


def _outlet(found: dict[str, Any], name: str) -> tuple[float, float]:
    """Rise of the air that leaves by an opening and the band of the air at its height [K]."""
    opening = next(each for each in found["openings"]["each"] if each["name"] == name)
    top = found["air"]["profile"][-1]["height_mm"]
    _, band = air_at(found, opening["height_mm"] / top)
    return opening["air_out_c"] - found["surrounding_air_c"], band


_F_STEADY = "ours warms steadily up the box; theirs stays nearly cold to mid height"
_F_WHY = {
    0.5: _F_STEADY,
    0.75: _F_STEADY,
    0.9: "the plume over the board is not counted in our slice",
}


def _head(found: dict[str, Any]) -> tuple[float, float]:
    """Integral of g dT/T over the height between the slots of F, and its band [m2/s2]."""
    shares = np.linspace(15 / 254, 239 / 254, 200)
    rise, band = np.array([air_at(found, share) for share in shares]).T.mean(axis=1)
    per_kelvin = GRAVITY / 300.0 * 0.224
    return float(per_kelvin * rise), float(per_kelvin * band)


def vented_rows() -> list[Row]:
    """Boxes with openings."""
    found = condition("vented_board")
    flow, loss = found["openings"]["flow_g_per_s"], accuracy("perforated_plate")
    board = found["boards"][0]["mean_c"] - found["surrounding_air_c"]
    outlet = _outlet(found, "outlet")
    about = "one upright board, 10 W, slots low and high"
    rows = [
        _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen", "flow, g/s", 0.4325,
             (flow, flow * outlet[1] / outlet[0])),
        _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen",
             "air that leaves, rise, K", 23.05, outlet),
        _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen",
             "board, mean rise, K", 34.9, (board, board_band_k("vented_board", "board")),
             "our air beside the upper half of the board is warmer than theirs, and so is the board"),
        _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen",
             "air, mean rise, K", 8.35, mean_air(found), own=True),
        _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen",
             "head of the air between the slots, m2/s2", 0.0532, _head(found),
             own=True),
    ]  # fmt: skip
    for share, theirs in F_SLICES_K.items():
        _, band = air_at(found, share)
        ours = slice_of_f(share)
        rows.append(
            _row("numerical experiment", f"F: {about}", by.EXPERIMENT, "F", "seen",
                 f"slice of air at {share:g} of the height, rise, K", theirs, (ours, band),
                 _F_WHY.get(share, ""), scale=23.05, own=True)
        )  # fmt: skip
    for which, case, theirs in (
        ("w20", "20 W, 20 cm2 each, 0.25 m", 30.19),
        ("w50", "50 W, 50 cm2 each, 0.40 m", 25.63),
        ("w100", "100 W, 100 cm2 each, 1.0 m", 18.68),
    ):
        rows.append(
            _row("worked example", f"two vents, air mixed, {case}", by.MIXED_BOX, "balance",
                 "computed", "rise of the air, K", theirs, mean_air(condition("two_vents", which)))
        )  # fmt: skip
    rises = []
    for power in (10, 20, 40):
        found = condition("vented_cards", f"w{power}")
        ours = _outlet(found, "outlet")
        rises.append(ours[0])
        rows.append(
            _row("practice rule", f"six upright cards, {power} W, slots low and high",
                 by.VENTED_CARDS, "formula", "computed", "rise of the air that leaves, K",
                 _cards(found["heat_balance"]["openings_w"], ours[0]), ours,
                 "the formula takes the air to warm evenly from inlet to outlet")
        )  # fmt: skip
    rows.append(
        _row("practice rule", "six upright cards, 40 W over 10 W", by.VENTED_CARDS, "formula",
             "seen", "ratio of rises", 4 ** (2 / 3), (rises[2] / rises[0],
             rises[2] / rises[0] * loss / 300),
             "viscosity in the slots and warmer air: the rise grows with less than the 2/3 power"
             if rises[2] / rises[0] < 4 ** (2 / 3) else "")
    )  # fmt: skip
    return rows


def _cards(heat_w: float, rise: float) -> float:
    """Rise by the formula: Q = rho cp A (g h / (T Ke))^(1/2) dT^(3/2) [K]."""
    area, height, loss = 2e-3, 0.224, 2 * 2.778
    cold = air(298.15, 101325.0)
    capacity = float(cold.density) * 1006.5 * area
    drive = (GRAVITY * height / ((298.15 + rise / 2) * loss)) ** 0.5
    return (heat_w / (capacity * drive)) ** (2 / 3)


# Package, what the source says of theta JA [K/W], its power [W].
_PACKAGES = (
    ("sot_23", "SOT-23", 200.0, 0.3, "U1"),
    ("soic_8", "SOIC-8", 100.0, 1.0, "U1"),
    ("qfn_4x4", "QFN 4 x 4 mm with pad", 42.5, 1.0, "U1"),
    ("tssop_16", "TSSOP-16 with pad", 40.0, 1.0, "U1"),
    ("to_220_in_air", "TO-220 alone in air", 62.0, 1.0, "Q1"),
)


def package_rows() -> list[Row]:
    """typical junction-to-ambient resistances, a range of 40 % either way."""
    rows = []
    for which, name, typical, power, part in _PACKAGES:
        found = condition("still_air_box", which)
        junction = next(each for each in found["parts"] if each["name"] == part)
        # The air beside the board, 25 mm under it, as the standard measures it.
        beside, _ = air_at(found, 0.5 - 25 / 305)
        ours = (junction["temperature_c"] - found["surrounding_air_c"] - beside) / power
        rows.append(
            _row("practice rule", f"{name} in a still-air box", by.JEDEC, "typical", "memory",
                 "theta JA, K/W", (0.6 * typical, 1.4 * typical),
                 (ours, junction["band_k"] / power),
                 "hangs without leads; in a test board its leads carry heat away"
                 if part == "Q1" else "")
        )  # fmt: skip
    return rows


def document_rows() -> list[Row]:
    """All rows of this file."""
    return [
        *isothermal_rows(),
        *oven_rows(),
        *heated_rows(),
        *cabinet_rows(),
        *vented_rows(),
        *package_rows(),
    ]
