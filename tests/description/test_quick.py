"""What the quick way accepts, the models accept, to the same values; what it leaves, they decide."""

import copy
import os
import random
import subprocess
import sys
from pathlib import Path
from typing import Annotated, Any, Literal

import pytest
from pydantic import (
    AfterValidator,
    BaseModel,
    ConfigDict,
    Field,
    StringConstraints,
    ValidationError,
    computed_field,
    field_validator,
    model_validator,
)
from support.mutations import FULL, mutated_documents
from support.random_documents import random_document

from enclosure_check.description import quick_models
from enclosure_check.description.base import NotBoolean, Strict
from enclosure_check.description.box import Mounting
from enclosure_check.description.document import Document
from enclosure_check.description.load import load_document
from enclosure_check.description.merge import merge_patch
from enclosure_check.description.problems import DocumentError
from enclosure_check.description.quick import (
    Known,
    Plain,
    is_mapping_by_name,
    mounting_by_default,
    plainly_valid,
    validated,
)
from enclosure_check.description.quick_page import quick_models as written
from enclosure_check.description.validate import validate
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
    read_yaml,
    to_data,
)

ROOT = Path(__file__).parents[2]
COMMAND = "python -m enclosure_check.description.quick_page"
SAMPLES = sorted((ROOT / "sample_boards").glob("*.yaml"))
TOP = "title: A box\nbox: {width_mm: 100, height_mm: 80, depth_mm: 60}\nsurroundings: {air_c: 25}\n"
# Of many changes every few, so that the tests stay quick.
THIN = 3
# Put in the place of every single value, one at a time.
VALUES = (
    *(0, 1, 1.0, -1, -0.0, 0.5, 50, 90, 90.0, 100, 1000, 1e4, 1e5, 10**15 - 1, 1e300),
    *(float("inf"), float("nan"), True, False, "", "x", "left", "y" * 81, "z" * 2001),
)


def node_of(text: str) -> MappingNode:
    return read_yaml(text.encode(), "box.yaml")


def as_node(value: Any) -> Node:
    """Give the node of plain data; where it stands does not matter here."""
    if isinstance(value, dict):
        entries = {key: as_node(each) for key, each in value.items()}
        return MappingNode(entries, dict.fromkeys(entries, (1, 1)), 1, 1)
    if isinstance(value, list):
        return SequenceNode(tuple(map(as_node, value)), 1, 1)
    return ScalarNode(value, 1, 1, str(value))


def same(plain: Any, model: Any) -> bool:
    """Tell whether two results agree in every value, its type, and what was given."""
    if isinstance(model, BaseModel):
        names = set(type(model).model_fields)
        return (
            isinstance(plain, Plain)
            and set(vars(plain)) == {*names, "model_fields_set"}
            and plain.model_fields_set == model.model_fields_set
            and all(same(getattr(plain, name), getattr(model, name)) for name in names)
        )
    if type(plain) is not type(model):
        return False
    if isinstance(model, dict):
        return list(plain) == list(model) and all(same(plain[key], model[key]) for key in model)
    if isinstance(model, list):
        return len(plain) == len(model) and all(map(same, plain, model))
    return repr(plain) == repr(model)


def decided(node: MappingNode) -> Document | None:
    """Give what the models make of a document, None when they refuse it."""
    try:
        document = Document.model_validate(to_data(node))
    except ValidationError:
        return None
    try:  # which refuses misspelt keys without a value as well
        return validate(node, "x") and document
    except DocumentError:
        return None


def agree(node: MappingNode) -> bool:
    """Tell whether both ways accept it, to the same values, or both refuse it."""
    return same(plainly_valid(node), decided(node))


# The table ----------------------------------------------------------------------------------


def test_the_table_is_that_of_the_models():
    now = Path(quick_models.__file__).read_text(encoding="utf-8")
    assert now == written(), f"out of date: {COMMAND} > enclosure_check/description/quick_models.py"


def odd(kind: Any, **settings: Any) -> type[Strict]:
    """A model with one key of a kind."""
    space = {"__annotations__": {"key": kind}, "__module__": __name__, **settings}
    return type("Odd", (Strict,), space)


class WithCheck(Strict):
    key: float = 0.0

    @field_validator("key")
    @classmethod
    def check(cls, value: float) -> float:
        return value


