"""What changed against an earlier result, as it is reported."""

from __future__ import annotations

from typing import Annotated, Literal

from enclosure_check.findings.about import about as _about
from enclosure_check.records import dataclass

Value = float | bool | str | None
State = Literal["changed", "added", "removed"]


@dataclass(frozen=True)
class LimitChange:
    """One limit then and now; what is missing on one side is null there."""

    condition: Annotated[str, _about("Name of the condition.")]
    name: Annotated[str, _about("Reference of the part, or name of the wall.")]
    limit_kind: Annotated[str, _about("The point the limit holds for: touch for walls.")]
    limit_side: Annotated[str, _about("max or min.")]
    old_temperature_c: Annotated[float | None, _about("Temperature then. [C]")]
    new_temperature_c: Annotated[float | None, _about("Temperature now. [C]")]
    old_limit_c: Annotated[float | None, _about("The limit then. [C]")]
    new_limit_c: Annotated[float | None, _about("The limit now. [C]")]
    old_margin_k: Annotated[float | None, _about("Margin then. [K]")]
    new_margin_k: Annotated[float | None, _about("Margin now. [K]")]
    change_k: Annotated[float | None, _about("Margin now less margin then. [K]")]
    lost: Annotated[bool, _about("Whether the margin fell by more than allowed.")]


@dataclass(frozen=True)
class InputChange:
    """One value of the document then and now."""

    path: Annotated[str, _about("Dotted path of the value.")]
    state: Annotated[State, _about("Whether it is on both sides or on one only.")]
    old: Annotated[Value, _about("The value then; null where it was not stated.")]
    new: Annotated[Value, _about("The value now; null where it is not stated.")]


@dataclass(frozen=True)
class Baseline:
    """A document against its earlier result."""

    file: Annotated[str, _about("Path of the earlier result, as given.")]
    allow_loss_k: Annotated[float, _about("What a margin may lose. [K]")]
    verdict: Annotated[
        Literal["pass", "fail"], _about("Whether no margin fell by more than allowed.")
    ]
    known: Annotated[
        bool, _about("Whether the earlier result holds this document; if not, all below is empty.")
    ]
    old_version: Annotated[str, _about("Version of the program then.")]
    old_option: Annotated[str | None, _about("Design option applied then.")]
    same_document: Annotated[bool, _about("Whether the document's bytes are the same.")]
    inputs_known: Annotated[
        bool, _about("Whether the earlier result lists what its document stated.")
    ]
    conditions_added: Annotated[tuple[str, ...], _about("Conditions only now.")]
    conditions_removed: Annotated[tuple[str, ...], _about("Conditions only then.")]
    parts_added: Annotated[tuple[str, ...], _about("Parts only now.")]
    parts_removed: Annotated[tuple[str, ...], _about("Parts only then.")]
    limits: Annotated[
        tuple[LimitChange, ...],
        _about("Every limit of the conditions on both sides, the largest loss first."),
    ]
    inputs: Annotated[tuple[InputChange, ...], _about("Every value that changed, by path.")]
