"""Documents made invalid on purpose: one change each to a document that uses every model.

Import it as ``from support.mutations import mutated_documents`` (``tests`` is on the path).
Every document is invalid by construction; the changes are the same in every run.
"""

import copy
import random
from collections.abc import Iterator
from pathlib import Path
from typing import Any, NamedTuple

import yaml

from enclosure_check.description.problems import dotted
from enclosure_check.description.shapes import Shape, shape_at
from enclosure_check.description.yaml_nodes import MappingNode, Node, ScalarNode, read_yaml

FULL = Path(__file__).parent.parent / "description" / "documents" / "full.yaml"
DUMPER = getattr(yaml, "CSafeDumper", yaml.SafeDumper)
SEED = 20_240_611
FREE_TEXT = ("title", "description", "source")
WORD = "no_such_thing"
PathInData = tuple[str | int, ...]


class Mutation(NamedTuple):
    """A label, the bytes, and the dotted path of the field changed (None: the file itself)."""

    label: str
    data: bytes
    field: str | None


def mutated_documents() -> Iterator[Mutation]:
    text = FULL.read_text(encoding="utf-8")
    node = read_yaml(text.encode(), "full.yaml")
    document = raw(node)
    yield from _numbers(document)
    yield from _texts(document)
    yield from _sections(document)
    yield from _missing(document)
    yield from _keys(document)
    yield from _duplicates(text, node)
    yield from _nesting(document)
    yield from _misfits(document)
    yield from _files(text)


def raw(node: Node) -> Any:
    """Plain data of a node, nulls kept."""
    if isinstance(node, ScalarNode):
        return node.value
    if isinstance(node, MappingNode):
        return {key: raw(value) for key, value in node.entries.items()}
    return [raw(item) for item in node.items]


def dump(document: Any) -> bytes:
    return yaml.dump(document, Dumper=DUMPER, sort_keys=False, allow_unicode=True).encode()


def edited(document: Any, path: PathInData, value: Any) -> bytes:
    """The document with the value at a path set."""
    changed = copy.deepcopy(document)
    here = changed
    for step in path[:-1]:
        here = here[step]
    here[path[-1]] = value
    return dump(changed)


def without(document: Any, path: PathInData) -> bytes:
    changed = copy.deepcopy(document)
    here = changed
    for step in path[:-1]:
        here = here[step]
    del here[path[-1]]
    return dump(changed)


def field_of(path: PathInData) -> str:
    """The field a problem at this path names: that of the patched document for patches."""
    in_patch = path[0] in ("options", "conditions") and len(path) > 2
    return dotted(path[2:] if in_patch else path)


def _shape(path: PathInData) -> Shape | None:
    return shape_at(path[2:] if path and path[0] in ("options", "conditions") else path)


def _walk(value: Any, path: PathInData = ()) -> Iterator[tuple[PathInData, Any]]:
    yield path, value
    pairs = value.items() if isinstance(value, dict) else ()
    if isinstance(value, list):
        pairs = enumerate(value)
    for key, child in pairs:
        yield from _walk(child, (*path, key))


def _numbers(document: Any) -> Iterator[Mutation]:
    """Each number in turn, as a few of the things it cannot be."""
    wrong = {
        "text": "lots",
        "quoted": "5",
        "truth value": True,
        "list": [1],
        "mapping": {"value": 1},
        "far negative": -1e6,
        "huge": 1e300,
        "not a number": float("nan"),
        "infinite": float("inf"),
        "infinitely cold": -float("inf"),
    }
    choice = random.Random(SEED)
    for path, value in _walk(document):
        if isinstance(value, int | float):
            for name in choice.sample(sorted(wrong), 4):
                yield Mutation(
                    f"number: {dotted(path)} as {name}",
                    edited(document, path, wrong[name]),
                    field_of(path),
                )


