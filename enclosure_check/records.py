"""Data classes that cost little at start-up.

`dataclass` is used as that of the standard library, whose annotations, defaults, ``fields`` and
``replace`` it keeps. The standard one writes and compiles source for every method of every class,
about half a millisecond a class; here all classes share the functions below.
"""

import dataclasses
from collections.abc import Callable
from dataclasses import MISSING, FrozenInstanceError, field, fields, replace
from operator import attrgetter
from typing import TYPE_CHECKING, Any, NoReturn

__all__ = ["dataclass", "field", "fields", "replace"]

if TYPE_CHECKING:
    # To a type checker the two are one.
    from dataclasses import dataclass
else:

    def dataclass(
        cls: type | None = None,
        /,
        *,
        frozen: bool = False,
        eq: bool = True,
        order: bool = False,
    ) -> Any:
        """Make a data class; see `dataclasses.dataclass` for what the switches mean.

        A class equal by value is hashed by value when it is frozen, and not at all otherwise.
        A frozen one refuses to have anything set or deleted, be it a field or not.
        """

        def make(cls: type) -> type:
            return _made(cls, frozen=frozen, eq=eq, order=order)

        return make if cls is None else make(cls)


def _made(cls: type, *, frozen: bool, eq: bool, order: bool) -> type:
    made: Any = dataclasses.dataclass(init=False, repr=False, eq=False)(cls)
    every = fields(made)
    made._record_names = frozenset(each.name for each in every)
    made._record_defaults = {
        each.name: each
        for each in every
        if each.default is not MISSING or each.default_factory is not MISSING
    }
    made._record_key = staticmethod(_getter([each.name for each in every if each.compare]))
    init = _init_and_more if hasattr(made, "__post_init__") else _init
    methods: dict[str, Callable[..., Any] | None] = {"__init__": init, "__repr__": _repr}
    if eq:
        methods |= {"__eq__": _eq, "__hash__": _hash if frozen else None}
    if order:
        methods |= {"__lt__": _lt, "__le__": _le, "__gt__": _gt, "__ge__": _ge}
    if frozen:
        methods |= {"__setattr__": _refuse_to_set, "__delattr__": _refuse_to_delete}
    for name, method in methods.items():
        if name == "__init__" or name not in cls.__dict__:
            setattr(made, name, method)
    return cls


def _getter(names: list[str]) -> Callable[[Any], Any]:
    return attrgetter(*names) if names else lambda _: ()


# What all classes share -------------------------------------------------------------------


def _init(self: Any, /, *args: Any, **named: Any) -> None:
    cls = self.__class__
    # A frozen class refuses attributes, but its dictionary can be filled.
    values = self.__dict__
    if args:
        values.update(zip(cls.__match_args__, args, strict=False))
    if named:
        values.update(named)
        complete = values.keys() == cls._record_names
    else:
        complete = len(values) == len(cls.__match_args__)
    if not complete or len(values) != len(args) + len(named):
        _complete(cls, values, len(args) + len(named))


def _init_and_more(self: Any, /, *args: Any, **named: Any) -> None:
    _init(self, *args, **named)
    self.__post_init__()


def _complete(cls: Any, values: dict[str, Any], given: int) -> None:
    """Fill in defaults, or refuse what was given."""
    names = cls.__match_args__
    if len(values) != given:
        raise TypeError(f"{cls.__name__}() got too many or repeated arguments")
    for name, each in cls._record_defaults.items():
        if name not in values:
            made = each.default_factory is not MISSING
            values[name] = each.default_factory() if made else each.default
    if values.keys() != cls._record_names:
        _refuse_arguments(cls.__name__, names, values)


def _refuse_arguments(owner: str, names: tuple[str, ...], given: dict[str, Any]) -> NoReturn:
    for name in given:
        if name not in names:
            raise TypeError(f"{owner}() got an unexpected keyword argument {name!r}")
    missing = [repr(name) for name in names if name not in given]
    noun = "argument" if len(missing) == 1 else "arguments"
    raise TypeError(
        f"{owner}() missing {len(missing)} required positional {noun}: {' and '.join(missing)}"
    )


def _repr(self: Any) -> str:
    shown = (f"{each.name}={getattr(self, each.name)!r}" for each in fields(self) if each.repr)
    return f"{type(self).__qualname__}({', '.join(shown)})"


def _eq(self: Any, other: Any) -> Any:
    if type(self) is not type(other):
        return NotImplemented
    return self._record_key(self) == self._record_key(other)


def _hash(self: Any) -> int:
    return hash(self._record_key(self))


def _lt(self: Any, other: Any) -> Any:
    if type(self) is not type(other):
        return NotImplemented
    return self._record_key(self) < self._record_key(other)


def _le(self: Any, other: Any) -> Any:
    if type(self) is not type(other):
        return NotImplemented
    return self._record_key(self) <= self._record_key(other)


def _gt(self: Any, other: Any) -> Any:
    if type(self) is not type(other):
        return NotImplemented
    return self._record_key(self) > self._record_key(other)


def _ge(self: Any, other: Any) -> Any:
    if type(self) is not type(other):
        return NotImplemented
    return self._record_key(self) >= self._record_key(other)


def _refuse_to_set(_: Any, name: str, __: Any) -> NoReturn:
    raise FrozenInstanceError(f"cannot assign to field {name!r}")


def _refuse_to_delete(_: Any, name: str) -> NoReturn:
    raise FrozenInstanceError(f"cannot delete field {name!r}")
