"""Check a document's nodes against the models and word every error at its place in the file."""

from collections.abc import Iterator
from itertools import islice
from typing import Any

from pydantic import BaseModel, ValidationError

from enclosure_check.description.document import Document
from enclosure_check.description.merge import null_paths
from enclosure_check.description.problems import (
    DocumentError,
    Path,
    Problem,
    dotted,
    nearest,
    nearest_name,
    quoted,
)
from enclosure_check.description.shapes import Shape, allowed, field_shape, listed, shape_at
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
    locate,
    plain_value,
    to_data,
)

MAX_PROBLEMS = 500

# How pydantic marks, in the place of an error, that a key of a mapping is meant.
_KEY_TAG = "[key]"
# Errors for which "given ..., allowed: ..." says everything.
_SELF_EXPLAINING = (
    "_type",
    "literal_error",
    "greater_than",
    "greater_than_equal",
    "less_than",
    "less_than_equal",
    "finite_number",
    "too_short",
    "too_long",
)
# What people end the name of a quantity with, longest first.
_UNIT_ENDINGS = (
    *("k_m2_per_w", "w_per_m2_k", "w_per_m2k", "w_per_m_k", "mm2k_per_w", "w_per_mk", "w_per_m2"),
    *("k_per_w", "c_per_w", "w_per_k", "m_per_s", "deg_c", "deg_f", "percent", "pct"),
    *("kelvin", "degrees", "deg", "rad", "watts", "watt", "inches", "inch", "mils", "mil"),
    *("kpa", "mbar", "bar", "hpa", "pa", "mw", "kw", "uw", "um", "nm", "mm", "cm", "dm", "km"),
    *("in", "ft", "oz", "w", "c", "f", "k", "m"),
)


def validate(node: MappingNode, file: str) -> Document:
    """Give the validated document.

    Parameters
    ----------
    node
        The document, every patch applied.
    file
        The file's name, for the messages.

    Raises
    ------
    DocumentError
        With every error at once, each at its place in the file.
    """
    nulls = list(null_paths(node))
    problems = list(islice(_unknown_nulls(nulls, node, file), MAX_PROBLEMS)) if nulls else []
    try:
        document = Document.model_validate(to_data(node))
    except ValidationError as error:
        problems += _translate(error, node, file)
    else:
        if not problems:
            return document
    raise DocumentError(problems)


# Keys without a value ---------------------------------------------------------------------


def _unknown_nulls(paths: list[Path], node: MappingNode, file: str) -> Iterator[Problem]:
    """Refuse null for a key that does not exist: most likely it is misspelt."""
    for path in paths:
        parent = shape_at(path[:-1])
        key = str(path[-1])
        if parent is None:
            continue
        if parent.is_model and key not in parent.core.model_fields:
            message = _unknown_key(parent.core, key)
        elif parent.core is dict and parent.key.words() and key not in parent.key.words():
            message = _unknown_word(parent.key, key)
        else:
            continue
        yield Problem(file, *locate(node, path, at_key=True), dotted(path), message)


# From pydantic's errors to problems -------------------------------------------------------


def _translate(error: ValidationError, node: MappingNode, file: str) -> list[Problem]:
    errors = error.errors(include_url=False, include_context=False, include_input=False)
    problems = [
        _problem(entry["type"], tuple(entry["loc"]), entry["msg"], node, file)
        for entry in errors[:MAX_PROBLEMS]
    ]
    if len(errors) > MAX_PROBLEMS:
        last = problems[-1]
        more = f"and {len(errors) - MAX_PROBLEMS} more problems not shown"
        problems.append(Problem(file, last.line, last.column, "", more))
    return problems


def _problem(kind: str, loc: Path, text: str, node: MappingNode, file: str) -> Problem:
    path, parent, shape, here, is_key = _walk(loc, node, kind)
    key = str(path[-1]) if path else ""
    at_key = True
    if is_key and shape is not None:
        message = (
            _unknown_word(shape, key)
            if shape.words()
            else f"given {quoted(key)} as a name, allowed: {allowed(shape)}"
        )
    elif kind == "extra_forbidden":
        message = (
            _unknown_key(parent.core, key)
            if parent is not None and parent.is_model
            else f"unknown key {quoted(key)}"
        )
    elif kind == "missing":
        needs = f"; needs {allowed(shape)}" if shape is not None else ""
        message = f"missing{needs}"
    else:
        at_key = False
        message = f"given {_given(here, shape)}"
        if shape is not None and shape.core is not Any:
            message += f", allowed: {allowed(shape)}"
            if shape.words() and isinstance(here, ScalarNode):
                message += nearest(here.text, map(str, shape.words()))
        if shape is None or not kind.endswith(_SELF_EXPLAINING):
            message += f" ({text})"
    return Problem(file, *locate(node, path, at_key=at_key), dotted(path), message)


