"""What changed against an earlier result, put in words for every format."""

from collections.abc import Callable, Sequence

from enclosure_check.findings.baseline import Baseline, InputChange, LimitChange, Value
from enclosure_check.findings.results import Report
from enclosure_check.report.layout import counted, tenths

# A change of a margin below this is not shown by itself. [K]
SHOWN_K = 0.05
# Rows and values shown; lost margins are shown in any case.
MOST_ROWS = 25
MOST_INPUTS = 40
LONGEST_VALUE = 40


def lost_of(baseline: Baseline) -> list[LimitChange]:
    """Give the limits whose margin fell by more than allowed."""
    return [change for change in baseline.limits if change.lost]


def allowed_loss(baseline: Baseline) -> str:
    """Give what a margin may lose, as stated."""
    return f"{baseline.allow_loss_k:g} K"


def headline(baseline: Baseline) -> str:
    """Say in one sentence how the margins stand against the earlier result."""
    if not baseline.known:
        return "not in the baseline, so not compared."
    lost = lost_of(baseline)
    both = sum(change.change_k is not None for change in baseline.limits)
    if lost:
        return (
            f"WORSE: {len(lost)} of {counted(both, 'margin')} fell by more than the "
            f"{allowed_loss(baseline)} allowed."
        )
    return (
        f"none of {counted(both, 'margin')} fell by more than the {allowed_loss(baseline)} allowed."
    )


def shown_limits(baseline: Baseline) -> tuple[list[LimitChange], str]:
    """Give the limits to show, those that lost and others that changed; and what is left out."""
    lost = lost_of(baseline)
    rest = [
        change
        for change in baseline.limits
        if not change.lost and (change.change_k is None or abs(change.change_k) >= SHOWN_K)
    ]
    near = _nearer(baseline, rest)
    shown = [*lost, *near[: max(MOST_ROWS - len(lost), 0)]]
    hidden = len(lost) + len(rest) - len(shown)
    same = len(baseline.limits) - len(lost) - len(rest)
    notes = []
    if hidden:
        notes.append(f"{hidden} more changed")
    if same:
        notes.append(f"{same} the same within {SHOWN_K:g} K")
    return shown, "; ".join(notes)


def _nearer(baseline: Baseline, rest: Sequence[LimitChange]) -> list[LimitChange]:
    """Leave out, of a point's highest and lowest limit, the one that is farther away now."""
    nearest: dict[tuple[str, str, str], float] = {}
    for change in baseline.limits:
        if change.new_margin_k is not None:
            point = change.condition, change.name, change.limit_kind
            nearest[point] = min(nearest.get(point, change.new_margin_k), change.new_margin_k)
    return [
        change
        for change in rest
        if change.new_margin_k is None
        or change.new_margin_k <= nearest[change.condition, change.name, change.limit_kind]
    ]


def change_word(change: LimitChange) -> str:
    """Give the change of a margin, or why there is none."""
    if change.change_k is None:
        return "new limit" if change.old_margin_k is None else "limit gone"
    return f"{change.change_k:+.1f}" + (" LOST" if change.lost else "")


def number(value: float | None) -> str:
    """Give a temperature or margin, a dash where there is none."""
    return "-" if value is None else tenths(value)


def limit_words(change: LimitChange) -> str:
    """Give a limit that changed, then and now."""
    old, new = number(change.old_limit_c), number(change.new_limit_c)
    return "" if "-" in (old, new) or old == new else f"{old} > {new}"


def came_and_went(baseline: Baseline) -> list[tuple[str, tuple[str, ...]]]:
    """Give what is on one side only, each kind with its names."""
    return [
        (what, names)
        for what, names in (
            ("Conditions added", baseline.conditions_added),
            ("Conditions removed, or not checked now", baseline.conditions_removed),
            ("Parts added", baseline.parts_added),
            ("Parts removed", baseline.parts_removed),
        )
        if names
    ]


def about_inputs(baseline: Baseline, report: Report, shown: Callable[[str], str]) -> list[str]:
    """Say what cannot be seen from the list of changed values; ``shown`` is for user's texts."""
    lines = []
    option = report.conditions[0].option
    if baseline.old_option != option:
        lines.append(
            f"Option: then {_named(baseline.old_option, shown)}, now {_named(option, shown)}."
        )
    if baseline.old_version != report.version:
        lines.append(
            f"Program: then version {shown(baseline.old_version)}, now {report.version}; it may "
            "be what moved the margins."
        )
    if not baseline.inputs_known:
        lines.append("The baseline does not list what its document stated.")
    elif not baseline.inputs:
        same = baseline.same_document
        lines.append("The document is the same." if same else "No value of the document changed.")
    return lines


def _named(option: str | None, shown: Callable[[str], str]) -> str:
    return "none" if option is None else shown(option)


def shown_inputs(baseline: Baseline) -> tuple[Sequence[InputChange], int]:
    """Give the changed values to show, and how many more there are."""
    shown = baseline.inputs[:MOST_INPUTS]
    return shown, len(baseline.inputs) - len(shown)


def value_words(change: InputChange) -> str:
    """Give a value then and now."""
    old = "(not stated)" if change.state == "added" else _value(change.old)
    new = "(not stated)" if change.state == "removed" else _value(change.new)
    return f"{old} -> {new}"


def _value(value: Value) -> str:
    if value is None:
        return "null"
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, float):
        return f"{value:.10g}"
    return value if len(value) <= LONGEST_VALUE else f"{value[: LONGEST_VALUE - 3]}..."
