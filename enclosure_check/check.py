"""The whole line, from a document to its report."""

from collections.abc import Callable, Sequence
from functools import partial
from typing import TYPE_CHECKING

from enclosure_check import __version__
from enclosure_check.description.case import Case
from enclosure_check.description.load import LoadedDocument
from enclosure_check.description.problems import DocumentError
from enclosure_check.findings.assess import assess
from enclosure_check.findings.results import CAUTION, ConditionFinding, PartFinding, Report, worst
from enclosure_check.findings.solved import Solved
from enclosure_check.findings.stated import PartListFinding
from enclosure_check.network.build import build_network
from enclosure_check.network.network import Network
from enclosure_check.physics.view_closure import NotEnclosedError
from enclosure_check.solve.nearby import Known, solve_known, stands_alone
from enclosure_check.solve.steady import Outcome
from enclosure_check.workers import Task, each, spread

if TYPE_CHECKING:
    from enclosure_check.findings.certainty import Sensitivities
    from enclosure_check.findings.explanation import ExplainedReport


class NotConvergedError(Exception):
    """No steady temperatures were found; the message names the condition, node and a way out."""

    def __init__(self, condition: str, node: str, imbalance_w: float, outcome: Outcome) -> None:
        self.condition = condition
        super().__init__(
            f"condition {condition!r}: no converged answer. Worst node: {node} "
            f"({imbalance_w:.3g} W out of balance): {outcome.value}"
        )


class NotEnclosedCaseError(NotConvergedError):
    """The surfaces inside enclose no space, mostly since bodies reach into each other."""

    def __init__(self, condition: str, reason: str) -> None:
        self.condition = condition
        Exception.__init__(
            self,
            f"condition {condition!r}: no answer, {reason}. Look for bodies in the air or boards "
            "that reach into each other",
        )


def check(
    document: LoadedDocument,
    *,
    option: str | None = None,
    conditions: Sequence[str] | None = None,
    tell: Callable[[str], None] | None = None,
    see: Callable[[Solved, ConditionFinding], None] | None = None,
    sensitivities: int = 0,
    processes: int = 1,
) -> Report:
    """Check a document under its conditions.

    ``tell`` is told the name of each as it begins, ``see`` is shown what was found for it. The
    report tells so many ``sensitivities`` of the smallest margin of a part. Conditions are spread
    over so many ``processes``, forks of this one, where nothing is asked that needs all in one;
    the report is the same.

    Raises
    ------
    DocumentError
        When a condition or option named does not exist, or for an opening that is not closed.
    NotConvergedError
        When a condition has no steady temperatures.
    """
    cases = document.cases(option=option, conditions=conditions)
    # The case of the most power is solved first, and all others from its state: none depends on
    # another, so that they may be found side by side.
    first = max(cases, key=_stated_power)
    network = _build(first)
    # Of the cases that this process solves, the one with the smallest margin.
    closest: tuple[float, Solved] | None = None
    from_first: Known | None = None

    def prepare(case: Case) -> tuple[Network, Known | None]:
        if case is first:
            return network, None
        own = _build(case)
        return own, solve_known(own, None) if stands_alone(own, network) else None

    def lead() -> Known:
        nonlocal from_first
        known = solve_known(network, None)
        _refuse_unconverged(first, known)
        from_first = known.shared()
        return from_first

    def solved_with(
        case: Case, prepared: tuple[Network, Known | None], shared: Known | None
    ) -> Solved:
        own, known = prepared
        if known is None:
            assert shared is not None  # see `alone`
            known = shared.of(own) if case is first else solve_known(own, shared)
        return _solved(case, own, known)

    def finish(
        case: Case, prepared: tuple[Network, Known | None], shared: Known | None
    ) -> ConditionFinding:
        nonlocal closest
        solved = solved_with(case, prepared, shared)
        # Only tolerances ask for the document again.
        rebuild = document.variation(case).case_with if case.tolerances else None
        found = assess(solved, rebuild)
        if see is not None:
            see(solved, found)
        if found.parts and (closest is None or found.parts[0].margin_k < closest[0]):
            closest = found.parts[0].margin_k, solved
        return found

    def alone(prepared: tuple[Network, Known | None]) -> bool:
        return prepared[1] is not None

    def begins(case: Case) -> None:
        if tell is not None:
            tell(case.condition)

    # Who wants to see the solutions needs them in this process.
    if see is not None:
        processes = 1
    # Those least like the first, which may need nothing of it, are begun while it is solved.
    order = sorted(range(len(cases)), key=lambda at: (cases[at] is first, _stated_power(cases[at])))
    ordered = [cases[at] for at in order]
    results = spread(Task(prepare, lead, finish, alone, begins), ordered, processes)
    found = [result for _, result in sorted(zip(order, results, strict=True), key=lambda x: x[0])]
    buys = None
    judged = [
        (case, result.parts[0])
        for case, result in zip(ordered, results, strict=True)
        if result.parts
    ]
    if sensitivities > 0 and judged:
        case, part = min(judged, key=lambda pair: pair[1].margin_k)
        # What another process solved is solved here again, from the same state.
        at = closest[1] if closest is not None and closest[1].case is case else None
        at = at or solved_with(case, prepare(case), from_first)
        buys = _sensitivities(document, at, part, sensitivities, processes)
    return Report(
        format=1,
        version=__version__,
        document=document.file,
        digest=document.digest,
        part_lists=tuple(
            PartListFinding(each.name, each.file, each.digest, each.parts)
            for each in document.part_lists(option)
        ),
        title=cases[0].title,
        verdict=worst([condition.verdict for condition in found]),
        margin_stated=any(
            case.margin_k is not None or case.confidence_pct is not None for case in cases
        ),
        conditions=tuple(found),
        caution=CAUTION,
        inputs=document.inputs(option),
        baseline=None,
        sensitivities=buys,
    )


