"""Shipped data: materials and surface finishes, each row with its spread and its source."""

from enclosure_check.library.rows import (
    BASES,
    CAPACITY_BASIS,
    TOUCH_CLASSES,
    Basis,
    Finish,
    Material,
    TouchClass,
    load_finishes,
    load_materials,
)

__all__ = [
    "BASES",
    "CAPACITY_BASIS",
    "TOUCH_CLASSES",
    "Basis",
    "Finish",
    "Material",
    "TouchClass",
    "load_finishes",
    "load_materials",
]