class WithWhole(Strict):
    key: float = 0.0

    @model_validator(mode="after")
    def check(self) -> "WithWhole":
        return self


class WithComputed(Strict):
    key: float = 0.0

    @computed_field
    def twice(self) -> float:
        return 2 * self.key


class WithMethod(Strict):
    key: float = 0.0

    def twice(self) -> float:
        return 2 * self.key


class WithProperty(Strict):
    key: float = 0.0

    @property
    def twice(self) -> float:
        return 2 * self.key


class WithSettings(Strict):
    model_config = ConfigDict(extra="ignore")
    key: float = 0.0


@pytest.mark.parametrize(
    "model",
    [
        WithCheck,
        WithWhole,
        WithComputed,
        WithMethod,
        WithProperty,
        WithSettings,
        odd(Annotated[str, StringConstraints(pattern="a+")]),
        odd(Annotated[str, StringConstraints(strip_whitespace=True)]),
        odd(Annotated[float, Field(multiple_of=2)]),
        odd(Annotated[float, Field(gt=1, ge=2)]),
        odd(Annotated[float, Field(strict=False)]),
        odd(Annotated[float, AfterValidator(abs)]),
        odd(Annotated[float, NotBoolean]),
        odd(Literal[True, "x"]),
        odd(dict[int, float]),
        odd(tuple[int, int]),
        odd(int | str),
        odd(float, key=Field(alias="other")),
        odd(list[float], key=Field(default_factory=lambda: [1.0])),
    ],
    ids=lambda model: f"{model.__name__} {model.model_fields['key'].annotation}",
)
def test_what_the_quick_way_does_not_know_is_not_written(model):
    with pytest.raises(TypeError):
        written(model)


def test_what_it_knows_is_written():
    model = odd(Annotated[float, Field(gt=1, le=2)] | None, key=None)
    space: dict[str, Any] = {}
    exec(written(model), space)
    assert space["MODELS"] == {"Odd": {"key": (("float", 1, False, 2, True), None)}}


# Agreement ----------------------------------------------------------------------------------


@pytest.mark.parametrize("path", [*SAMPLES, FULL], ids=lambda path: path.stem)
def test_valid_documents_are_accepted(path):
    node = load_document(str(path)).node  # with the parts of its lists
    known: Known = {}
    patches = [MappingNode({}, {}, 1, 1)]
    for key in ("options", "conditions"):
        if key in node.entries:
            patches += node.entries[key].entries.values()
    assert len(patches) > 1
    for patch in patches:
        patched = merge_patch(node, patch)
        assert plainly_valid(patched) is not None
        assert agree(patched)
        # Again with what is known of the others.
        assert same(plainly_valid(patched, known), decided(patched))


def test_one_node_at_two_places_is_looked_at_twice():
    board = "boards: {main: &one {parallel_to: back, length_mm: 1, width_mm: 1}}"
    node = node_of(f"{TOP}{board}\nparts: {{U1: *one}}\n")
    assert plainly_valid(node, {}) is None
    sound = node_of(f"{TOP}finishes: {{a: &a {{emissivity: 1}}, b: *a}}\n")
    plain = plainly_valid(sound, {})
    assert plain.finishes["a"] is plain.finishes["b"]
    empty = node_of(TOP + "defaults: {wall: &none {}, board: *none}\n")
    assert agree(empty)
    assert plainly_valid(empty, {}).defaults.board.material is None


def test_random_documents_are_accepted():
    for seed in range(200):
        node = as_node(random_document(random.Random(seed)))
        assert isinstance(node, MappingNode)
        assert plainly_valid(node) is not None
        assert agree(node)


def test_invalid_documents_are_left_to_the_models():
    refused = 0
    for mutation in list(mutated_documents())[::THIN]:
        try:
            node = read_yaml(mutation.data, "x")
        except DocumentError:
            continue
        assert agree(node), mutation.label
        refused += plainly_valid(node) is None
    assert refused > 100


