"""Rung 1 and 2: what openings lose, and the flow of warm columns."""

from fluids.filters import round_edge_screen, square_edge_screen
from published import sources as by
from published.evidence_row import SAME_LAW_PCT, Row, accuracy, row

from enclosure_check.physics.openings import (
    CONTRACTION_LEFT,
    cut_out_loss,
    loss_of_discharge,
    mesh_loss,
    mesh_viscous_loss,
    plate_loss,
    viscous_loss,
)
from enclosure_check.physics.stack import area_in_series, stack_flow

# Thin perforated plate, K on the velocity in front, recalled formula worked for each free share.
_IDELCHIK_8_1 = {0.2: 52.6, 0.3: 19.3, 0.4: 8.76, 0.5: 4.37, 0.6: 2.26, 0.7: 1.15}
# Sharp hole between large rooms: Re, zeta_phi and epsilon of K = zeta_phi + 2.85 epsilon.
_IDELCHIK_4_19 = (
    (25, 1.94, 0.34), (60, 1.14, 0.37), (100, 0.89, 0.40), (400, 0.64, 0.46), (1000, 0.39, 0.53),
    (4000, 0.22, 0.64), (10000, 0.15, 0.74),
)  # fmt: skip


def loss_rows() -> list[Row]:
    """Plates, holes and meshes."""
    pct, rows = accuracy("perforated_plate"), []
    for free, theirs in _IDELCHIK_8_1.items():
        ours = plate_loss(free) / free**2
        case = f"thin perforated plate, {100 * free:.0f} % free, high Re"
        rows.append(
            row(1, "measured", case, by.IDELCHIK, "diagram 8-1", "memory", "K", theirs, ours,
                pct=pct)
        )  # fmt: skip
        rows.append(
            row(1, "measured", case, by.BLEVINS, "square-edged screens", "computed", "K",
                float(square_edge_screen(free)), ours, pct=pct)
        )  # fmt: skip
    for re, phi, epsilon in _IDELCHIK_4_19:
        ours = cut_out_loss(0.0, CONTRACTION_LEFT) + viscous_loss(0.0) / re
        rows.append(
            row(1, "measured", f"sharp hole, Re {re}", by.IDELCHIK, "diagram 4-19", "memory", "K",
                phi + 2.85 * epsilon, ours, pct=pct,
                why="one contraction for all Re, the mean of this table"
                if re in (100, 1000, 10000) else "")
        )  # fmt: skip
    for free in (0.3, 0.5, 0.7):
        for re in (100, 400):
            ours = mesh_loss(free) + mesh_viscous_loss(free) / re
            rows.append(
                row(1, "measured", f"mesh of round wire, {100 * free:.0f} % free, Re {re}",
                    by.BLEVINS, "round-wire screens", "computed", "K",
                    float(round_edge_screen(free, re)), ours, pct=accuracy("woven_mesh"))
            )  # fmt: skip
    for discharge, theirs in ((0.60, 2.78), (0.61, 2.69), (0.65, 2.37)):
        rows.append(
            row(1, "worked example", f"hole of discharge coefficient {discharge:g}", by.BS_5925,
                "orifice equation", "computed", "K", theirs, loss_of_discharge(discharge),
                pct=SAME_LAW_PCT)
        )  # fmt: skip
    return rows


def stack_rows() -> list[Row]:
    """Flow of a warm column."""
    one = stack_flow(0.010, 0.65, 0.40, 20.0, 318.15)
    equal = stack_flow(area_in_series(0.010, 0.010), 0.61, 0.40, 20.0, 308.15)
    larger = stack_flow(area_in_series(0.010, 0.020), 0.61, 0.40, 20.0, 308.15)
    return [
        row(2, "worked example", case, by.BS_5925, "orifice and series equations", "computed",
            "flow, l/s", theirs, 1e3 * ours, pct=SAME_LAW_PCT)
        for case, theirs, ours in (
            ("opening 100 cm2, 0.40 m, 20 K, C 0.65", 4.566, one),
            ("two openings 100 cm2, 0.40 m, 20 K, Cd 0.61", 3.078, equal),
            ("openings 100 and 200 cm2, 0.40 m, 20 K, Cd 0.61", 3.894, larger),
        )
    ]  # fmt: skip
