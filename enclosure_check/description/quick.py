"""Accept documents that are plainly valid, without the models and the library they need.

To load that library and build the models takes as long as half of a check. What the models allow
is therefore also written down as plain data, in `quick_models.py`, by a program that reads the
models. Here a document is compared with that. Nothing is refused here: whenever there is doubt
the models themselves decide, and word what is wrong.
"""

from collections.abc import Callable
from math import inf
from typing import TYPE_CHECKING, Any, NoReturn, TypeVar, cast

from enclosure_check.description.problems import Path
from enclosure_check.description.quick_models import MODELS
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
    is_null,
    to_data,
)

if TYPE_CHECKING:
    from enclosure_check.description.box import Mounting
    from enclosure_check.description.document import Document
    from enclosure_check.description.part import Part
    from enclosure_check.description.part_list import PartList

_Record = TypeVar("_Record", "Document", "Part")

# Parts of a document found valid, by model and identity of the node, which is kept beside them:
# the documents under two conditions share what neither patch changes.
Known = dict[tuple[str, int], tuple[Node, "Plain"]]
# What stands at a place, as `quick_models.py` words it: its kind first, then what that needs.
Kind = tuple[Any, ...]


class Plain:
    """A part of a document: what a model's instance holds, under the same names.

    ``model_fields_set`` names what the document gave, as with the models.
    """

    model_fields_set: frozenset[str]

    def __init__(self, values: dict[str, Any], given: frozenset[str]) -> None:
        self.__dict__.update(values, model_fields_set=given)

    def __setattr__(self, name: str, value: Any) -> NoReturn:
        raise AttributeError(f"cannot set {name!r}: a document is never changed")


class _DoubtError(Exception):
    """What was looked at is not plainly valid."""


def validated(node: MappingNode, file: str, known: Known | None = None) -> "Document":
    """Give the validated document.

    Parameters
    ----------
    node
        The document, every patch applied.
    file
        The file's name, for the messages.
    known
        What is already known of its parts; more is added.

    Raises
    ------
    DocumentError
        With every error at once, each at its place in the file.
    """
    document = plainly_valid(node, known)
    if document is not None:
        return document
    from enclosure_check.description.validate import validate

    return validate(node, file)


def plainly_valid(node: MappingNode, known: Known | None = None) -> "Document | None":
    """Give the document if it is valid without any doubt, else None."""
    try:
        return cast("Document", _model(("model", "Document"), node, {} if known is None else known))
    except _DoubtError:
        return None


def valid_list(node: Node) -> "PartList | None":
    """Give the description of a part list, None when it is not valid."""
    try:
        return cast("PartList", _model(("model", "PartList"), node, {}))
    except _DoubtError:
        from pydantic import ValidationError

        from enclosure_check.description.part_list import PartList

    try:
        return PartList.model_validate(to_data(node))
    except ValidationError:
        return None


def changed(record: _Record, **values: Any) -> _Record:
    """Give a part of a validated document with some values changed to others as valid."""
    if not isinstance(record, Plain):
        return record.model_copy(update=values)
    held = dict(vars(record))
    given = held.pop("model_fields_set")
    return cast(_Record, Plain({**held, **values}, given))


def mounting_by_default() -> "Mounting":
    """Give the mounting of a wall that the document says nothing of."""
    return cast("Mounting", _blank("Mounting"))


def is_mapping_by_name(path: Path) -> bool:
    """Tell whether a mapping whose keys are names of the user's stands at a path."""
    kind: Kind | None = ("model", "Document")
    for step in path:
        if kind is None:
            return False
        kind = _step(kind, step)
    return kind is not None and kind[0] == "mapping" and kind[1][0] != "words"


def _step(kind: Kind, step: str | int) -> Kind | None:
    """Give the kind one step further in, None when there is none."""
    if kind[0] == "model":
        row = MODELS[kind[1]].get(str(step))
        return None if row is None else row[0]
    if kind[0] == "mapping":
        return cast(Kind, kind[2])
    return cast(Kind, kind[1]) if kind[0] == "list" and isinstance(step, int) else None


# One function per kind ----------------------------------------------------------------------


