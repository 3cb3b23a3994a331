"""The range audit: every film law where it was used, against the range it was published for."""

import numpy as np

from enclosure_check.description.names import WALL_NAMES
from enclosure_check.findings.results import RangeFinding, Regime
from enclosure_check.findings.solved import Solved
from enclosure_check.network.films import BoxFilm, FilmAudit
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.correlation import CORRELATIONS, PLATE_LAWS

_LAWS = (*PLATE_LAWS, "yovanovich_cuboid")
# A surface this close to its air moves no heat to speak of; its law's range does not matter. [K]
_NO_RISE_K = 0.1


def range_findings(solved: Solved) -> tuple[RangeFinding, ...]:
    """Give every film of the network with its groups and whether its law holds there."""
    rows: list[RangeFinding] = []
    rise, reference = solved.solution.rise, solved.network.reference_k
    for kind in solved.network.kinds:
        if isinstance(kind, InsideAir):
            audit = kind.audit(rise, reference)
            rows += _films(audit, kind.pressure_pa, dict(enumerate(kind.surfaces.names)))
        elif isinstance(kind, BoxFilm):
            audit = kind.audit(rise[kind.nodes], reference)
            faces = enumerate(zip(WALL_NAMES, kind.geometry.open_faces, strict=True))
            names = {k: f"wall {wall} outside" for k, (wall, counts) in faces if counts}
            outside = _films(audit, kind.pressure_pa, names)
            if names:
                outside.append(_whole_box(kind, audit))
            if solved.case.surroundings.wind_m_per_s > 0:
                from enclosure_check.findings.wind import ranges_in_wind

                outside = ranges_in_wind(kind, rise[kind.nodes], reference, names, outside)
            rows += outside
    return tuple(rows)


def _films(audit: FilmAudit, pressure_pa: float, names: dict[int, str]) -> list[RangeFinding]:
    """Give the films of the surfaces named."""
    prandtl = air(audit.film_temperature, pressure_pa).prandtl
    return [
        range_finding(
            surface=name,
            key=_LAWS[int(audit.law[at])],
            length=float(audit.length[at]),
            rise=float(audit.rise[at]),
            rayleigh=float(audit.rayleigh[at]),
            prandtl=float(prandtl[at]),
            nusselt=float(audit.nusselt[at]),
            film=float(audit.coefficient[at]),
        )
        for index, name in names.items()
        for at in ((index, 0),)
    ]


def _whole_box(kind: BoxFilm, audit: FilmAudit) -> RangeFinding:
    """Give the law the box's films are scaled to, at the area-mean rise."""
    box = kind.geometry
    share = box.open_share[:, None]
    rise = float(np.sum(share * np.abs(audit.rise)))
    properties = air(float(np.sum(share * audit.film_temperature)), kind.pressure_pa)
    length = float(np.sqrt(box.body_area))
    heat = float(np.sum(box.open_area[:, None] * audit.coefficient * np.abs(audit.rise)))
    film = heat / max(float(box.open_area.sum()) * rise, 1e-300)
    return range_finding(
        surface="whole box outside",
        key="box_shelter",
        length=length,
        rise=rise,
        rayleigh=float(rayleigh_number(rise, length, properties)),
        prandtl=float(properties.prandtl),
        nusselt=film * length / float(properties.conductivity),
        film=film,
    )


def range_finding(
    surface: str,
    key: str,
    length: float,
    rise: float,
    rayleigh: float,
    prandtl: float,
    nusselt: float,
    film: float,
    reynolds: float | None = None,
    regime: Regime | None = None,
) -> RangeFinding:
    """Give a film with its groups, those of the wind where it is one in wind."""
    law = CORRELATIONS[key]
    outside_by = 1.0
    number = rayleigh if reynolds is None else reynolds
    # Nor does the law of the wind matter where it adds next to nothing.
    if abs(rise) > _NO_RISE_K and regime != "natural":
        if number < law.valid_from:
            outside_by = number / law.valid_from
        elif number > law.valid_to:
            outside_by = number / law.valid_to
    return RangeFinding(
        surface=surface,
        correlation=key,
        length_mm=length * 1e3,
        rise_k=rise,
        grashof=rayleigh / prandtl,
        prandtl=prandtl,
        rayleigh=rayleigh,
        nusselt=nusselt,
        film_w_per_m2k=film,
        valid_from=law.valid_from,
        valid_to=law.valid_to if np.isfinite(law.valid_to) else None,
        inside_range=outside_by == 1.0,
        outside_by=outside_by,
        range_of="rayleigh" if reynolds is None else "reynolds",
        reynolds=reynolds,
        gr_over_re2=None if reynolds is None else rayleigh / prandtl / reynolds**2,
        regime=regime,
    )


def range_warnings(ranges: tuple[RangeFinding, ...]) -> list[str]:
    """Give one line per law used outside its range: on how many surfaces, and the furthest one."""
    by_law: dict[str, list[RangeFinding]] = {}
    for row in ranges:
        if not row.inside_range:
            by_law.setdefault(row.correlation, []).append(row)
    lines = []
    for key, rows in by_law.items():
        law = CORRELATIONS[key]
        worst = max(rows, key=lambda row: max(row.outside_by, 1 / max(row.outside_by, 1e-300)))
        group = "Ra" if worst.reynolds is None else "Re"
        number = worst.rayleigh if worst.reynolds is None else worst.reynolds
        where = f"{worst.surface} ({group} {number:.2g})"
        if len(rows) > 1:
            where = f"{len(rows)} surfaces, furthest {where}"
        lines.append(
            f"{law.name}: outside its range ({group} {law.valid_from:.3g} to "
            f"{law.valid_to:.3g}) on {where}"
        )
    return lines
