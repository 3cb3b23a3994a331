"""An earlier result, read back from JSON that may come from anyone."""

from collections.abc import Callable, Mapping, Sequence
from math import isfinite
from typing import Any, NoReturn, TypeVar

from enclosure_check.findings.baseline import Value
from enclosure_check.records import dataclass

# Bounds of a file: its size, and the number of values in it, which is what takes memory.
MAX_BYTES = 24 << 20
MAX_VALUES = 600_000
FORMAT = 1
_NO_REPORT = "is no JSON report of this program's check"
_LONGEST_QUOTE = 40

Record = TypeVar("Record")
_Json = Mapping[str, Any]


class EarlierError(Exception):
    """A file that is no earlier result; the message says why."""


@dataclass(frozen=True)
class EarlierLimit:
    """A part against a limit [C, C, K]."""

    name: str
    limit_kind: str
    limit_side: str
    temperature_c: float
    limit_c: float
    margin_k: float


@dataclass(frozen=True)
class EarlierWall:
    """A wall against its touch limit [C, C, K]; None where it has none."""

    name: str
    outside_max_c: float
    touch_max_c: float | None
    touch_margin_k: float | None


@dataclass(frozen=True)
class EarlierCondition:
    """A condition; ``part_names`` are those of all parts, with a limit or without."""

    name: str
    option: str | None
    parts: tuple[EarlierLimit, ...]
    part_names: tuple[str, ...]
    walls: tuple[EarlierWall, ...]


@dataclass(frozen=True)
class EarlierReport:
    """The report of a document; ``inputs`` is None in reports of the first versions."""

    document: str
    digest: str
    version: str
    conditions: tuple[EarlierCondition, ...]
    inputs: Mapping[str, Value] | None = None


def read_earlier(data: bytes) -> tuple[EarlierReport, ...]:
    """Read the JSON report of one document or of several.

    Raises
    ------
    EarlierError
        When it is too large, no JSON, no report, or a report of another format.
    """
    if len(data) > MAX_BYTES:
        raise EarlierError(f"is larger than {MAX_BYTES >> 20} MiB; compare fewer documents at once")
    if sum(map(data.count, (b",", b"[", b"{"))) > MAX_VALUES:
        raise EarlierError(f"holds more than {MAX_VALUES} values; compare fewer documents at once")
    whole = _parsed(data)
    if not isinstance(whole, dict) or "format" not in whole:
        raise EarlierError(_NO_REPORT)
    number = whole["format"]
    if isinstance(number, bool) or number != FORMAT:
        raise EarlierError(f"is of report format {_quoted(number)}, allowed: {FORMAT}")
    if "documents" in whole:
        return _records(whole, "documents", "", _report)
    return (_report(whole, ""),)


def _parsed(data: bytes) -> Any:
    import json

    try:
        return json.loads(data, parse_constant=_refuse_constant)
    except RecursionError:
        raise EarlierError(f"{_NO_REPORT}: nested too deeply") from None
    except ValueError as error:  # no JSON, no UTF-8, a number of thousands of digits
        raise EarlierError(f"{_NO_REPORT}: {error}") from None


def _refuse_constant(name: str) -> NoReturn:
    raise ValueError(f"{name} is no number")


# Records ----------------------------------------------------------------------------------


def _report(record: _Json, path: str) -> EarlierReport:
    return EarlierReport(
        _text(record, "document", path),
        _text(record, "digest", path),
        _text(record, "version", path),
        _records(record, "conditions", path, _condition),
        _inputs(record, path) if "inputs" in record else None,
    )


def _condition(record: _Json, path: str) -> EarlierCondition:
    return EarlierCondition(
        _text(record, "name", path),
        None if record.get("option") is None else _text(record, "option", path),
        _records(record, "parts", path, _limit),
        _records(record, "part_heat", path, lambda part, where: _text(part, "name", where)),
        _records(record, "walls", path, _wall),
    )


def _limit(record: _Json, path: str) -> EarlierLimit:
    return EarlierLimit(
        _text(record, "name", path),
        _text(record, "limit_kind", path),
        _text(record, "limit_side", path),
        _number(record, "temperature_c", path),
        _number(record, "limit_c", path),
        _number(record, "margin_k", path),
    )


def _wall(record: _Json, path: str) -> EarlierWall:
    touch = [
        None if record.get(key) is None else _number(record, key, path)
        for key in ("touch_max_c", "touch_margin_k")
    ]
    return EarlierWall(_text(record, "name", path), _number(record, "outside_max_c", path), *touch)


def _inputs(record: _Json, path: str) -> dict[str, Value]:
    inputs = record["inputs"]
    if not isinstance(inputs, dict):
        _refuse(path, "inputs", inputs, "a mapping")
    found: dict[str, Value] = {}
    for key in inputs:
        value = inputs[key]
        number = isinstance(value, int | float) and not isinstance(value, bool)
        _checked_text(key, path, "inputs")
        if isinstance(value, str):
            _checked_text(value, path, "inputs")
        elif not (number or value is None or isinstance(value, bool)):
            _refuse(path, "inputs", value, "numbers, texts, true, false and null")
        found[key] = _number(inputs, key, f"{path}inputs.") if number else value
    return found


# Values -----------------------------------------------------------------------------------


def _records(
    record: _Json, key: str, path: str, make: Callable[[_Json, str], Record]
) -> tuple[Record, ...]:
    items = record.get(key)
    if not isinstance(items, list):
        _refuse(path, key, items, "a list")
    return tuple(_made(items, place, f"{path}{key}.", make) for place in range(len(items)))


def _made(
    items: Sequence[Any], place: int, path: str, make: Callable[[_Json, str], Record]
) -> Record:
    item = items[place]
    if not isinstance(item, dict):
        _refuse(path, str(place), item, "a mapping")
    return make(item, f"{path}{place}.")


def _text(record: _Json, key: str, path: str) -> str:
    value = record.get(key)
    if not isinstance(value, str):
        _refuse(path, key, value, "a text")
    return _checked_text(value, path, key)


def _checked_text(text: str, path: str, key: str) -> str:
    """Refuse halves of characters, which JSON can hold and no file can."""
    if not text.isascii():
        try:
            text.encode("utf-8")
        except UnicodeEncodeError:
            _refuse(path, key, text, "a text of whole characters")
    return text


def _number(record: _Json, key: str, path: str) -> float:
    value = record.get(key)
    if isinstance(value, bool) or not isinstance(value, int | float):
        _refuse(path, key, value, "a number")
    try:
        number = float(value)
    except OverflowError:
        number = float("inf")
    if not isfinite(number):
        _refuse(path, key, value, "a finite number")
    return number


def _refuse(path: str, key: str, value: object, allowed: str) -> NoReturn:
    given = "missing" if value is None else f"given {_quoted(value)}"
    raise EarlierError(f"{_NO_REPORT}: {path}{key}: {given}, allowed: {allowed}")


def _quoted(value: object) -> str:
    if isinstance(value, list | dict):
        return "a list" if isinstance(value, list) else "a mapping"
    if isinstance(value, int) and abs(value) > 10**_LONGEST_QUOTE:
        return "a huge number"
    text = ascii(value)
    return text if len(text) <= _LONGEST_QUOTE else f"{text[:_LONGEST_QUOTE]}..."
