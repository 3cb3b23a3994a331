"""What convects inside the box, as the builders hand it over to the air."""

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.builder import PlaneFace
from enclosure_check.network.links import FloatArray, IntArray
from enclosure_check.records import dataclass


@dataclass(frozen=True, eq=False)
class Film:
    """A surface that convects inside the box, as the builders hand it over."""

    node: int
    name: str
    label: int
    cells: IntArray
    centres: FloatArray
    """Of its cells in the box frame [m], shape (cells, 3)."""
    area: FloatArray
    """What convects outside any gap [m2], shape (cells,)."""
    low: Vector
    high: Vector
    face: PlaneFace
    warm: float = 1.0
    cold: float = 1.0
    edges: tuple[float, float] = (np.inf, np.inf)
    stratified: float = 0.0
    body: tuple[float, float] | None = None
    stream_length: float | None = None
    """Length of its stream [m], that of the face when left out."""


@dataclass(frozen=True)
class Top:
    """The top of a part, which looks at a face across the air."""

    surface: int
    node: int
    area: float
    axis: int
    sign: int
    at: float
    low: Vector
    size: Vector
    """Of the part: its lowest corner and its extent [m]."""
    length: float

    @property
    def centre(self) -> Vector:
        """Middle of the part [m]."""
        x, y, z = (start + extent / 2 for start, extent in zip(self.low, self.size, strict=True))
        return x, y, z
