"""Collects nodes and links while the small builders run, then makes the network of them."""

from dataclasses import dataclass, field
from typing import Any

import numpy as np

from enclosure_check.network.links import (
    BodyFilm,
    BoxFilm,
    Conduction,
    LinkKind,
    LinkLabel,
    PlateFilm,
    Radiation,
)
from enclosure_check.network.network import Network, Places, Sources
from enclosure_check.physics.box import BoxGeometry

_Row = tuple[int, int, LinkLabel, tuple[float, ...]]


@dataclass(frozen=True)
class PlaneFace:
    """Shape and attitude of a plane face, as its film law needs them.

    ``fall_length`` along gravity [m], ``area_perimeter_length`` area over perimeter [m],
    ``up_cosine`` of the normal that points into the air.
    """

    fall_length: float
    area_perimeter_length: float
    up_cosine: float


@dataclass
class NetworkBuilder:
    """Nodes and links being collected; temperatures in kelvin, all else in SI."""

    reference_k: float
    pressure_pa: float
    _labels: list[str] = field(default_factory=list)
    _fixed_k: list[float | None] = field(default_factory=list)
    _conduction: list[_Row] = field(default_factory=list)
    _radiation: list[_Row] = field(default_factory=list)
    _plates: list[_Row] = field(default_factory=list)
    _bodies: list[_Row] = field(default_factory=list)
    _boxes: list[LinkKind] = field(default_factory=list)
    _sources: list[_Row] = field(default_factory=list)

    def node(self, label: str, fixed_k: float | None = None) -> int:
        """Add a node, its temperature given or to be found; gives its number."""
        self._labels.append(label)
        self._fixed_k.append(fixed_k)
        return len(self._labels) - 1

    def conduct(self, a: int, b: int, conductance: float, label: LinkLabel) -> None:
        """Join two nodes by a conductance [W/K]; none joins nothing."""
        if conductance > 0:
            self._conduction.append((a, b, label, (conductance,)))

    def behind(self, a: int, resistance: float, label: str, link: LinkLabel) -> int:
        """Give the node behind a resistance [K/W]: a new one, or ``a`` itself without any."""
        if resistance <= 0:
            return a
        node = self.node(label)
        self.conduct(a, node, 1.0 / resistance, link)
        return node

    def radiate(
        self,
        a: int,
        b: int,
        area: float,
        exchange_area: float,
        emissivity: float,
        label: LinkLabel,
        share: float = 1.0,
    ) -> None:
        """Join two nodes by radiation; areas [m2]."""
        if area > 0 and share > 0:
            self._radiation.append((a, b, label, (area, exchange_area, share, emissivity)))

    def plate_film(self, a: int, air: int, area: float, face: PlaneFace, label: LinkLabel) -> None:
        """Join a plane face to air; ``area`` [m2] may be less or more than the face's own."""
        if area > 0:
            row = (area, 1.0, face.fall_length, face.area_perimeter_length, face.up_cosine)
            self._plates.append((a, air, label, row))

    def body_film(
        self,
        a: int,
        air: int,
        area: float,
        body_area: float,
        gravity_function: float,
        label: LinkLabel,
    ) -> None:
        """Join a small body to air; areas [m2]."""
        if area > 0:
            self._bodies.append((a, air, label, (area, 1.0, body_area, gravity_function)))

    def box_film(
        self, faces: list[int], air: int, geometry: BoxGeometry, labels: list[LinkLabel]
    ) -> None:
        """Join the six outer faces of a box to the air around it."""
        self._boxes.append(
            BoxFilm(
                a=np.array(faces, dtype=np.intp),
                b=np.full(6, air, dtype=np.intp),
                labels=tuple(labels),
                geometry=geometry,
                factor=np.ones((6, 1)),
                pressure_pa=self.pressure_pa,
            )
        )

    def heat(
        self,
        node: int,
        power: float,
        label: LinkLabel,
        stated_at_k: float = 298.15,
        slope: float = 0.0,
        doublings: float = 0.0,
    ) -> None:
        """Put heat [W] into a node, growing with its temperature if so said [1/K]."""
        if power != 0:
            self._sources.append((node, node, label, (power, stated_at_k, slope, doublings)))

    def finish(self, places: Places) -> Network:
        """Make the network."""
        in_air: dict[str, Any] = {"pressure_pa": self.pressure_pa}
        kinds: list[LinkKind] = [
            kind(**_columns(rows, kind.PARAMETERS), **more)
            for kind, rows, more in (
                (Conduction, self._conduction, {}),
                (Radiation, self._radiation, {}),
                (PlateFilm, self._plates, in_air),
                (BodyFilm, self._bodies, in_air),
            )
            if rows
        ]
        kinds += self._boxes
        sources = _columns(self._sources, ("power", "stated_at_k", "slope", "doublings"))
        sources["node"] = sources.pop("a")
        del sources["b"]
        fixed = np.array([value is not None for value in self._fixed_k])
        rise = [0.0 if value is None else value - self.reference_k for value in self._fixed_k]
        return Network(
            node_labels=tuple(self._labels),
            reference_k=np.array([self.reference_k]),
            fixed=fixed,
            fixed_rise=np.array(rise)[:, None],
            kinds=tuple(kinds),
            sources=Sources(**sources),
            places=places,
        )


def _columns(rows: list[_Row], names: tuple[str, ...]) -> dict[str, Any]:
    """Turn rows into columns by name: ends, labels, and one (m, 1) array per value."""
    values = np.array([row[3] for row in rows], dtype=np.float64).reshape(len(rows), len(names))
    return {
        "a": np.array([row[0] for row in rows], dtype=np.intp),
        "b": np.array([row[1] for row in rows], dtype=np.intp),
        "labels": tuple(row[2] for row in rows),
        **{name: values[:, index : index + 1] for index, name in enumerate(names)},
    }