def _texts(document: Any) -> Iterator[Mutation]:
    """Each text in turn: as something else, too long, and naming what is not there."""
    wrong = {"number": 5, "truth value": False, "list": ["a"], "mapping": {"a": "b"}}
    wrong["too long"] = "long " * 500
    choice = random.Random(SEED)
    for path, value in _walk(document):
        if not isinstance(value, str):
            continue
        for name in choice.sample(sorted(wrong), 3):
            yield Mutation(
                f"text: {dotted(path)} as {name}",
                edited(document, path, wrong[name]),
                field_of(path),
            )
        if path[-1] not in FREE_TEXT:
            yield Mutation(
                f"text: {dotted(path)} unknown", edited(document, path, WORD), field_of(path)
            )


def _sections(document: Any) -> Iterator[Mutation]:
    """Each mapping and list in turn, as something else."""
    wrong = {"text": "x", "number": 3, "truth value": True, "list": [1, 2, 3], "mapping": {"9": {}}}
    choice = random.Random(SEED)
    for path, value in _walk(document):
        if path and isinstance(value, dict | list):
            names = [n for n in sorted(wrong) if n != "mapping" or isinstance(value, list)]
            for name in choice.sample(names, 2):
                yield Mutation(
                    f"section: {dotted(path)} as {name}",
                    edited(document, path, wrong[name]),
                    field_of(path),
                )


def _missing(document: Any) -> Iterator[Mutation]:
    """Each required field in turn, left out."""
    for path, value in _walk(document):
        shape = _shape(path)
        if path[:1] in (("options",), ("conditions",)) or shape is None or not shape.is_model:
            continue
        for name, info in shape.core.model_fields.items():
            if info.is_required() and name in value:
                whole = (*path, name)
                yield Mutation(
                    f"missing: {dotted(whole)}", without(document, whole), field_of(whole)
                )


def _keys(document: Any) -> Iterator[Mutation]:
    """Keys that do not exist, by themselves and in the place of one that does."""
    choice = random.Random(SEED)
    for path, value in _walk(document):
        shape = _shape(path)
        if not isinstance(value, dict) or shape is None or path in (("options",), ("conditions",)):
            continue
        known = list(shape.core.model_fields) if shape.is_model else list(shape.key.words())
        if not known:
            continue
        extra = (*path, "zz_unknown")
        yield Mutation(f"unknown: {dotted(extra)}", edited(document, extra, 1), field_of(extra))
        for key in value:
            if key in ("options", "conditions"):
                continue
            swapped = f"{key[0]}{key[2:3]}{key[1]}{key[3:]}"
            wrong = choice.choice([f"{key}x", swapped, key.upper(), key[1:]])
            if wrong in known:
                wrong = f"{key}x"
            renamed = copy.deepcopy(document)
            here = renamed
            for step in path:
                here = here[step]
            here[wrong] = here.pop(key)
            whole = (*path, wrong)
            yield Mutation(f"misspelt: {dotted(whole)}", dump(renamed), field_of(whole))


def _duplicates(text: str, node: MappingNode) -> Iterator[Mutation]:
    """Each line that holds one key and one value, given twice."""
    lines = text.splitlines(keepends=True)

    def visit(mapping: MappingNode, path: PathInData) -> Iterator[Mutation]:
        for key, value in mapping.entries.items():
            line, column = mapping.marks[key]
            whole = (*path, key)
            if isinstance(value, MappingNode):
                yield from visit(value, whole)
            starts_line = not lines[line - 1][: column - 1].strip()
            if isinstance(value, ScalarNode) and starts_line and "\n" not in value.text:
                twice = [*lines[:line], lines[line - 1], *lines[line:]]
                yield Mutation(f"twice: {dotted(whole)}", "".join(twice).encode(), dotted(whole))

    yield from visit(node, ())


def _nesting(document: Any) -> Iterator[Mutation]:
    """Each top-level section moved one level in, and each part and board one level out."""
    for key in document:
        if key == "box":
            continue
        moved = copy.deepcopy(document)
        moved["box"][key] = moved.pop(key)
        yield Mutation(f"nesting: {key} in box", dump(moved), f"box.{key}")
    for section in ("parts", "boards", "part_types", "materials", "modes", "measured"):
        for name in document[section]:
            moved = copy.deepcopy(document)
            moved[name] = moved[section].pop(name)
            yield Mutation(f"nesting: {section}.{name} on top", dump(moved), name)