def _walk(
    loc: Path, node: MappingNode, kind: str
) -> tuple[Path, Shape | None, Shape | None, Node | None, bool]:
    """Follow the place of an error through the models and the nodes.

    Returns
    -------
    tuple
        Its path in the document, the shape it lies in, its own shape, its node if there is one,
        and whether the key itself is meant. Steps that are neither a key nor an index of the
        document (pydantic's tags) are left out.
    """
    path: Path = ()
    parent: Shape | None = None
    shape: Shape | None = Shape(Document)
    here: Node | None = node
    for index, step in enumerate(loc):
        is_last = index == len(loc) - 1
        child = _child(here, step)
        inner = shape.step(step) if shape is not None else None
        if step == _KEY_TAG and is_last and kind != "extra_forbidden" and path and child is None:
            key_shape = parent.key if parent is not None and parent.core is dict else None
            return path, parent, key_shape, here, key_shape is not None
        if child is None and not (inner is not None and shape is not None and shape.is_model):
            continue
        path, parent, shape, here = (*path, step), shape, inner, child
    return path, parent, shape, here, False


def _child(node: Node | None, step: str | int) -> Node | None:
    if isinstance(node, MappingNode):
        return node.entries.get(str(step))
    if isinstance(node, SequenceNode) and isinstance(step, int) and step < len(node.items):
        return node.items[step]
    return None


def _given(node: Node | None, shape: Shape | None) -> str:
    """Say what was given, and of what kind it is where that is the point."""
    if isinstance(node, MappingNode):
        return "a mapping"
    if isinstance(node, SequenceNode):
        return f"a list of {len(node.items)}"
    if node is None or node.value is None:
        return "nothing"
    if isinstance(node.value, str):
        if isinstance(plain_value(node.text), int | float):
            return f"{quoted(node.text)} (text, because it is quoted)"
        return f"{quoted(node.text)} (text)"
    text = node.text if len(node.text) <= 40 else f"{node.text[:40]}..."
    if isinstance(node.value, bool):
        return f"{text} (true or false)"
    if node.value in (float("inf"), float("-inf")) or node.value != node.value:
        return f"{text} (not a finite number)"
    return text if shape is not None and shape.core in (float, int) else f"{text} (a number)"


def _unknown_word(shape: Shape, word: str) -> str:
    words = tuple(map(str, shape.words()))
    return f"unknown key {quoted(word)}, allowed: {listed(words)}{nearest(word, words)}"


def _unknown_key(model: type[BaseModel], key: str) -> str:
    """Say that a model has no such key, and which is meant."""
    not_yet: dict[str, str] = getattr(model, "NOT_YET", {})
    if key in not_yet:
        return not_yet[key]
    fields = model.model_fields
    by_unit = _other_unit(key, tuple(fields))
    if by_unit is not None:
        unit = field_shape(fields[by_unit]).unit
        in_unit = f" in {unit}" if unit else ""
        return f"unknown key {quoted(key)}; did you mean {quoted(by_unit)}{in_unit}?"
    name = nearest_name(key, [*fields, *not_yet])
    if name is None:
        longer = tuple(quoted(field) for field in fields if field.startswith(f"{key}_"))
        if longer:
            return f"unknown key {quoted(key)}; did you mean {listed(longer)}?"
        return f"unknown key {quoted(key)}, allowed: {listed(tuple(fields))}"
    if name in not_yet:
        return f"unknown key {quoted(key)}; did you mean {quoted(name)}? But {not_yet[name]}"
    return f"unknown key {quoted(key)}; did you mean {quoted(name)}?"


def _other_unit(key: str, names: tuple[str, ...]) -> str | None:
    """Give the field that differs from a key by its unit only, or by the key having none."""
    stem = _stem(key)
    same = [name for name in names if _stem(name) == stem]
    return same[0] if len(same) == 1 else nearest_name(key, same)


def _stem(name: str) -> str:
    name = name.casefold()
    for ending in _UNIT_ENDINGS:
        if name.endswith(f"_{ending}"):
            return name[: -len(ending) - 1]
    return name
