"""Isothermal boxes in still open air: numerical experiments made for this project, and ours.

Laminar free convection round isothermal boxes, solved on fine grids with a general-purpose flow
solver; not measurements. Their uncertainty: cube 4 %, other totals 6 %, top face alone 20 %.
Convection only, at sea level.
"""

from dataclasses import dataclass

import numpy as np

from enclosure_check.physics.box import box_film, box_geometry


@dataclass(frozen=True)
class Case:
    name: str
    dims: tuple[float, float, float]
    surface_k: float
    air_k: float
    covered: tuple[int, ...]
    top_w: float
    sides_w: float
    bottom_w: float | None
    total_w: float


CASES = (
    Case("X1 cube", (0.2, 0.2, 0.2), 333.15, 283.15, (), 7.44, 39.6, 7.25, 54.3),
    Case("X2 flat", (0.25, 0.15, 0.05), 330.0, 300.0, (), 2.17, 6.72, 3.87, 12.8),
    Case("X3 tall", (0.1, 0.2, 0.3), 330.0, 300.0, (), 1.35, 21.9, 2.35, 25.5),
    Case("X5 tall on a wall", (0.1, 0.2, 0.3), 330.0, 300.0, (0,), 1.59, 14.2, 1.95, 17.8),
    Case("X6 flat on a table", (0.25, 0.15, 0.05), 330.0, 300.0, (4,), 2.31, 7.93, None, 10.2),
)


def parts(case: Case) -> dict[str, float]:
    """Our convection from top, sides, bottom and the whole [W]."""
    is_open = np.ones(6, bool)
    is_open[list(case.covered)] = False
    geometry = box_geometry(case.dims, (0.0, 0.0, 1.0), is_open)
    film = box_film(np.full(6, case.surface_k), case.air_k, 101325.0, geometry)
    heat = film.coefficient * geometry.area * (case.surface_k - case.air_k)
    return {
        "top": float(heat[5]),
        "sides": float(heat[:4].sum()),
        "bottom": float(heat[4]),
        "total": float(heat.sum()),
    }


def table() -> list[dict[str, float | str | None]]:
    """Rows of ours against the experiments, for the evidence page [W]."""
    rows: list[dict[str, float | str | None]] = []
    for case in CASES:
        ours = parts(case)
        row: dict[str, float | str | None] = {"case": case.name}
        for part in ("top", "sides", "bottom", "total"):
            theirs = getattr(case, f"{part}_w")
            row[f"{part}_experiment_w"] = theirs
            row[f"{part}_ours_w"] = ours[part]
            row[f"{part}_difference_pct"] = theirs and 100 * (ours[part] / theirs - 1)
        rows.append(row)
    return rows