def _misfits(document: Any) -> Iterator[Mutation]:
    """Values that are fine by themselves and do not fit the others."""
    elsewhere = {
        "part_types.processor.power_slope_pct_per_k": "part_types.processor.power_doubling_k",
        "parts.U1.power_by_mode_w": "parts.U1.power_by_mode_w.slumber",
        "conditions.noon.parts": "conditions.noon.parts.U9",
    }
    edits: list[tuple[str, Any, str]] = [
        (f"parts.{part}.at_mm", at, f"parts.{part}.at_mm")
        for part in ("U1", "U2", "U3", "H1")
        for at in ([-50, 20], [9000, 20], [20, -50], [20, 9000])
    ]
    edits += [
        (f"boards.{board}.{key}", 1000, f"boards.{board}")
        for board in ("logger", "radio")
        for key in ("length_mm", "width_mm")
    ]
    for path, value in (
        ("boards.logger.from_walls_mm.back", 500),
        ("boards.logger.from_walls_mm.bottom", 31),
        ("boards.radio.from_walls_mm.top", 149),
        ("boards.radio.from_walls_mm.front", 61),
        ("parts.U1.pad.thickness_mm", 5),
        ("parts.U1.pad.thickness_mm", 18.7),
        ("parts.U1.pad.length_mm", 17.5),
        ("parts.U1.pad.width_mm", 40),
        ("parts.U1.pad.to", "front"),
        ("parts.U1.side", "top"),
        ("parts.U2.side", "left"),
        ("parts.H1.side", "top"),
        ("parts.B1.side", "top"),
        ("parts.B1.at_mm", [10, 10]),
        ("parts.B1.from_walls_mm.right", 199),
        ("parts.U1.from_walls_mm", {"left": 10}),
        ("parts.B1.pad", {"thickness_mm": 1, "conductivity_w_per_mk": 1}),
        ("part_types.processor.power_slope_pct_per_k", 0.3),
        ("parts.U1.limits.junction", {}),
        ("parts.B1.limits.board", {"max_c": 60}),
        ("boards.logger.conductivity_in_plane_w_per_mk", 20),
        ("boards.logger.other_power_by_mode_w.slumber", 1),
        ("parts.U1.power_by_mode_w", {"slumber": 1}),
        ("walls.left.mounting.gap_mm", 1),
        ("walls.top.mounting.contact_w_per_m2k", 100),
        ("walls.bottom.mounting.gap_mm", 1),
        ("walls.back.mounting.contact_w_per_m2k", 30),
        ("measured.first_run.condition", "midnight"),
        ("measured.first_run.parts.U9", {"case": 50}),
        ("conditions.noon.options", {}),
        ("options.white_paint.conditions", {}),
        ("tolerances.parts.*.power", {"pct": 5}),
        ("tolerances.box", {"pct": 5}),
        ("conditions.noon.parts", {"U9": None}),
    ):
        edits.append((path, value, elsewhere.get(path, path)))
    for path, value, field in edits:
        steps: PathInData = tuple(path.split("."))
        if steps[0] == "tolerances":
            steps = ("tolerances", path.removeprefix("tolerances."))
        yield Mutation(f"misfit: {path} as {value}", edited(document, steps, value), field)
    for path in (
        "walls.bottom.mounting.contact_w_per_m2k",
        "surroundings.sky_c",
        "parts.U1.at_mm",
        "parts.U1.side",
        "parts.U3.length_mm",
        "parts.H1.height_mm",
        "parts.U1.pad.to",
        "measured.first_run.condition",
    ):
        yield Mutation(f"misfit: without {path}", without(document, tuple(path.split("."))), path)
    for section, old, new in (
        ("parts", "U1", "logger"),
        ("parts", "H1", "left"),
        ("parts", "B1", "air"),
        ("boards", "radio", "top"),
        ("boards", "radio", "air"),
    ):
        renamed = copy.deepcopy(document)
        renamed[section][new] = renamed[section].pop(old)
        for part in renamed["parts"].values():
            if section == "boards" and part["place"] == old:
                part["place"] = new
        renamed["measured"], renamed["options"] = {}, {}
        yield Mutation(f"misfit: {section}.{old} named {new}", dump(renamed), f"{section}.{new}")


