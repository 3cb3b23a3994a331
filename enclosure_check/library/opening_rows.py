"""Rows of the shipped tables for openings: louvres, woven meshes and filter mats."""

from collections.abc import Mapping
from functools import cache
from types import MappingProxyType

from enclosure_check.library.rows import Basis, read_table
from enclosure_check.records import dataclass


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
    return MappingProxyType(
        {name: Louvre(name=name, **row) for name, row in read_table("louvres.yaml").items()}
    )


@cache
def load_screens() -> Mapping[str, Mesh]:
    """Read the shipped meshes, once per process; read-only, by name.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `Mesh` does not know.
    """
    return MappingProxyType(
        {name: Mesh(name=name, **row) for name, row in read_table("screens.yaml").items()}
    )


@cache
def load_filters() -> Mapping[str, FilterMat]:
    """Read the shipped filter mats, once per process; read-only, by name.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `FilterMat` does not know.
    """
    return MappingProxyType(
        {name: FilterMat(name=name, **row) for name, row in read_table("filters.yaml").items()}
    )
