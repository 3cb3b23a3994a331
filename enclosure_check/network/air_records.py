"""What the laws of the inside air need of surfaces and of gaps between them, as flat arrays."""

from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass


@dataclass(frozen=True, eq=False)
class Surfaces:
    """Films: what their laws need; s surfaces, n air nodes, k heights sampled on each."""

    node: IntArray
    """Node of the surface's mean temperature, shape (s,)."""
    names: tuple[str, ...]
    """What a reader calls each of them."""
    fall_length: FloatArray
    """[m], shape (s, 1), as all the following."""
    area_perimeter_length: FloatArray
    up_cosine: FloatArray
    stratified: FloatArray
    """1 where the film is strengthened in stratified air, 0 for parts."""
    warm_factor: FloatArray
    """Share of its law that a warm face keeps: the shelter of a board by its own sides."""
    cold_factor: FloatArray
    edge_a: FloatArray
    """Edges in corners [m], infinite without."""
    edge_b: FloatArray
    body: IntArray
    """Surfaces that follow the cuboid law, shape (b,)."""
    body_area: FloatArray
    """[m2], shape (b, 1)."""
    gravity_function: FloatArray
    """[-], shape (b, 1)."""
    samples: FloatArray
    """Shares of the air nodes in the air at sampled heights, shape (s, k, n)."""
    over_height: FloatArray
    """Shares of the air at the top less those at the bottom, shape (s, n)."""
    decay_up: FloatArray
    """What is left of the excess of its rising stream at each air node, shape (s, n)."""
    decay_down: FloatArray
    """The same of its falling stream."""


@dataclass(frozen=True, eq=False)
class Pairs:
    """Facing faces, p of them: the first and the second surface, and the air between."""

    first: IntArray
    second: IntArray
    width: FloatArray
    """[m], shape (p, 1), as all the following."""
    length: FloatArray
    gravity: FloatArray
    up_cosine: FloatArray
    """Of the first face."""
    closed: FloatArray
    """1 with closed edges, 0 with open ones."""
    air: FloatArray
    """Shares of the air nodes in the air around the gap, shape (p, n)."""