def _files(text: str) -> Iterator[Mutation]:
    """Files that are no plain YAML text, whatever is in them."""
    data = text.encode()
    chance = random.Random(SEED)
    for label, broken in (
        ("empty", b""),
        ("white space", b" \n\n  \n"),
        ("comments only", b"# nothing\n# here\n"),
        ("null", b"null\n"),
        ("a list", b"- a\n- b\n"),
        ("a word", b"hello\n"),
        ("a number", b"12\n"),
        ("two documents", data + b"---\n" + data),
        ("too large", data + b"#" * (1 << 20)),
        ("huge line", b"a: " + b"1" * (1 << 20)),
        ("UTF-16", text.encode("utf-16")),
        ("UTF-16 without mark", text.encode("utf-16-le")),
        ("UTF-32", text.encode("utf-32")),
        ("Latin-1", text.replace("mast", "m\u00e4st").encode("latin-1")),
        ("cut character", data + b"\n# \xe2\x82"),
        ("NUL bytes", data + b"\x00" * 100),
        ("escape character", data.replace(b"Measuring", b"\x1b[31mMeasuring")),
        ("escaped control", data.replace(b"isolated supply", b'"\\x1b[31m"')),
        ("open quote", data + b'extra: "\n'),
        ("open bracket", data + b"extra: [1, 2\n"),
        ("tab indent", data + b"extra:\n\tx: 1\n"),
        ("deep flow", data + b"extra: " + b"[" * 100 + b"]" * 100),
        ("deep blocks", b"".join(b" " * i + b"a:\n" for i in range(300))),
        ("very deep flow", b"extra: " + b"[" * 500_000),
        ("very deep dashes", b"- " * 400_000),
        ("merge key", data + b"extra: {<<: {a: 1}}\n"),
        ("known tag", data.replace(b"air_c: 40", b"air_c: !!float 40")),
        ("code tag", data + b"extra: !!python/object/apply:os.getcwd []\n"),
        ("own alias", data + b"extra: &e [*e]\n"),
        ("alias of nothing", data + b"extra: *e\n"),
        ("list as key", data + b"? [a, b]\n: 1\n"),
        ("mapping as key", data + b"? {a: b}\n: 1\n"),
        ("many aliases", data + _laughs()),
        ("many problems", b"a: 1\n" * 200_000),
    ):
        yield Mutation(f"file: {label}", broken, None)
    for size in (1, 7, 50, 400, 3000, 50_000):
        noise = bytes([0x80 + chance.randrange(64)]) + chance.randbytes(size)
        yield Mutation(f"file: {size} bytes of noise", noise, None)
    for _ in range(30):
        at = chance.randrange(len(data))
        wrong = bytes([chance.choice([0xC0, 0xFF, 0xFE, 0xF8, 0xC1])])
        yield Mutation(
            f"file: byte {wrong.hex()} put in at {at}", data[:at] + wrong + data[at:], None
        )
    for _ in range(30):
        at = chance.randrange(len(data))
        wrong = bytes([chance.choice([0x00, 0x01, 0x07, 0x08, 0x1B, 0x7F])])
        yield Mutation(
            f"file: byte {wrong.hex()} put in at {at}", data[:at] + wrong + data[at:], None
        )


def _laughs() -> bytes:
    lines = ["extra0: &a0 [x, x, x, x, x, x, x, x, x]"]
    for level in range(1, 12):
        items = ", ".join([f"*a{level - 1}"] * 9)
        lines.append(f"extra{level}: &a{level} [{items}]")
    return "\n".join(lines).encode() + b"\n"
