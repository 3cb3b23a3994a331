"""Blocks that stand apart: eliminating them first gives what solving at once gives."""

import numpy as np
import pytest

from enclosure_check.description.load import load_document
from enclosure_check.network import condense
from enclosure_check.network.build import build_network
from enclosure_check.network.condense import MOST_LINKS, find_blocks
from enclosure_check.network.linear import CONDENSED_FROM, DenseFactor

SAMPLES = ("wayside_card_cage", "door_controller")


def entries_of(matrix):
    return np.nonzero(matrix)


def two_plates(rng, cells=12, border=6):
    """Two chains of cells, each linked with the same few border nodes, not with each other.

    Links go one way only here and there, as derivatives of films do.
    """
    size = 2 * cells + border
    matrix = np.diag(rng.uniform(8.0, 12.0, size))
    for start in (0, cells):
        for at in range(start, start + cells - 1):
            matrix[at, at + 1], matrix[at + 1, at] = rng.normal(size=2)
    both = rng.normal(size=(size, size))
    border_nodes = np.arange(2 * cells, size)
    matrix[border_nodes] = np.where(rng.random((border, size)) < 0.6, both[border_nodes], 0.0)
    matrix[:, border_nodes] += np.where(rng.random((size, border)) < 0.6, both[:, border_nodes], 0)
    matrix[border_nodes, border_nodes] += 20.0
    return matrix, (np.arange(cells), np.arange(cells, 2 * cells))


@pytest.mark.parametrize("seed", range(5))
def test_it_is_the_answer_of_the_whole(seed):
    rng = np.random.default_rng(seed)
    matrix, groups = two_plates(rng)
    blocks = find_blocks(*entries_of(matrix), len(matrix), groups)
    assert len(blocks.blocks) == 2
    right = rng.normal(size=(len(matrix), 3))
    plain, condensed = DenseFactor(matrix), DenseFactor(matrix, blocks=blocks)
    for name in ("solve", "solve_transposed"):
        expected = getattr(plain, name)(right)
        np.testing.assert_allclose(getattr(condensed, name)(right), expected, rtol=1e-10)
    np.testing.assert_allclose(condensed.inverse() @ matrix, np.eye(len(matrix)), atol=1e-12)


def test_blocks_have_no_links_with_each_other_and_nothing_is_lost():
    matrix, groups = two_plates(np.random.default_rng(7))
    blocks, rest = find_blocks(*entries_of(matrix), len(matrix), groups)
    one, other = (block.own for block in blocks)
    assert not matrix[np.ix_(one, other)].any()
    assert not matrix[np.ix_(other, one)].any()
    every = np.sort(np.concatenate((one, other, rest)))
    np.testing.assert_array_equal(every, np.arange(len(matrix)))
    for own, rows, columns in blocks:
        entered = np.flatnonzero(matrix[:, own].any(axis=1))
        assert set(entered) <= set(own) | set(rest[rows])
        assert set(np.flatnonzero(matrix[own].any(axis=0))) <= set(own) | set(rest[columns])


def test_what_hangs_on_one_block_joins_it_and_what_joins_two_does_not():
    # Two pairs of cells; node 4 hangs on the first pair, node 5 on node 4, node 6 joins both.
    links = [(0, 1), (2, 3), (1, 4), (4, 5), (0, 6), (3, 6)]
    matrix = np.eye(7)
    for one, other in links:
        matrix[one, other] = matrix[other, one] = 0.1
    groups = (np.array([0, 1]), np.array([2, 3]))
    blocks, rest = find_blocks(*entries_of(matrix), 7, groups)
    assert [block.own.tolist() for block in blocks] == [[0, 1, 4, 5], [2, 3]]
    assert rest.tolist() == [6]


def test_two_that_would_link_their_blocks_stay_out():
    # Node 4 hangs on the first pair, node 5 on the second, and they are linked.
    matrix = np.eye(6)
    for one, other in [(0, 1), (2, 3), (1, 4), (3, 5), (4, 5)]:
        matrix[one, other] = matrix[other, one] = 0.1
    blocks, rest = find_blocks(*entries_of(matrix), 6, (np.array([0, 1]), np.array([2, 3])))
    assert [block.own.tolist() for block in blocks] == [[0, 1], [2, 3]]
    assert rest.tolist() == [4, 5]


def test_the_smaller_of_two_plates_that_see_each_other_is_no_block_of_its_own():
    matrix = np.eye(5)
    matrix[0, 3] = 0.1  # one way is enough
    blocks, rest = find_blocks(*entries_of(matrix), 5, (np.array([3, 4]), np.array([0, 1, 2])))
    # Its cell that sees the other hangs on that one.
    assert [block.own.tolist() for block in blocks] == [[0, 1, 2, 3]]
    assert rest.tolist() == [4]


def test_a_node_linked_with_very_much_joins_nothing():
    size = MOST_LINKS + 10
    matrix = np.eye(size)
    matrix[-1] = matrix[:, -1] = 0.1
    blocks, rest = find_blocks(*entries_of(matrix), size, (np.arange(4),))
    assert rest[-1] == size - 1
    assert size - 1 not in blocks[0].own


def test_a_block_that_is_singular_by_itself_is_no_hindrance():
    matrix = np.array([[0.0, 0.0, 1.0], [0.0, 2.0, 1.0], [1.0, 1.0, 3.0]])
    blocks = find_blocks(*entries_of(matrix), 3, (np.array([0]), np.array([1])))
    assert len(blocks.blocks) == 2
    with pytest.raises(np.linalg.LinAlgError):
        condense.solve(matrix, blocks, np.ones((3, 1)))
    factor = DenseFactor(matrix, blocks=blocks)
    np.testing.assert_allclose(matrix @ factor.solve(np.ones((3, 1))), 1.0)
    np.testing.assert_allclose(matrix @ factor.inverse(), np.eye(3), atol=1e-12)


def test_a_singular_matrix_is_refused():
    matrix = np.diag([1.0, 2.0, 0.0])
    blocks = find_blocks(np.arange(3), np.arange(3), 3, (np.array([0, 1]),))
    for act in (lambda factor: factor.solve(np.ones((3, 1))), DenseFactor.inverse):
        with pytest.raises(np.linalg.LinAlgError):
            act(DenseFactor(matrix, blocks=blocks))


@pytest.mark.parametrize("sample", SAMPLES)
def test_samples_with_several_boards_fall_into_blocks(sample):
    """Their systems shrink to half at least, and the answer is that of the whole."""
    network = build_network(load_document(f"sample_boards/{sample}.yaml").cases()[0])
    entries = network.entries
    assert entries.size >= CONDENSED_FROM
    assert entries.blocks is not None
    assert 2 * len(entries.blocks.rest) <= entries.size
    rise = network.full_rise(np.linspace(5.0, 30.0, entries.size)[:, None])
    values = network.derivatives(rise)[:, 0]
    right = np.random.default_rng(1).normal(size=(entries.size, 4))
    condensed, plain = network.factor(values, 0.1), DenseFactor(entries.dense(values), 0.1)
    for name in ("solve", "solve_transposed"):
        expected = getattr(plain, name)(right)
        found = getattr(condensed, name)(right)
        np.testing.assert_allclose(found, expected, rtol=1e-8, atol=1e-9 * np.abs(expected).max())
