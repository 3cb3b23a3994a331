"""Our data classes do what those of the standard library do."""

import ast
import copy
import dataclasses
import pickle
from functools import cached_property
from pathlib import Path
from typing import Any, ClassVar

import pytest

from enclosure_check import records

PACKAGE = Path(records.__file__).parent
BOTH = pytest.mark.parametrize("make", [records.dataclass, dataclasses.dataclass])


def classes(make: Any) -> dict[str, Any]:
    """Give classes of every kind in use, made by one of the two."""

    @make(frozen=True, order=True)
    class Point:
        """A point."""

        x: float
        y: float = 2.0
        KIND: ClassVar[str] = "plane"

    @make(frozen=True)
    class Named(Point):
        """A point with more."""

        tags: tuple[str, ...] = ()
        note: str = dataclasses.field(default="", repr=False, compare=False)

        @cached_property
        def long(self) -> str:
            """Give a value that is kept."""
            return f"{self.x} {self.y}"

    @make(frozen=True, eq=False)
    class Single:
        """Equal to itself only."""

        values: list[float] = dataclasses.field(default_factory=list)

    @make
    class Open:
        """Can be changed."""

        count: int = 0

        def __post_init__(self) -> None:
            self.count += 1

    return {"Point": Point, "Named": Named, "Single": Single, "Open": Open}


@BOTH
def test_arguments_and_defaults(make):
    kinds = classes(make)
    point = kinds["Point"](1.0)
    assert (point.x, point.y, point.KIND) == (1.0, 2.0, "plane")
    named = kinds["Named"](tags=("a",), y=5.0, x=4.0)
    assert (named.x, named.y, named.tags, named.note) == (4.0, 5.0, ("a",), "")
    assert kinds["Open"](3).count == 4
    assert kinds["Single"]().values is not kinds["Single"]().values


@BOTH
@pytest.mark.parametrize(
    ("args", "named"),
    [
        ((), {}),
        ((1.0, 2.0, 3.0), {}),
        ((1.0,), {"x": 1.0}),
        ((1.0,), {"z": 1.0}),
        ((1.0, 2.0), {"z": 1.0}),
        ((), {"y": 1.0}),
        ((1.0,), {"KIND": "other"}),
    ],
)
def test_wrong_arguments_are_refused(make, args, named):
    with pytest.raises(TypeError):
        classes(make)["Point"](*args, **named)


@BOTH
def test_a_wrong_argument_is_named(make):
    point = classes(make)["Point"]
    with pytest.raises(TypeError, match="got an unexpected keyword argument 'z'"):
        point(1.0, z=1.0)
    with pytest.raises(TypeError, match="missing 1 required positional argument: 'x'"):
        point(y=1.0)


@BOTH
def test_a_frozen_one_cannot_be_changed(make):
    point = classes(make)["Point"](1.0)
    with pytest.raises(dataclasses.FrozenInstanceError, match="cannot assign to field 'x'"):
        point.x = 2.0
    with pytest.raises(dataclasses.FrozenInstanceError, match="cannot delete field 'y'"):
        del point.y
    kept = classes(make)["Named"](1.0)
    assert kept.long is kept.long
    opened = classes(make)["Open"]()
    opened.count = 7
    assert opened.count == 7


@BOTH
def test_equality_order_and_hash(make):
    kinds = classes(make)
    point, named, single = kinds["Point"], kinds["Named"], kinds["Single"]
    assert point(1.0, 2.0) == point(y=2.0, x=1.0)
    assert hash(point(1.0, 2.0)) == hash(point(y=2.0, x=1.0))
    assert point(1.0) != point(1.5)
    assert point(1.0) != named(1.0)
    assert point(1.0) != (1.0, 2.0)
    assert named(1.0, note="a") == named(1.0, note="b")
    assert sorted([point(2.0, 1.0), point(1.0, 3.0), point(1.0, 2.0)]) == [
        point(1.0, 2.0),
        point(1.0, 3.0),
        point(2.0, 1.0),
    ]
    assert point(1.0) <= point(1.0)
    assert point(1.0) >= point(1.0)
    assert point(2.0) > point(1.0)
    with pytest.raises(TypeError):
        point(1.0) < 3.0  # noqa: B015
    alone = single()
    assert alone == alone
    assert alone != single()
    assert len({alone, single()}) == 2
    with pytest.raises(TypeError, match="unhashable"):
        hash(kinds["Open"]())


@BOTH
def test_the_tools_of_the_standard_library_work(make):
    kinds = classes(make)
    named = kinds["Named"](1.0, tags=("a",), note="n")
    assert dataclasses.is_dataclass(named)
    assert [each.name for each in dataclasses.fields(named)] == ["x", "y", "tags", "note"]
    assert dataclasses.asdict(named) == {"x": 1.0, "y": 2.0, "tags": ("a",), "note": "n"}
    changed = dataclasses.replace(named, y=3.0)
    assert (changed.x, changed.y, changed.note) == (1.0, 3.0, "n")
    assert copy.copy(named) == named
    assert copy.deepcopy(named) == named
    assert repr(named).endswith("Named(x=1.0, y=2.0, tags=('a',))")
    assert type(named).__match_args__ == ("x", "y", "tags", "note")


@records.dataclass(frozen=True)
class Packed:
    """At the top of a module, where pickle finds it."""

    values: tuple[float, ...]


def test_one_can_be_sent_to_another_process():
    assert pickle.loads(pickle.dumps(Packed((1.0, 2.0)))) == Packed((1.0, 2.0))


def test_every_data_class_of_the_package_is_of_this_kind():
    """The standard decorator costs half a millisecond a class at every start."""
    wrong = [
        f"{path.relative_to(PACKAGE)}:{node.lineno}"
        for path in PACKAGE.rglob("*.py")
        if path.name != "records.py"
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8")))
        if isinstance(node, ast.ImportFrom)
        and node.module == "dataclasses"
        and any(name.name == "dataclass" for name in node.names)
    ]
    assert wrong == []
