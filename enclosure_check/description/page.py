"""The page of the documentation that lists every key of a document."""

import sys
from collections.abc import Iterator
from typing import Any

from pydantic.fields import FieldInfo
from pydantic_core import PydanticUndefined

from enclosure_check.description.base import Strict
from enclosure_check.description.document import Document
from enclosure_check.description.page_text import (
    CHANGES,
    INTRODUCTION,
    TOGETHER,
    YAML_EXAMPLES,
    YAML_RULES,
)
from enclosure_check.description.shapes import Shape, allowed, field_shape
from enclosure_check.description.yaml_nodes import plain_value

#: Endings of keys, the unit each stands for, and what it is said to be.
UNITS = (
    ("_mm", "mm", "length"),
    ("_um", "um", "thickness of copper"),
    ("_mm2", "mm2", "section of a conductor"),
    ("_mm2k_per_w", "mm2K/W", "thermal resistance times area"),
    ("_m", "m", "altitude"),
    ("_c", "C", "temperature, degrees Celsius"),
    ("_k", "K", "temperature difference"),
    ("_w", "W", "power"),
    ("_a", "A", "current"),
    ("_pa", "Pa", "difference of pressure"),
    ("_m_per_s", "m/s", "velocity"),
    ("_w_per_m2", "W/m2", "irradiance"),
    ("_w_per_m2k", "W/m2K", "contact conductance per area"),
    ("_w_per_mk", "W/mK", "thermal conductivity; conductance per metre of an edge"),
    ("_k_per_w", "K/W", "thermal resistance"),
    ("_pct", "%", "percentage"),
    ("_pct_per_k", "%/K", "change per kelvin"),
    ("_deg", "deg", "angle"),
    ("_kg_per_m3", "kg/m3", "density"),
    ("_j_per_kgk", "J/kgK", "specific heat capacity"),
)

# What a value read from YAML is called.
_KINDS = {str: "text", int: "a number", float: "a number", bool: "true or false"}


def document_page() -> str:
    """Write the page about the document.

    Returns
    -------
    str
        Markdown: the rules, then one table of keys per model, ending in a line feed.
    """
    # A model that stands in several places is described at the first.
    titles: dict[type[Strict], str] = {}
    for model, path in _models(Shape(Document), ""):
        titles.setdefault(model, path)
    keys = "\n".join(_section(model, path, titles) for model, path in titles.items())
    return (
        f"{INTRODUCTION}\n{_units()}\n{YAML_RULES}\n{_yaml_values()}\n{CHANGES}\n"
        f"## Keys\n\n{keys}\n{TOGETHER}"
    )


def _models(shape: Shape, path: str) -> Iterator[tuple[type[Strict], str]]:
    """Give every model in or under a shape, outside in, with its path in the document."""
    if shape.is_model:
        yield shape.core, path
        for name, info in shape.core.model_fields.items():
            if not any(name in base.model_fields for base in _bases(shape.core)):
                yield from _models(field_shape(info), f"{path}.{name}".lstrip("."))
    elif shape.core in (dict, list):
        yield from _models(shape.item, f"{path}.{_NAMES.get(path, 'NAME')}")


# What stands for one name in the path of a mapping by name.
_NAMES = {"walls": "WALL", "measured.NAME.walls": "WALL", "part_types.NAME.limits": "POINT"}


def _bases(model: type[Strict]) -> list[type[Strict]]:
    return [each for each in model.__bases__ if issubclass(each, Strict) and each.model_fields]


def _title(path: str) -> str:
    return f"`{path}`" if path else "The document"


def _link(path: str) -> str:
    """Link to a section, by the anchor its title gets."""
    kept = "".join(char for char in _title(path).lower() if char.isalnum() or char in "_ ")
    return f"[{_title(path)}](#{kept.replace(' ', '-')})"


def _section(model: type[Strict], path: str, titles: dict[type[Strict], str]) -> str:
    """Write one model: what it is, its keys, the keys it shares and those not computed yet."""
    own = [
        (name, info)
        for name, info in model.model_fields.items()
        if not any(name in base.model_fields for base in _bases(model))
    ]
    lines = [f"### {_title(path)}", "", _about(model), ""]
    for base in _bases(model):
        lines += [f"Takes every key of {_link(titles[base])} too, and these:", ""]
    head = ("key", "meaning", "what may stand there", "default")
    rows = [
        (f"`{name}`", _meaning(info), _allowed(field_shape(info), titles), _default(info))
        for name, info in own
    ]
    lines += [_table([head, *rows]), ""]
    not_yet = {
        key: text for key, text in vars(model).get("NOT_YET", {}).items() if key not in dict(own)
    }
    if not_yet:
        lines += ["Known, but not computed yet:", ""]
        lines += [f"- `{key}`: {text}" for key, text in not_yet.items()] + [""]
    return "\n".join(lines)


def _about(model: type[Strict]) -> str:
    """Give a model's own description, its literals set as code."""
    return " ".join((model.__doc__ or "").replace("``", "`").split())


def _meaning(info: FieldInfo) -> str:
    """Give a key's description without its unit, which stands with the numbers allowed."""
    description = info.description or ""
    text = description.partition("[")[0] if description.endswith("]") else description
    return text.rstrip()


def _allowed(shape: Shape, titles: dict[type[Strict], str]) -> str:
    """Say what may stand at a place of the document."""
    if shape.is_model:
        return f"see {_link(titles[shape.core])}"
    if shape.core is dict and shape.item.core is Any:
        return "a patch, see [options and conditions](#options-and-conditions)"
    if shape.core is dict:
        keys = shape.key.words()
        names = f"any of {', '.join(map(str, keys))}" if keys else "a name"
        return f"mapping from {names} to: {_allowed(shape.item, titles)}"
    return allowed(shape)


def _default(info: FieldInfo) -> str:
    """Give a key's default as it would be written."""
    if info.is_required():
        return "**required**"
    if info.default is PydanticUndefined or info.default is None:
        return ""
    return f"`{info.default:g}`" if isinstance(info.default, float) else f"`{info.default}`"


def _units() -> str:
    rows = [(f"`{ending}`", unit, what) for ending, unit, what in UNITS]
    return _table([("key ends in", "unit", "quantity"), *rows]) + "\n"


def _yaml_values() -> str:
    rows = [(f"`{text}`", _read_as(text), why) for text, why in YAML_EXAMPLES]
    return _table([("written", "read as", ""), *rows]) + "\n"


def _read_as(written: str) -> str:
    """Say what the reader makes of a scalar; a quoted one is always text."""
    if written[:1] in ("'", '"'):
        return f"text `{written[1:-1]}`"
    value = plain_value(written)
    if value is None:
        return "nothing (null)"
    return f"{_KINDS[type(value)]} `{written if isinstance(value, str | bool) else value}`"


def _table(rows: list[tuple[str, ...]]) -> str:
    lines = [rows[0], ("---",) * len(rows[0]), *rows[1:]]
    return "\n".join(f"| {' | '.join(cells)} |" for cells in lines)


if __name__ == "__main__":
    sys.stdout.write(document_page())
