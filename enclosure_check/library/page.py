"""The page of the documentation that lists every shipped row."""

import sys
from collections.abc import Iterable, Sequence

from enclosure_check.library.opening_rows import (
    Mesh,
    load_filters,
    load_louvres,
    load_screens,
)
from enclosure_check.library.rows import (
    CAPACITY_BASIS,
    Finish,
    Material,
    load_finishes,
    load_materials,
)

_INTRODUCTION = f"""\
# Shipped materials, finishes, louvres, meshes and filters

This page is written by `python -m enclosure_check.library.page > docs/library.md`; edit
`enclosure_check/library/*.yaml` instead.

Every number of a material or finish is for about 300 K. A spread is a half-width at about 95 %: it
covers the range of the sources where they give one, else it is a judgement. The basis says how well
a number is founded:

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
_LOUVRE_HEAD = ("name", "loss coefficient", "spread [±]", "basis", "source")
_MESH_HEAD = ("name", "wire [mm]", "aperture [mm]", "open [%]", "basis", "source")
_FILTER_HEAD = ("name", "loss per velocity [Pa s/m]", "spread [± %]", "basis", "source")
_OPENINGS = """\
## Openings

Loss coefficients of louvres are those of inlet and outlet together, on the velocity in the free
area, at high Reynolds number. What holes, slots, meshes and perforated areas lose follows from
their sizes ([method](method.md#openings)). Filters are clean; one that is due for a change loses
about twice as much (common practice, no source).
"""


def library_page() -> str:
    """Write the page about the shipped library.

    Returns
    -------
    str
        Markdown with one table of each kind of row, ending in a line feed.
    """
    materials = _table(_MATERIAL_HEAD, map(_material_cells, load_materials().values()))
    finishes = _table(_FINISH_HEAD, map(_finish_cells, load_finishes().values()))
    louvres = _table(
        _LOUVRE_HEAD,
        (
            (f"`{row.name}`", f"{row.loss:g}", f"{row.loss_spread:g}", row.basis, row.source)
            for row in load_louvres().values()
        ),
    )
    meshes = _table(_MESH_HEAD, map(_mesh_cells, load_screens().values()))
    filters = _table(
        _FILTER_HEAD,
        (
            (
                f"`{row.name}`",
                f"{row.resistance_pa_s_per_m:g}",
                f"{row.spread_pct:g}",
                row.basis,
                row.source,
            )
            for row in load_filters().values()
        ),
    )
    return (
        f"{_INTRODUCTION}\n## Materials\n\n{materials}\n\n## Finishes\n\n{finishes}\n\n"
        f"{_OPENINGS}\n### Louvres\n\n{louvres}\n\n### Meshes\n\n{meshes}\n\n"
        f"### Filters\n\n{filters}\n"
    )


def _mesh_cells(row: Mesh) -> tuple[str, ...]:
    """Write one mesh as the cells of a table row."""
    share = (row.aperture_mm / (row.aperture_mm + row.wire_mm)) ** 2
    return (
        f"`{row.name}`",
        f"{row.wire_mm:g}",
        f"{row.aperture_mm:g}",
        f"{100 * share:.0f}",
        row.basis,
        row.source,
    )


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
