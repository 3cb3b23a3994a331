"""Short ways from a document, as plain data, to its case, network and temperatures.

Import it as ``from support.cases import solved`` (``tests`` is on the path).
"""

import copy
from typing import Any

import numpy as np

from enclosure_check.description.case import Case
from enclosure_check.description.document import Document
from enclosure_check.description.problems import FieldErrors, dotted
from enclosure_check.description.resolve import resolve
from enclosure_check.findings.assess import assess
from enclosure_check.findings.results import ConditionFinding
from enclosure_check.findings.solved import Solved
from enclosure_check.network.build import build_network
from enclosure_check.network.grid import GridOptions
from enclosure_check.network.network import Network
from enclosure_check.solve.nearby import Inverse
from enclosure_check.solve.steady import Solution, solve_steady

Data = dict[str, Any]

# Few cells, for what holds on any grid: the same code, solved in a tenth of the time.
COARSE = GridOptions(board_cells=16, wall_cells=4)
# What every converged answer must keep, of the heat that flows.
NODE_SHARE, OVERALL_SHARE = 1e-9, 1e-6
# Below this much heat the criterion is absolute. [W]
LEAST_HEAT_W = 1e-4


def box(**changes: Any) -> Data:
    """An empty aluminium box, 200 x 150 x 100 mm inside, in air of 25 C."""
    document: Data = {
        "title": "A box",
        "defaults": {
            "wall": {
                "material": "aluminium_5052",
                "thickness_mm": 2,
                "finish_outside": "grey_paint",
            }
        },
        "box": {"width_mm": 200, "height_mm": 150, "depth_mm": 100},
        "surroundings": {"air_c": 25},
    }
    return patched(document, changes)


def board(**changes: Any) -> Data:
    """A board upright in the middle of `box`."""
    return patched(
        {
            "parallel_to": "back",
            "length_mm": 120,
            "width_mm": 100,
            "copper": {"one": {"thickness_um": 35, "coverage_pct": 50}},
        },
        changes,
    )


def part(**changes: Any) -> Data:
    """A part on the front side of a board named main."""
    return patched(
        {
            "place": "main",
            "side": "front",
            "at_mm": [60, 50],
            "length_mm": 14,
            "width_mm": 10,
            "height_mm": 2,
        },
        changes,
    )


def patched(document: Data, changes: Data) -> Data:
    """Merge changes into a copy of some data; None removes a key (RFC 7396)."""
    merged = copy.deepcopy(document)
    for key, value in changes.items():
        if value is None:
            merged.pop(key, None)
        elif isinstance(value, dict) and isinstance(merged.get(key), dict):
            merged[key] = patched(merged[key], value)
        else:
            merged[key] = copy.deepcopy(value)
    return merged


def case_of(document: Data, condition: str = "base") -> Case:
    return resolve(Document.model_validate(document), condition)


def errors_of(document: Data) -> dict[str, str]:
    """Messages of everything that does not fit together, by dotted path."""
    try:
        case_of(document)
    except FieldErrors as error:
        found = {dotted(path): message for path, message in error.problems}
        assert found
        return found
    return {}


def network_of(document: Data, options: GridOptions | None = None) -> Network:
    return build_network(case_of(document), options)


def solved(document: Data, options: GridOptions | None = None) -> Solved:
    """Solve a document and make sure that its balance closes."""
    case = case_of(document)
    network = build_network(case, options)
    answer = solved_as(case, network, solve_steady(network))
    assert answer.solution.converged, answer.solution.outcome
    assert_balanced(answer)
    return answer


def solved_as(case: Case, network: Network, solution: Solution) -> Solved:
    """Put a solution found elsewhere with its case and network."""
    return Solved(case, network, solution, Inverse(network, solution.rise))


def checked(document: Data) -> ConditionFinding:
    return assess(solved(document))


def assert_balanced(answer: Solved) -> None:
    """Balance every node anew, link by link, without the network's own assembly."""
    network, rise = answer.network, answer.solution.rise
    leaves = np.zeros(network.size)
    exchanged = 0.0
    for kind in network.kinds:
        heat = kind.evaluate(rise, network.reference_k)[:, 0]
        np.add.at(leaves, kind.a, heat)
        np.subtract.at(leaves, kind.b, heat)
        # What ends nowhere keeps a mean and is no heat.
        outward = (network.fixed[kind.a] | network.fixed[kind.b]) & (kind.b != network.nowhere)
        exchanged += float(np.abs(heat[outward]).sum())
    sources = network.sources
    put_in = sources.heat(rise[sources.node], network.reference_k)[:, 0]
    np.subtract.at(leaves, sources.node, put_in)
    flows = max(exchanged + float(np.abs(put_in).sum()), LEAST_HEAT_W)
    unknown = leaves[~network.fixed]
    # A hundredth more: the order of adding up differs.
    assert np.abs(unknown).max() <= 1.01 * NODE_SHARE * flows
    assert abs(unknown.sum()) <= 1.01 * OVERALL_SHARE * flows


def temperatures(answer: Solved) -> dict[str, float]:
    """Temperature of every node by its label [C]."""
    pairs = zip(answer.network.node_labels, answer.temperature_c.tolist(), strict=True)
    named = dict(pairs)
    assert len(named) == answer.network.size
    return named
