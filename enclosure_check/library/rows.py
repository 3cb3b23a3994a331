"""Rows of the shipped tables: what a material and a finish are, and how they are loaded.

The tables are part of the package and are checked row by row in the tests, so that nothing is
validated again at run time: loading is one parse of each file, kept for the life of the process.
"""

from collections.abc import Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType
from typing import Any, Final, Literal, get_args

import yaml

from enclosure_check.records import dataclass

TouchClass = Literal["metal", "glass", "plastic", "wood"]
Basis = Literal["published", "from memory", "common practice, no source"]

TOUCH_CLASSES: Final[tuple[TouchClass, ...]] = get_args(TouchClass)
BASES: Final[tuple[Basis, ...]] = get_args(Basis)

CAPACITY_BASIS: Final[Basis] = "from memory"
"""Basis of the density and the heat capacity of every material."""

_FOLDER = Path(__file__).parent
_LOADER: Any = getattr(yaml, "CSafeLoader", yaml.SafeLoader)


@dataclass(frozen=True)
class Material:
    """One solid, at about 300 K.

    Attributes
    ----------
    name : str
        Generic trade name, the key of the row.
    conductivity_w_per_mk : float
        Thermal conductivity [W/(m K)]; of a laminate, the one through its thickness.
    in_plane_conductivity_w_per_mk : float
        Thermal conductivity along the sheet [W/(m K)]; equals the other one unless the row
        states it.
    conductivity_spread_pct : float
        Half-width at about 95 % [% of the conductivity], the same for both directions.
    density_kg_per_m3 : float
        Density [kg/m³]; basis: `CAPACITY_BASIS`.
    heat_capacity_j_per_kgk : float
        Specific heat capacity [J/(kg K)]; basis: `CAPACITY_BASIS`.
    touch_class : {"metal", "glass", "plastic", "wood"}
        Class of the bare surface in touch-temperature limits.
    basis : {"published", "from memory", "common practice, no source"}
        Basis of the conductivity.
    source : str
        Where the conductivity comes from.
    """

    name: str
    conductivity_w_per_mk: float
    in_plane_conductivity_w_per_mk: float
    conductivity_spread_pct: float
    density_kg_per_m3: float
    heat_capacity_j_per_kgk: float
    touch_class: TouchClass
    basis: Basis
    source: str


@dataclass(frozen=True)
class Finish:
    """One state of a surface, at about 300 K.

    Attributes
    ----------
    name : str
        Trade name, the key of the row.
    emissivity : float
        Total hemispherical emissivity in the long-wave infrared [-].
    emissivity_spread : float
        Half-width at about 95 %, absolute [-].
    solar_absorptivity : float
        Share of the incident sunlight that is absorbed [-].
    solar_absorptivity_spread : float
        Half-width at about 95 %, absolute [-].
    basis, solar_basis : {"published", "from memory", "common practice, no source"}
        Basis of the emissivity, and of the solar absorptivity.
    source : str
        Where the two numbers come from.
    """

    name: str
    emissivity: float
    emissivity_spread: float
    solar_absorptivity: float
    solar_absorptivity_spread: float
    basis: Basis
    solar_basis: Basis
    source: str


@cache
def load_materials() -> Mapping[str, Material]:
    """Read the shipped materials, once per process.

    Returns
    -------
    Mapping[str, Material]
        Read-only mapping by name, in the order of the file; the same object at every call.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `Material` does not know.
    """
    return MappingProxyType(
        {name: _material(name, row) for name, row in read_table("materials.yaml").items()}
    )


@cache
def load_finishes() -> Mapping[str, Finish]:
    """Read the shipped surface finishes, once per process.

    Returns
    -------
    Mapping[str, Finish]
        Read-only mapping by name, in the order of the file; the same object at every call.

    Raises
    ------
    TypeError
        If a row lacks a key or has one that `Finish` does not know.
    """
    return MappingProxyType(
        {name: Finish(name=name, **row) for name, row in read_table("finishes.yaml").items()}
    )


def _material(name: str, row: dict[str, Any]) -> Material:
    """Build a material; a row without its own in-plane conductivity is isotropic."""
    in_plane = row.pop("in_plane_conductivity_w_per_mk", row.get("conductivity_w_per_mk"))
    return Material(name=name, in_plane_conductivity_w_per_mk=in_plane, **row)


def read_table(file_name: str) -> dict[str, dict[str, Any]]:
    """Parse one table, rows of single values; numbers become floats, text stays text.

    The parser's events are taken as they come: the general loader makes objects of them that
    nobody needs, in three times the time.
    """
    text = (_FOLDER / file_name).read_text(encoding="utf-8")
    table: dict[str, dict[str, Any]] = {}
    row: dict[str, Any] = {}
    key: str | None = None
    for event in yaml.parse(text, Loader=_LOADER):
        if isinstance(event, yaml.MappingStartEvent) and key is not None:
            row = table[key] = {}
            key = None
        elif isinstance(event, yaml.ScalarEvent):
            if key is None:
                key = event.value
            else:
                row[key] = event.value if event.style else _value(event.value)
                key = None
    return table


def _value(text: str) -> float | str:
    """Turn a number into a float and leave everything else as it is."""
    try:
        return float(text)
    except ValueError:
        return text
