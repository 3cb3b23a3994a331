"""Data sheets of the laws of openings, part of the register in `physics/correlation.py`."""

from __future__ import annotations

import math

from enclosure_check.physics.data_sheet import MEMORY, SCATTER, Correlation

IDELCHIK = "I. E. Idelchik, 1986, Handbook of Hydraulic Resistance, 2nd ed., Hemisphere"

OPENING_LAWS = (
    Correlation(
        key="perforated_plate",
        name="Idelchik, holes and perforated plates",
        equation="K = 0.5 (1 - f)^0.75 + tau (1 - f)^1.375 + (1 - f)^2 on the velocity in the "
        "holes; tau = 0.25 (2.4 - l) 10^-(0.25 + 0.535 l^8/(0.05 + l^7)), l = length / diameter",
        characteristic_length="hydraulic diameter of a hole",
        variable="reynolds",
        valid_from=25.0,
        valid_to=1e4,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=20.0,
        accuracy_basis=f"{MEMORY}: thin hole with what viscosity adds, against the author's table; "
        "with all of tau, for Re above 1e5, 1 % low to 12 % high of fluids after Blevins, f 0.2 to "
        "0.7",
        reference=f"{IDELCHIK}, diagrams 8-1, 8-3, 4-12 and 4-19 (from memory); one share of tau "
        "for all Re made for this project",
    ),
    Correlation(
        key="creeping_hole",
        name="Sampson, creeping flow through a hole, and along it",
        equation="dp = (12 pi + f Re l) / Re rho v^2 / 2, f Re = 64 round, 57 to 96 rectangular",
        characteristic_length="hydraulic diameter of a hole",
        variable="reynolds",
        valid_from=0.0,
        valid_to=3.0,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=10.0,
        accuracy_basis=f"{MEMORY}: the sum is within 1 % for round holes; a slot loses 8 % more, "
        "holes close together 12 % less",
        reference="Z. Dagan, S. Weinbaum, R. Pfeffer, 1982, An infinite-series solution for the "
        "creeping motion through an orifice of finite length, Journal of Fluid Mechanics 115, "
        "505-523 (from memory), after R. A. Sampson",
    ),
    Correlation(
        key="woven_mesh",
        name="Blevins, mesh of round wire",
        equation="K = (0.52 + 17/Re) (1 - f^2) / f^2 on the velocity in front",
        characteristic_length="diameter of the wire",
        variable="reynolds",
        valid_from=20.0,
        valid_to=math.inf,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=20.0,
        accuracy_basis=f"{SCATTER}: fluids after Blevins 9 %; another handbook up to 21 % higher "
        "at f = 0.3 (from memory)",
        reference="R. D. Blevins, 1984, Applied Fluid Dynamics Handbook, Van Nostrand Reinhold; "
        "form of the rise towards low Re made for this project",
    ),
)
