"""Compare a report with an earlier one: margins, temperatures, and what the document states."""

import posixpath
from collections.abc import Iterable, Mapping, Sequence
from typing import NamedTuple

from enclosure_check.findings.baseline import Baseline, InputChange, LimitChange, Value
from enclosure_check.findings.earlier import EarlierCondition, EarlierReport
from enclosure_check.findings.results import ConditionFinding, Report
from enclosure_check.findings.run import Run
from enclosure_check.records import replace

# Rounding is no loss. [K]
_ROUNDING_K = 1e-9

# Name, kind and side of a limit.
_Key = tuple[str, str, str]


class _Held(NamedTuple):
    """A limit on one side [C, C, K]."""

    temperature_c: float | None = None
    limit_c: float | None = None
    margin_k: float | None = None


def compared(run: Run, earlier: Sequence[EarlierReport], file: str, allow_loss_k: float) -> Run:
    """Give a run with what changed against an earlier one.

    One document against one is compared whatever their paths; else they are matched by path, as
    given.

    Parameters
    ----------
    run
        That of now.
    earlier
        The reports of then.
    file
        Where those come from.
    allow_loss_k
        What a margin may lose [K].
    """
    asked = [
        *(each.document for each in run.documents),
        *(each.document for each in run.without_answer),
    ]
    then = _by_path(asked, earlier)
    reports = tuple(
        replace(
            report,
            baseline=_compared(report, then.get(_plain(report.document)), file, allow_loss_k),
        )
        for report in run.documents
    )
    now = set(map(_plain, asked))
    gone = (
        ()
        if len(asked) == len(earlier) == 1
        else tuple(each.document for each in earlier if _plain(each.document) not in now)
    )
    return replace(run, documents=reports, unchecked=gone)


def holds_any(documents: Sequence[str], earlier: Sequence[EarlierReport]) -> bool:
    """Tell whether an earlier result holds any of these documents."""
    then = _by_path(documents, earlier)
    return any(_plain(document) in then for document in documents)


def _by_path(
    documents: Sequence[str], earlier: Sequence[EarlierReport]
) -> dict[str, EarlierReport]:
    if len(documents) == len(earlier) == 1:
        return {_plain(documents[0]): earlier[0]}
    return {_plain(each.document): each for each in earlier}


def _plain(path: str) -> str:
    return posixpath.normpath(path.replace("\\", "/"))


def _compared(
    report: Report, old: EarlierReport | None, file: str, allow_loss_k: float
) -> Baseline:
    if old is None:
        return Baseline(
            file, allow_loss_k, "pass", False, "", None, False, False, (), (), (), (), (), ()
        )
    then = {each.name: each for each in old.conditions}
    now = {each.name: each for each in report.conditions}
    changes = [
        change
        for name, condition in now.items()
        if name in then
        for change in _limit_changes(condition, then[name], allow_loss_k)
    ]
    parts_then = _names(name for condition in old.conditions for name in condition.part_names)
    parts_now = _names(each.name for condition in report.conditions for each in condition.part_heat)
    return Baseline(
        file=file,
        allow_loss_k=allow_loss_k,
        verdict="fail" if any(change.lost for change in changes) else "pass",
        known=True,
        old_version=old.version,
        old_option=old.conditions[0].option if old.conditions else None,
        same_document=old.digest == report.digest,
        inputs_known=old.inputs is not None,
        conditions_added=tuple(name for name in now if name not in then),
        conditions_removed=tuple(name for name in then if name not in now),
        parts_added=tuple(name for name in parts_now if name not in parts_then),
        parts_removed=tuple(name for name in parts_then if name not in parts_now),
        limits=tuple(sorted(changes, key=_order)),
        inputs=() if old.inputs is None else _input_changes(old.inputs, report.inputs),
    )


def _names(names: Iterable[str]) -> dict[str, None]:
    return dict.fromkeys(sorted(names))


def _order(change: LimitChange) -> float:
    return float("inf") if change.change_k is None else change.change_k


def _limit_changes(
    now: ConditionFinding, then: EarlierCondition, allow_loss_k: float
) -> Iterable[LimitChange]:
    new, old = _limits(now), _limits(then)
    for key in dict.fromkeys([*new, *old]):
        a, b = old.get(key, _Held()), new.get(key, _Held())
        change = None if a.margin_k is None or b.margin_k is None else b.margin_k - a.margin_k
        yield LimitChange(
            condition=now.name,
            name=key[0],
            limit_kind=key[1],
            limit_side=key[2],
            old_temperature_c=a.temperature_c,
            new_temperature_c=b.temperature_c,
            old_limit_c=a.limit_c,
            new_limit_c=b.limit_c,
            old_margin_k=a.margin_k,
            new_margin_k=b.margin_k,
            change_k=change,
            lost=change is not None and change < -(allow_loss_k + _ROUNDING_K),
        )


def _limits(condition: ConditionFinding | EarlierCondition) -> dict[_Key, _Held]:
    found: dict[_Key, _Held] = {}
    for part in condition.parts:
        key = (part.name, part.limit_kind, part.limit_side)
        found[key] = _Held(part.temperature_c, part.limit_c, part.margin_k)
    for wall in condition.walls:
        if wall.touch_margin_k is not None:
            held = _Held(wall.outside_max_c, wall.touch_max_c, wall.touch_margin_k)
            found[wall.name, "touch", "max"] = held
    return found


def _input_changes(then: Mapping[str, Value], now: Mapping[str, Value]) -> tuple[InputChange, ...]:
    changes = []
    for path in dict.fromkeys([*now, *then]):
        if path not in then:
            changes.append(InputChange(path, "added", None, now[path]))
        elif path not in now:
            changes.append(InputChange(path, "removed", then[path], None))
        elif not _same(then[path], now[path]):
            changes.append(InputChange(path, "changed", then[path], now[path]))
    return tuple(changes)


def _same(a: Value, b: Value) -> bool:
    return type(a) is type(b) and a == b
