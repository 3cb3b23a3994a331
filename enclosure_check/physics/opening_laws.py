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
    Correlation(
        key="level_exchange",
        name="Epstein, two-way exchange through a level opening",
        equation="Q = 0.055 (1 + 400 l^3)^(1/6) / (1 + 0.00527 (1 + 400 l^3)^(1/2) (l^6 + 117 "
        "l^2)^(3/4))^(1/3) sqrt(g' D^5), l = L/D",
        characteristic_length="diameter of a hole",
        variable="none",
        valid_from=0.0,
        valid_to=math.inf,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=10.0,
        accuracy_basis=f"{MEMORY}: brine and water, l from 0.01 to 10",
        reference="M. Epstein, 1988, Buoyancy-driven exchange flow through small openings in "
        "horizontal partitions, Journal of Heat Transfer 110, 885-893 (from memory); stopped by a "
        "net flow of 0.55 sqrt(g' D^5), M. Epstein, M. A. Kenton, 1989, Journal of Heat Transfer "
        "111, 980-987 (from memory)",
    ),
    Correlation(
        key="entraining_plume",
        name="Morton, Taylor & Turner, plume of inflowing air",
        equation="M/M_0 = (1 + 6 e y / (5 b))^(5/3), e = 0.1",
        characteristic_length="radius of the flow at the opening",
        variable="none",
        valid_from=0.0,
        valid_to=math.inf,
        prandtl_from=0.0,
        prandtl_to=math.inf,
        accuracy_pct=30.0,
        accuracy_basis=f"{MEMORY}: published entrainment coefficients run from 0.08 to 0.13; free "
        "turbulent plumes, not small boxes",
        reference="B. R. Morton, G. Taylor, J. S. Turner, 1956, Turbulent gravitational convection "
        "from maintained and instantaneous sources, Proceedings of the Royal Society A 234, 1-23 "
        "(from memory)",
    ),
)
