"""Write down what the models allow as plain data, for `quick.py`.

It is read off the schema that pydantic makes of the models, so that nothing the models ask for is
overlooked: what `quick.py` does not know ends here.
"""

import sys
from collections.abc import Callable, Iterator, Mapping
from math import inf
from types import FunctionType
from typing import Any

from enclosure_check.description.base import NotBoolean, Strict
from enclosure_check.description.document import Document

HEADER = '''\
"""What the models of the document allow, as plain data for `quick.py`.

By model and key: what may stand there, and its default where it has one.
Written by ``python -m enclosure_check.description.quick_page``; not to be changed by hand.
"""

# Written by a program, one key a line however long:
# fmt: off
# ruff: noqa: E501

from math import inf
from typing import Any, Final

MODELS: Final[dict[str, dict[str, tuple[Any, ...]]]] = {
'''

Schema = Mapping[str, Any]


def quick_models(model: type[Strict] = Document) -> str:
    """Write the module `quick_models.py`: a model and all it holds.

    Raises
    ------
    TypeError
        When the models ask for something that `quick.py` does not know.
    """
    models = dict(_models(model.__pydantic_core_schema__))
    lines = []
    for name in sorted(models):
        keys = (f"        {key!r}: {row!r},\n" for key, row in models[name].items())
        lines.append(f"    {name!r}: {{\n{''.join(keys)}    }},\n")
    return f"{HEADER}{''.join(lines)}}}\n"


def _models(schema: Any) -> Iterator[tuple[str, dict[str, tuple[Any, ...]]]]:
    """Give every model in or under a schema, with its keys."""
    if isinstance(schema, Mapping):
        if schema.get("type") == "model":
            yield schema["cls"].__name__, _keys(schema)
        for inner in schema.values():
            yield from _models(inner)
    elif isinstance(schema, list):
        for inner in schema:
            yield from _models(inner)


def _keys(model: Schema) -> dict[str, tuple[Any, ...]]:
    cls, fields = model["cls"], model["schema"]
    _know(model, "cls", "schema", "config", "ref", "custom_init", "root_model")
    if model["custom_init"] or model["root_model"] or cls.model_config != Strict.model_config:
        raise TypeError(f"{cls.__name__}: neither its own start nor its own settings are known")
    if fields["type"] != "model-fields" or fields.get("computed_fields"):
        raise TypeError(f"{cls.__name__}: validators and computed fields are not known")
    _know(fields, "fields", "model_name", "computed_fields")
    own = [
        name
        for name, value in vars(cls).items()
        if isinstance(value, property | FunctionType) and not name.startswith("__")
    ]
    if own:
        raise TypeError(f"{cls.__name__}: {', '.join(own)}: a plain one holds nothing but its keys")
    return {name: _key(field) for name, field in fields["fields"].items()}


def _key(field: Schema) -> tuple[Any, ...]:
    """Give the kind of a key, and its default where it has one."""
    _know(field, "schema")
    inner = field["schema"]
    if inner["type"] != "default":
        return (_kind(inner),)
    _know(inner, "schema", "default", "default_factory", "default_factory_takes_data")
    if "default" in inner:
        return (_kind(inner["schema"]), inner["default"])
    factory = inner["default_factory"]
    if factory is not dict and not issubclass(factory, Strict):
        raise TypeError(f"a default made by {factory} is not known")
    # Of a mapping as of a model: what comes of nothing given.
    return (_kind(inner["schema"]), {})


def _kind(schema: Schema) -> tuple[Any, ...]:
    try:
        kind = _KINDS[schema["type"]]
    except KeyError:
        raise TypeError(f"a schema of type {schema['type']!r} is not known") from None
    return kind(schema)


def _model(schema: Schema) -> tuple[Any, ...]:
    return ("model", schema["cls"].__name__)


def _nullable(schema: Schema) -> tuple[Any, ...]:
    # Null takes a key back to its default and never reaches the models.
    _know(schema, "schema")
    return _kind(schema["schema"])


def _before(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "schema", "function")
    inner = _kind(schema["schema"])
    if schema["function"] != {"type": "no-info", "function": NotBoolean.func}:
        raise TypeError(f"the validator {schema['function']} is not known")
    if inner[0] != "words":
        raise TypeError(f"no truth value is no part of {inner}")
    return inner  # whose words are texts and whole numbers, never truth values


def _mapping(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "keys_schema", "values_schema", "min_length", "max_length")
    key = _kind(schema["keys_schema"])
    if key[0] not in ("text", "words"):
        raise TypeError(f"a key of a mapping that is {key} is not known")
    return ("mapping", key, _kind(schema["values_schema"]), *_lengths(schema))


def _list(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "items_schema", "min_length", "max_length")
    return ("list", _kind(schema["items_schema"]), *_lengths(schema))


def _text(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "min_length", "max_length")
    return ("text", *_lengths(schema))


def _words(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "expected")
    if any(type(word) is not str and type(word) is not int for word in schema["expected"]):
        raise TypeError(f"other than texts and whole numbers: {schema['expected']}")
    return ("words", tuple(schema["expected"]))


def _number(schema: Schema) -> tuple[Any, ...]:
    _know(schema, "gt", "ge", "lt", "le")
    if {"gt", "ge"} <= schema.keys() or {"lt", "le"} <= schema.keys():
        raise TypeError("two bounds on one side are not known")
    low = schema.get("ge", schema.get("gt", -inf))
    high = schema.get("le", schema.get("lt", inf))
    return (schema["type"], low, "gt" not in schema, high, "lt" not in schema)


def _plain(schema: Schema) -> tuple[Any, ...]:
    _know(schema)
    return (schema["type"],)


def _lengths(schema: Schema) -> tuple[float, float]:
    return schema.get("min_length", 0), schema.get("max_length", inf)


_KINDS: dict[str, Callable[[Schema], tuple[Any, ...]]] = {
    "model": _model,
    "nullable": _nullable,
    "function-before": _before,
    "dict": _mapping,
    "list": _list,
    "str": _text,
    "literal": _words,
    "float": _number,
    "int": _number,
    "bool": _plain,
    "any": _plain,
}


def _know(schema: Schema, *keys: str) -> None:
    unknown = schema.keys() - {"type", "metadata", *keys}
    if unknown:
        raise TypeError(f"{', '.join(sorted(unknown))} of a {schema['type']} are not known")


if __name__ == "__main__":
    sys.stdout.write(quick_models())