def _model(kind: Kind, node: Node, known: Known) -> Plain:
    """Take ``("model", NAME)``."""
    identity = (kind[1], id(node))
    if identity in known:
        return known[identity][1]
    rows = MODELS[kind[1]]
    if not isinstance(node, MappingNode) or not rows.keys() >= node.removed.keys():
        raise _DoubtError
    values: dict[str, Any] = {}
    for key, value in node.entries.items():
        row = rows.get(key)
        if row is None:
            raise _DoubtError
        if not is_null(value):
            inner = row[0]
            values[key] = _TAKE[inner[0]](inner, value, known)
    given = frozenset(values)
    for key, row in rows.items():
        if key not in values:
            values[key] = _default(row)
    plain = Plain(values, given)
    known[identity] = (node, plain)
    return plain


def _default(row: tuple[Any, ...]) -> Any:
    if len(row) == 1:
        raise _DoubtError
    default = row[1]
    if default == {}:  # of a mapping or a model: a new one every time
        kind = row[0]
        return _blank(kind[1]) if kind[0] == "model" else {}
    return default


def _blank(name: str) -> Plain:
    values = {key: _default(row) for key, row in MODELS[name].items()}
    return Plain(values, frozenset())


def _mapping(kind: Kind, node: Node, known: Known) -> dict[str, Any]:
    """Take ``("mapping", KEY, VALUE, LEAST, MOST)``."""
    if not isinstance(node, MappingNode):
        raise _DoubtError
    _, key_kind, inner, least, most = kind
    take, of_key = _TAKE[inner[0]], _CHECK_KEY[key_kind[0]]
    values: dict[str, Any] = {}
    for key, value in node.entries.items():
        of_key(key_kind, key)
        if not is_null(value):
            values[key] = take(inner, value, known)
    for key in node.removed:
        of_key(key_kind, key)
    if not least <= len(values) <= most:
        raise _DoubtError
    return values


def _list(kind: Kind, node: Node, known: Known) -> list[Any]:
    """Take ``("list", ITEM, LEAST, MOST)``."""
    _, inner, least, most = kind
    if not isinstance(node, SequenceNode) or not least <= len(node.items) <= most:
        raise _DoubtError
    take = _TAKE[inner[0]]
    return [take(inner, item, known) for item in node.items]


def _number(kind: Kind, node: Node, _: Known) -> float:
    """Take ``("float", LOW, WHETHER LOW ITSELF, HIGH, WHETHER HIGH ITSELF)``."""
    value = node.value if isinstance(node, ScalarNode) else None
    if type(value) is not float and type(value) is not int:
        raise _DoubtError
    _bounded(kind, value)
    return float(value)


def _whole(kind: Kind, node: Node, _: Known) -> int:
    """Take ``("int", ...)``, bounds as of a float."""
    value = node.value if isinstance(node, ScalarNode) else None
    if type(value) is not int:
        raise _DoubtError
    _bounded(kind, value)
    return value


def _bounded(kind: Kind, value: float) -> None:
    _, low, low_itself, high, high_itself = kind
    # Written so that what is not a number lies outside.
    above = low <= value if low_itself else low < value
    below = value <= high if high_itself else value < high
    if not (above and below and -inf < value < inf):
        raise _DoubtError


def _text(kind: Kind, node: Node, _: Known) -> str:
    """Take ``("text", LEAST, MOST)``."""
    value = node.value if isinstance(node, ScalarNode) else None
    if not isinstance(value, str):
        raise _DoubtError
    _length(kind, value)
    return value


def _length(kind: Kind, value: str) -> None:
    if not kind[1] <= len(value) <= kind[2]:
        raise _DoubtError


def _word(kind: Kind, node: Node, _: Known) -> str | int:
    """Take ``("words", ALLOWED)``: texts or whole numbers."""
    value = node.value if isinstance(node, ScalarNode) else None
    if type(value) is not str and type(value) is not int:
        raise _DoubtError
    _listed(kind, value)
    return value


def _listed(kind: Kind, value: str | int) -> None:
    if value not in kind[1]:
        raise _DoubtError


def _truth(_: Kind, node: Node, __: Known) -> bool:
    """Take ``("bool",)``."""
    value = node.value if isinstance(node, ScalarNode) else None
    if not isinstance(value, bool):
        raise _DoubtError
    return value


def _anything(_: Kind, node: Node, __: Known) -> Any:
    """Take ``("any",)``."""
    return to_data(node)


_TAKE: dict[str, Callable[[Kind, Any, Known], Any]] = {
    "model": _model,
    "mapping": _mapping,
    "list": _list,
    "float": _number,
    "int": _whole,
    "text": _text,
    "words": _word,
    "bool": _truth,
    "any": _anything,
}
_CHECK_KEY: dict[str, Callable[[Kind, Any], None]] = {"text": _length, "words": _listed}
