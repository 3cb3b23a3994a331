"""The page of the documentation that lists every shipped row."""

import sys
from collections.abc import Iterable, Sequence

from enclosure_check.library.rows import (
    CAPACITY_BASIS,
    Finish,
    Material,
    load_finishes,
    load_materials,
)

_INTRODUCTION = f"""\
# Shipped materials and finishes

This page is written by `python -m enclosure_check.library.page > docs/library.md`; edit
`enclosure_check/library/*.yaml` instead.

Every number is for about 300 K. A spread is a half-width at about 95 %: it covers the range of
the sources where they give one, else it is a judgement. The basis says how well a number is
founded:

- *published*: read in the source named in the row. Where a row names only a published table, or
  textbook or handbook tables, their titles were not recorded;
- *from memory*: a figure recalled and not looked up;
- *common practice, no source*: what the trade assumes.

The basis of a material is that of its conductivity. Basis of every density and heat capacity:
{CAPACITY_BASIS}. A number measured on the part itself, or from its data sheet, is always better.
"""

_MATERIAL_HEAD = (
    "name",
    "conductivity [W/(m K)]",
    "spread [± %]",
    "density [kg/m³]",
    "heat capacity [J/(kg K)]",
    "touch class",
    "basis",
    "source",
)
_FINISH_HEAD = (
    "name",
    "emissivity",
    "spread [±]",
    "basis",
    "solar absorptivity",
    "spread [±]",
    "basis",
    "source",
)


def library_page() -> str:
    """Write the page about the shipped library.

    Returns
    -------
    str
        Markdown with one table of materials and one of finishes, ending in a line feed.
    """
    materials = _table(_MATERIAL_HEAD, map(_material_cells, load_materials().values()))
    finishes = _table(_FINISH_HEAD, map(_finish_cells, load_finishes().values()))
    return f"{_INTRODUCTION}\n## Materials\n\n{materials}\n\n## Finishes\n\n{finishes}\n"


def _material_cells(material: Material) -> tuple[str, ...]:
    """Write one material as the cells of a table row."""
    return (
        f"`{material.name}`",
        _conductivity(material),
        f"{material.conductivity_spread_pct:g}",
        f"{material.density_kg_per_m3:g}",
        f"{material.heat_capacity_j_per_kgk:g}",
        material.touch_class,
        material.basis,
        material.source,
    )


def _conductivity(material: Material) -> str:
    """Write one conductivity [W/(m K)], or two where the directions differ."""
    through = f"{material.conductivity_w_per_mk:g}"
    in_plane = f"{material.in_plane_conductivity_w_per_mk:g}"
    return through if in_plane == through else f"{through} through, {in_plane} in plane"


def _finish_cells(finish: Finish) -> tuple[str, ...]:
    """Write one finish as the cells of a table row."""
    return (
        f"`{finish.name}`",
        f"{finish.emissivity:g}",
        f"{finish.emissivity_spread:g}",
        finish.basis,
        f"{finish.solar_absorptivity:g}",
        f"{finish.solar_absorptivity_spread:g}",
        finish.solar_basis,
        finish.source,
    )


def _table(head: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    """Lay out a Markdown table without a final line feed."""
    lines = [head, ["---"] * len(head), *rows]
    return "\n".join(f"| {' | '.join(cells)} |" for cells in lines)


if __name__ == "__main__":
    sys.stdout.write(library_page())