def _stated_power(case: Case) -> float:
    """Power stated for parts and boards [W]."""
    boards = sum(board.other_power_w for board in case.boards.values())
    return boards + sum(part.power_w for part in case.parts.values())


def _sensitivities(
    document: LoadedDocument, solved: Solved, part: PartFinding, most: int, processes: int
) -> "Sensitivities":
    """Give the numbers that move the smallest margin most."""
    from enclosure_check.findings.sensitivities import sensitivities

    variation = document.variation(solved.case)
    return sensitivities(solved, variation, part, most, partial(each, processes=processes))


def check_and_explain(
    document: LoadedDocument,
    part: str,
    *,
    option: str | None = None,
    conditions: Sequence[str] | None = None,
    tell: Callable[[str], None] | None = None,
) -> "ExplainedReport":
    """Check a document and explain one part, under the condition where its margin is smallest.

    Raises
    ------
    DocumentError
        When a condition, option or part named does not exist.
    NotConvergedError
        When a condition has no steady temperatures.
    """
    from enclosure_check.findings.explain import Worst

    cases = document.cases(option=option, conditions=conditions)
    names = tuple(dict.fromkeys(name for case in cases for name in case.parts))
    if part not in names:
        raise DocumentError([document.unknown("parts", "part", part, names)])
    worst_of = Worst(part)
    report = check(document, option=option, conditions=conditions, tell=tell, see=worst_of.see)
    return worst_of.explained(report)


def solve_case(case: Case) -> Solved:
    """Build and solve one case.

    Raises
    ------
    NotConvergedError
        When it has no steady temperatures.
    """
    network = _build(case)
    return _solved(case, network, solve_known(network, None))


def _build(case: Case) -> Network:
    try:
        return build_network(case)
    except NotEnclosedError as error:
        raise NotEnclosedCaseError(case.condition, str(error)) from None


def _solved(case: Case, network: Network, known: Known) -> Solved:
    _refuse_unconverged(case, known)
    return Solved(case, network, known.solution, known.inverse)


def _refuse_unconverged(case: Case, known: Known) -> None:
    solution = known.solution
    if not solution.converged:
        node = known.node_labels[int(solution.worst_node[0])]
        worst = float(solution.worst_imbalance_w[0])
        raise NotConvergedError(case.condition, node, worst, solution.outcome[0])
