"""Merge patches on nodes against RFC 7396, and the places values keep."""

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from enclosure_check.description.merge import merge_patch
from enclosure_check.description.yaml_nodes import (
    MappingNode,
    Node,
    ScalarNode,
    SequenceNode,
    locate,
    read_yaml,
)

# P. Hoffman, J. Snell, "JSON Merge Patch", RFC 7396 (2014), appendix A, all fifteen rows:
# original, patch, result.
RFC_7396_APPENDIX_A = [
    ('{"a":"b"}', '{"a":"c"}', '{"a":"c"}'),
    ('{"a":"b"}', '{"b":"c"}', '{"a":"b","b":"c"}'),
    ('{"a":"b"}', '{"a":null}', "{}"),
    ('{"a":"b","b":"c"}', '{"a":null}', '{"b":"c"}'),
    ('{"a":["b"]}', '{"a":"c"}', '{"a":"c"}'),
    ('{"a":"c"}', '{"a":["b"]}', '{"a":["b"]}'),
    ('{"a":{"b":"c"}}', '{"a":{"b":"d","c":null}}', '{"a":{"b":"d"}}'),
    ('{"a":[{"b":"c"}]}', '{"a":[1]}', '{"a":[1]}'),
    ('["a","b"]', '["c","d"]', '["c","d"]'),
    ('{"a":"b"}', '["c"]', '["c"]'),
    ('{"a":"foo"}', "null", "null"),
    ('{"a":"foo"}', '"bar"', '"bar"'),
    ('{"e":null}', '{"a":1}', '{"e":null,"a":1}'),
    ("[1,2]", '{"a":"b","c":null}', '{"a":"b"}'),
    ("{}", '{"a":{"bb":{"ccc":null}}}', '{"a":{"bb":{}}}'),
]


def node_of(value: object) -> Node:
    """Nodes of plain data, all in one place."""
    if isinstance(value, dict):
        entries = {key: node_of(item) for key, item in value.items()}
        return MappingNode(entries, dict.fromkeys(entries, (1, 1)), 1, 1)
    if isinstance(value, list):
        return SequenceNode(tuple(node_of(item) for item in value), 1, 1)
    assert value is None or isinstance(value, str | int | float | bool)
    return ScalarNode(value, 1, 1, str(value))


def data_of(node: Node) -> object:
    """Plain data of nodes, nulls kept (unlike ``to_data``)."""
    if isinstance(node, MappingNode):
        assert list(node.marks) == list(node.entries)
        return {key: data_of(item) for key, item in node.entries.items()}
    if isinstance(node, SequenceNode):
        return [data_of(item) for item in node.items]
    return node.value


@pytest.mark.parametrize(("original", "patch", "result"), RFC_7396_APPENDIX_A)
def test_every_example_of_the_rfc(original, patch, result):
    target = node_of(json.loads(original))
    assert data_of(merge_patch(target, node_of(json.loads(patch)))) == json.loads(result)
    assert data_of(target) == json.loads(original)


def test_the_example_of_section_3_of_the_rfc():
    # RFC 7396, section 3.
    target = {
        "title": "Goodbye!",
        "author": {"givenName": "John", "familyName": "Doe"},
        "tags": ["example", "sample"],
        "content": "This will be unchanged",
    }
    patch = {
        "title": "Hello!",
        "phoneNumber": "+01-123-456-7890",
        "author": {"familyName": None},
        "tags": ["example"],
    }
    assert data_of(merge_patch(node_of(target), node_of(patch))) == {
        "title": "Hello!",
        "author": {"givenName": "John"},
        "tags": ["example"],
        "content": "This will be unchanged",
        "phoneNumber": "+01-123-456-7890",
    }


JSON = st.recursive(
    st.none() | st.booleans() | st.integers(0, 3) | st.sampled_from(["a", "b"]),
    lambda inner: (
        st.lists(inner, max_size=2) | st.dictionaries(st.sampled_from("abc"), inner, max_size=3)
    ),
    max_leaves=8,
)


def rfc_pseudocode(target: object, patch: object) -> object:
    """RFC 7396, section 2, word for word."""
    if not isinstance(patch, dict):
        return patch
    target = dict(target) if isinstance(target, dict) else {}
    for name, value in patch.items():
        if value is None:
            target.pop(name, None)
        else:
            target[name] = rfc_pseudocode(target.get(name), value)
    return target


@given(JSON, JSON)
def test_as_the_pseudocode_of_the_rfc(target, patch):
    nodes = node_of(target), node_of(patch)
    assert data_of(merge_patch(*nodes)) == rfc_pseudocode(target, patch)
    assert (data_of(nodes[0]), data_of(nodes[1])) == (target, patch)


TEXT = """\
base:
  box: {width_mm: 1, height_mm: 2}
  wall: open
  gone: {x: 1}
  kept: 3
patch:
  box: {height_mm: 20, depth_mm: 30}
  wall: {kind: insulated}
  gone: null
  new: {y: 5, z: null}
"""


def merged() -> MappingNode:
    node = read_yaml(TEXT.encode(), "box.yaml")
    base, patch = node.entries["base"], node.entries["patch"]
    assert isinstance(base, MappingNode)
    assert isinstance(patch, MappingNode)
    return merge_patch(base, patch)


@pytest.mark.parametrize(
    ("path", "place"),
    [
        (("box",), (2, 3)),
        (("box", "width_mm"), (2, 19)),
        (("box", "height_mm"), (7, 20)),
        (("box", "depth_mm"), (7, 34)),
        (("wall",), (8, 3)),
        (("wall", "kind"), (8, 16)),
        (("kept",), (5, 9)),
        (("new", "y"), (10, 12)),
        # Removed by the patch: where it says so.
        (("gone",), (9, 3)),
        (("gone", "x"), (9, 3)),
        (("new", "z"), (10, 15)),
    ],
)
def test_values_keep_the_place_they_came_from(path, place):
    assert locate(merged(), path) == place


def test_a_later_patch_may_put_back_what_an_earlier_one_removed():
    again = merge_patch(merged(), node_of({"gone": {"x": 2}}))
    assert isinstance(again, MappingNode)
    assert again.removed == {}
    assert locate(again, ("gone", "x")) == (1, 1)