def places(node: Node, path: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """Give the path of every single value."""
    if isinstance(node, ScalarNode):
        return [path]
    inner = node.entries.items() if isinstance(node, MappingNode) else enumerate(node.items)
    return [place for key, child in inner for place in places(child, (*path, key))]


def test_every_value_in_turn_as_many_others():
    data = to_data(read_yaml(FULL.read_bytes(), "x"))
    for key in ("options", "conditions"):
        del data[key]
    accepted = refused = 0
    for path in places(as_node(data))[::THIN]:
        changed = copy.deepcopy(data)
        owner = changed
        for step in path[:-1]:
            owner = owner[step]
        for value in VALUES:
            owner[path[-1]] = value
            plain = plainly_valid(as_node(changed))
            try:
                model = Document.model_validate(changed)
            except ValidationError:
                model = None
            # The models take 90.0 for the word 90; that is left to them.
            doubtful = path[-1] in ("format", "rotation_deg") and type(value) is float
            assert same(plain, model) or (doubtful and plain is None), (path, value)
            accepted, refused = accepted + (plain is not None), refused + (plain is None)
    assert accepted > 300
    assert refused > 300


@pytest.mark.parametrize(
    ("extra", "accepted"),
    [
        ("mode: null\nparts: ~\ndefaults: {wall: }\n", True),
        ("moed: null\n", False),
        ("walls: {top: null}\n", True),
        ("walls: {lid: null}\n", False),
        ("parts: {U1: null}\n", True),
        ("boards: {main: {from_walls_mm: {lid: null}}}\n", False),
        ("parts: []\n", False),
        ("parts: {'': {}}\n", False),
        ("format: true\n", False),
    ],
)
def test_keys_without_a_value_and_odd_sections(extra, accepted):
    node = node_of(TOP + extra)
    assert (plainly_valid(node) is not None) is accepted
    assert agree(node)


def test_what_only_the_models_know_is_left_to_them():
    node = node_of(TOP + "format: 1.0\n")
    assert plainly_valid(node) is None
    assert validated(node, "x").format == 1


def test_a_patch_that_removes_a_misspelt_key_is_left_to_the_models():
    node = merge_patch(node_of(TOP), node_of("surroundings: {air: null}\n"))
    assert plainly_valid(node) is None
    with pytest.raises(DocumentError, match="air"):
        validated(node, "x")
    walls = merge_patch(node_of(TOP + "walls: {top: {}}\n"), node_of("walls: {lid: null}\n"))
    assert plainly_valid(walls) is None
    known = merge_patch(node_of(TOP), node_of("surroundings: {altitude_m: null}\n"))
    assert agree(known)
    assert plainly_valid(known) is not None


def test_a_plain_document_is_never_changed():
    plain = plainly_valid(node_of(TOP))
    with pytest.raises(AttributeError, match="title"):
        plain.title = "Another"
    assert plain.title == "A box"


def test_two_plain_documents_share_no_mapping():
    one, other = plainly_valid(node_of(TOP)), plainly_valid(node_of(TOP))
    assert one.parts == other.parts == {}
    assert one.parts is not other.parts


def test_a_wall_that_is_not_mentioned_is_mounted_as_the_model_has_it():
    assert same(mounting_by_default(), Mounting())


@pytest.mark.parametrize(
    ("path", "by_name"),
    [
        (("parts",), True),
        (("boards", "main", "copper"), True),
        (("walls",), False),
        (("box",), False),
        (("parts", "U1", "limits"), False),
        (("parts", "U1", "at_mm", 0), False),
        (("nowhere", "x"), False),
    ],
)
def test_where_names_are_the_users_own(path, by_name):
    assert is_mapping_by_name(path) is by_name


# What it is for -----------------------------------------------------------------------------


@pytest.mark.parametrize("path", SAMPLES, ids=lambda path: path.stem)
def test_a_check_does_not_load_the_models(path):
    code = (
        "import sys; from enclosure_check.cli import main; code = main(sys.argv[1:]);"
        "print(code, *sys.modules, file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, "check", str(path)],
        capture_output=True,
        text=True,
        check=False,
        env={**os.environ, "OPENBLAS_NUM_THREADS": "1"},
    )
    code, *modules = done.stderr.split()
    assert code in ("0", "1")
    assert "enclosure_check.description.quick" in modules
    needless = {"pydantic", "pydantic_core", "enclosure_check.description.document"}
    assert needless.isdisjoint(modules)


def test_a_document_is_loaded_either_way(monkeypatch):
    quickly = load_document(str(FULL)).cases()
    monkeypatch.setattr("enclosure_check.description.quick.plainly_valid", lambda *_: None)
    assert load_document(str(FULL)).cases() == quickly
