"""Boxes with things on their board and cables through their walls, solved.

Import it as ``from support.features import boxed`` (``tests`` is on the path).
"""

import numpy as np
from support.cases import board, box, case_of, part, patched

from enclosure_check.description.frames import OPPOSITE, wall_pair
from enclosure_check.findings.heat import heat_balance, wall_findings
from enclosure_check.findings.solved import Solved
from enclosure_check.network.build import build_network
from enclosure_check.network.grid import GridOptions, PlateGrid
from enclosure_check.network.links import Conduction, LinkLabel
from enclosure_check.solve.steady import LEAST_HEAT_W, solve_steady

# Rounding of a balance, of the heat that flows. [-]
CLOSES = 1e-6
# Half as wide cells as the default.
HALVED = GridOptions(board_cells=256, wall_cells=64)

STAND_OFF = {"to": "back", "at_mm": [10, 10], "diameter_mm": 6, "material": "brass"}
CLAMP = {"conductance_w_per_mk": 20}
FILLER = {"side": "front", "conductivity_w_per_mk": 1.5}
CAN = {"side": "front", "at_mm": [60, 50], "length_mm": 30, "width_mm": 20, "height_mm": 5}
CABLE = {"count": 10, "conductor_mm2": 1.5, "outer_mm": 3, "inside_mm": 150}
POUR = {"a": {"thickness_um": 70, "coverage_pct": 100}}


def boxed(parts=None, walls=None, **features):
    """A box with one board of 4 W and a part of 2 W on its front side."""
    return box(
        boards={"main": board(other_power_w=4, from_walls_mm={"front": 10}, **features)},
        parts={"U1": part(power_w=2)} if parts is None else parts,
        walls=walls or {},
    )


def answer(document, options=None):
    """Solve a document; its nodes and the whole box balance."""
    case = case_of(document)
    network = build_network(case, options)
    solution = solve_steady(network)
    assert solution.converged, solution.outcome
    solved = Solved(case, network, solution, inverse=None)
    imbalance = network.imbalance(solution.rise)[network.unknown]
    flows = max(float(solution.heat_w[0]), LEAST_HEAT_W)
    assert np.abs(imbalance).max() < CLOSES * flows
    walls = wall_findings(solved)
    assert abs(heat_balance(solved, walls).imbalance_w) < CLOSES * flows
    return solved


def rises(solved):
    """Rises of parts and boards [K]."""
    places = solved.network.places
    nodes = [node for each in places.parts.values() for node in (each.junction, each.case)]
    cells = [
        plate.cells.ravel() for plate in (*places.boards.values(), *places.wall_inside.values())
    ]
    return solved.solution.rise[np.concatenate((nodes, *cells)), 0]


def node(solved, label):
    """Temperature of a node by its label [C]."""
    return float(solved.temperature_c[solved.network.node_labels.index(label)])


def links(solved, owner, role):
    """Ends and conductances of the conduction links under a label [W/K].

    Without what contacts close by add, which follows other temperatures.
    """
    number = list(solved.network.labels).index(LinkLabel(owner, role))
    (kind,) = (each for each in solved.network.kinds if isinstance(each, Conduction))
    mine = (kind.label == number) & (kind.a == kind.x) & (kind.b == kind.y)
    return kind.a[mine], kind.b[mine], kind.conductance[mine, 0]


def conductance(solved, owner, role):
    return float(links(solved, owner, role)[2].sum())


def flat_grid(counts, size=(0.12, 0.06), kt=1.0):
    """A plate in the plane of x and y."""
    shape = (size[0], size[1], 0.0)
    return PlateGrid((0, 1), (0.0, 0.0, 0.0), shape, counts, np.full((2, *counts), kt))


def board_grid():
    """Some cells of the board of `boxed`."""
    low, size = (0.04, 0.01, 0.025), (0.12, 0.0016, 0.1)
    return PlateGrid((0, 2), low, size, (12, 10), np.ones((2, 12, 10)))


def full(parallel="back", **changes):
    """A board with everything on it, whichever way it lies."""
    pair = wall_pair({"left": 0, "back": 1, "bottom": 2}[parallel])
    near, far = pair[0], pair[1]
    edges = [wall for wall in OPPOSITE if wall not in pair]
    row = {
        "parallel_to": parallel,
        "length_mm": 90,
        "width_mm": 70,
        "copper": board()["copper"],
        "from_walls_mm": {near: 12},
        "other_power_w": 3,
        "zones": {"pour": {"at_mm": [30, 20], "length_mm": 31, "width_mm": 23, "copper": POUR}},
        "stand_offs": {
            "a": {**STAND_OFF, "to": near, "at_mm": [5, 6]},
            "b": {"to": near, "at_mm": [84, 60], "resistance_k_per_w": 12},
        },
        "edge_clamps": {edges[0]: CLAMP, edges[3]: {**CLAMP, "length_mm": 33}},
        "fillers": {"gap": {**FILLER, "side": near, "at_mm": [70, 20], "length_mm": 25,
                            "width_mm": 21}},
        "shield_cans": {"c": {**CAN, "side": far, "at_mm": [40, 45]}},
    }  # fmt: skip
    at = {"at_mm": [40, 45], "length_mm": 12, "width_mm": 9}
    # Seen from the low side, right runs the other way on this face.
    near_at = {"at_mm": [90 - 70, 20]} if parallel != "back" else {"at_mm": [70, 20]}
    far_at = {"at_mm": [90 - 40, 45]} if parallel == "back" else {"at_mm": [40, 45]}
    parts = {
        "U1": part(side=far, power_w=1, **{**at, **far_at}),
        "U2": part(side=near, power_w=1, **{**at, **near_at}),
    }
    walls = {"left": {"cables": {"a": {**CABLE, "current_a": 4}}}}
    document = box(boards={"main": row}, parts=parts, walls=walls)
    return patched(document, changes)
