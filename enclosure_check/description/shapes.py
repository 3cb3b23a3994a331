"""What the models allow at each place of a document, read off their annotations."""

import types
from collections.abc import Iterator, Mapping
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from enclosure_check.description.document import Document
from enclosure_check.description.problems import Path
from enclosure_check.records import dataclass, field


@dataclass(frozen=True)
class Shape:
    """What may stand at one place of the document."""

    core: Any
    args: tuple[Any, ...] = ()
    bounds: Mapping[str, float] = field(default_factory=dict)
    unit: str = ""

    @property
    def is_model(self) -> bool:
        """Whether a model of the document stands here."""
        return isinstance(self.core, type) and issubclass(self.core, BaseModel)

    @property
    def key(self) -> "Shape":
        """Shape of a mapping's keys."""
        return _shape(self.args[0])

    @property
    def item(self) -> "Shape":
        """Shape of a mapping's values or a list's items."""
        return _shape(self.args[-1], unit=self.unit)

    def words(self) -> tuple[Any, ...]:
        """Give the listed values allowed."""
        return self.args if self.core is Literal else ()

    def step(self, step: str | int) -> "Shape | None":
        """Give the shape one step further in, None when there is none."""
        if self.is_model:
            info = self.core.model_fields.get(str(step))
            return None if info is None else field_shape(info)
        if self.core is dict or (self.core is list and isinstance(step, int)):
            return self.item
        return None


def _shape(annotation: Any, metadata: tuple[Any, ...] = (), unit: str = "") -> Shape:
    """Give the shape an annotation describes; ``None`` as an alternative is left out."""
    while True:
        origin = get_origin(annotation)
        if origin is Annotated:
            annotation, *more = get_args(annotation)
            metadata = (*metadata, *more)
        elif origin is Union or origin is types.UnionType:
            others = [arg for arg in get_args(annotation) if arg is not type(None)]
            if len(others) != 1:
                return Shape(Any)
            annotation = others[0]
        else:
            break
    bounds = dict(_bounds(metadata))
    if origin is None:
        return Shape(annotation, (), bounds, unit)
    return Shape(origin, get_args(annotation), bounds, unit)


def _bounds(metadata: tuple[Any, ...]) -> Iterator[tuple[str, float]]:
    for entry in metadata:
        if isinstance(entry, FieldInfo):
            yield from _bounds(tuple(entry.metadata))
            continue
        for name in ("gt", "ge", "lt", "le", "min_length", "max_length"):
            value = getattr(entry, name, None)
            if value is not None:
                yield name, value


def field_shape(info: FieldInfo) -> Shape:
    """Give the shape of a model's field; the unit is what its description ends with."""
    description = (info.description or "").rstrip()
    unit = description.rpartition("[")[2][:-1] if description.endswith("]") else ""
    return _shape(info.annotation, tuple(info.metadata), unit)


def shape_at(path: Path) -> Shape | None:
    """Give the shape at a path of the document, None where the models have none."""
    shape: Shape | None = Shape(Document)
    for step in path:
        if shape is None:
            return None
        shape = shape.step(step)
    return shape


def allowed(shape: Shape) -> str:
    """Say what a shape allows."""
    if shape.words():
        return listed(shape.words())
    if shape.core is bool:
        return "true or false"
    if shape.core in (float, int):
        noun = "a number" if shape.core is float else "a whole number"
        return f"{noun}{_range(shape)}"
    if shape.core is str:
        return f"text{_lengths(shape, 'characters')}"
    if shape.core is list:
        return f"a list{_lengths(shape, 'items')}, each {allowed(shape.item)}"
    if shape.core is dict:
        keys = shape.key.words()
        if keys:
            return f"a mapping with keys out of {listed(keys)}"
        return f"a mapping by name{_lengths(shape, 'entries')}"
    if shape.is_model:
        return f"a mapping with keys out of {listed(tuple(shape.core.model_fields))}"
    return "another value"


def _range(shape: Shape) -> str:
    bounds = shape.bounds
    unit = f" {shape.unit}" if shape.unit else ""
    low = ""
    if "ge" in bounds:
        low = f" from {bounds['ge']:.15g}"
    elif "gt" in bounds:
        low = f" greater than {bounds['gt']:.15g}"
    if "le" in bounds:
        join = " to" if "ge" in bounds else ", up to" if "gt" in bounds else " up to"
        return f"{low}{join} {bounds['le']:.15g}{unit}"
    if "lt" in bounds:
        join = " to" if "ge" in bounds else "," if "gt" in bounds else ""
        return f"{low}{join} below {bounds['lt']:.15g}{unit}"
    return f"{low}{unit}"


def _lengths(shape: Shape, noun: str) -> str:
    least, most = shape.bounds.get("min_length"), shape.bounds.get("max_length")
    if least is None and most is None:
        return ""
    if least == most:
        return f" of {most} {noun}"
    if most is None:
        return f" of at least {least} {noun}"
    return f" of {least or 0} to {most} {noun}"


def listed(words: tuple[Any, ...]) -> str:
    """Give words as ``a, b or c``."""
    *first, last = map(str, words)
    return f"{', '.join(first)} or {last}" if first else last
