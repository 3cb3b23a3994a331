"""The whole line, from a document to its report."""

from collections.abc import Sequence

from enclosure_check import __version__
from enclosure_check.description.case import Case
from enclosure_check.description.load import LoadedDocument
from enclosure_check.findings.assess import assess
from enclosure_check.findings.results import CAUTION, ConditionFinding, Report, worst
from enclosure_check.findings.solved import Solved
from enclosure_check.network.build import build_network
from enclosure_check.solve.steady import Outcome, solve_steady


class NotConvergedError(Exception):
    """No steady temperatures were found; the message names the condition, node and a way out."""

    def __init__(self, condition: str, node: str, imbalance_w: float, outcome: Outcome) -> None:
        super().__init__(
            f"condition {condition!r}: no converged answer. Worst node: {node} "
            f"({imbalance_w:.3g} W out of balance): {outcome.value}"
        )


def check(
    document: LoadedDocument, *, option: str | None = None, conditions: Sequence[str] | None = None
) -> Report:
    """Check a document under its conditions.

    Raises
    ------
    DocumentError
        When a condition or option named does not exist.
    NotConvergedError
        When a condition has no steady temperatures.
    """
    cases = document.cases(option=option, conditions=conditions)
    found = tuple(check_case(case) for case in cases)
    return Report(
        format=1,
        version=__version__,
        document=document.file,
        digest=document.digest,
        title=cases[0].title,
        verdict=worst([condition.verdict for condition in found]),
        margin_stated=any(case.margin_k is not None for case in cases),
        conditions=found,
        caution=CAUTION,
    )


def check_case(case: Case) -> ConditionFinding:
    """Build, solve and assess one case."""
    network = build_network(case)
    solution = solve_steady(network)
    if not solution.converged:
        node = network.node_labels[int(solution.worst_node[0])]
        raise NotConvergedError(
            case.condition, node, float(solution.worst_imbalance_w[0]), solution.outcome[0]
        )
    return assess(Solved(case, network, solution))
