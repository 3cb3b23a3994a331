"""Rows of the shipped tables for openings: louvres, woven meshes and filter mats."""

from collections.abc import Callable, Mapping
from functools import cache
from types import MappingProxyType
from typing import TypeVar

from enclosure_check.library.rows import Basis, read_table
from enclosure_check.records import dataclass

Shipped = TypeVar("Shipped")


@dataclass(frozen=True)
class Louvre:
    """What an area with louvres loses."""

    name: str
    loss: float
    """Loss coefficient of inlet and outlet together on the velocity in the free area [-]."""
    loss_spread: float
    """Half-width at about 95 %, absolute [-]."""
    basis: Basis
    source: str


@dataclass(frozen=True)
class Mesh:
    """A woven mesh with square apertures."""

    name: str
    wire_mm: float
    """Diameter of the wire [mm]."""
    aperture_mm: float
    """Clear width between two wires [mm]."""
    basis: Basis
    source: str


@dataclass(frozen=True)
class FilterMat:
    """A clean filter mat."""

    name: str
    resistance_pa_s_per_m: float
    """Loss of pressure per velocity in front of it [Pa s/m]."""
    spread_pct: float
    """Half-width at about 95 % [% of the resistance]."""
    basis: Basis
    source: str


@cache
def load_louvres() -> Mapping[str, Louvre]:
    """Read the shipped louvres, once per process; read-only, by name.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `Louvre` does not know.
    """
    return _shipped(Louvre, "louvres.yaml")


@cache
def load_screens() -> Mapping[str, Mesh]:
    """Read the shipped meshes, once per process; read-only, by name.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `Mesh` does not know.
    """
    return _shipped(Mesh, "screens.yaml")


@cache
def load_filters() -> Mapping[str, FilterMat]:
    """Read the shipped filter mats, once per process; read-only, by name.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `FilterMat` does not know.
    """
    return _shipped(FilterMat, "filters.yaml")


def _shipped(kind: Callable[..., Shipped], file: str) -> Mapping[str, Shipped]:
    """Make the rows of a shipped table, read-only, by name."""
    rows = {name: kind(name=name, **row) for name, row in read_table(file).items()}
    return MappingProxyType(rows)
