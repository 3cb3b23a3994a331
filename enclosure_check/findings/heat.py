"""Where the heat leaves: wall by wall, the balance of the whole box, and the inside air."""

from enclosure_check.findings.confidence import Bands
from enclosure_check.findings.position import position_of
from enclosure_check.findings.results import (
    AirFinding,
    AirLayer,
    HeatBalance,
    RangeFinding,
    Regime,
    WallFinding,
    judge,
)
from enclosure_check.findings.solved import Solved
from enclosure_check.network.units import millimetres


def wall_findings(
    solved: Solved, ranges: tuple[RangeFinding, ...] = (), bands: Bands | None = None
) -> tuple[WallFinding, ...]:
    """Give the six walls; what the wind does there is found in the ``ranges`` of its law."""
    regimes = {row.surface: row.regime for row in ranges}
    return tuple(
        _wall(solved, bands, name, regimes.get(f"wall {name} outside in wind"))
        for name in solved.case.walls
    )


def hottest_cell(solved: Solved, wall: str) -> int:
    """Give the node of the hottest cell of a wall's outside."""
    cells = solved.network.places.wall_outside[wall].cells.ravel()
    return int(cells[solved.temperature_c[cells].argmax()])


def _wall(solved: Solved, bands: Bands | None, name: str, regime: Regime | None) -> WallFinding:
    wall = next(wall for key, wall in solved.case.walls.items() if key == name)
    case, places, owner = solved.case, solved.network.places, f"wall:{name}"
    nodes = (
        places.wall_outside[name].mean,
        hottest_cell(solved, name),
        places.wall_inside[name].mean,
    )
    outside, hottest, inside = (solved.at(node) for node in nodes)
    band = [None if bands is None else bands.band_k(node) for node in nodes]
    touch = None if wall.touch_max_c is None else wall.touch_max_c - hottest
    return WallFinding(
        name=name,
        mounting=wall.mounting.kind,
        outside_c=outside,
        outside_band_k=band[0],
        outside_max_c=hottest,
        outside_max_band_k=band[1],
        inside_c=inside,
        inside_band_k=band[2],
        convection_w=solved.flow(owner, "convection_outside"),
        radiation_w=solved.flow(owner, "radiation_outside"),
        sun_w=solved.put_in(owner, "sun"),
        openings_w=sum(
            (solved.flow(f"opening:{name}/{each.name}", "openings") for each in wall.openings), 0.0
        ),
        mounting_w=solved.flow(owner, "mounting"),
        cables_w=solved.flow(owner, "cable"),
        touch_max_c=wall.touch_max_c,
        touch_margin_k=touch,
        touch_verdict=(
            None
            if touch is None
            else judge(touch, case.margin_k or 0.0, band[1], case.confidence_pct)
        ),
        wind_regime=regime,
        position=position_of(solved.case.positions.walls, name),
    )


def heat_balance(solved: Solved, walls: tuple[WallFinding, ...]) -> HeatBalance:
    """Give heat in against heat out."""
    generated, sun = solved.total_put_in("power"), solved.total_put_in("sun")
    convection = sum(wall.convection_w for wall in walls)
    radiation = sum(wall.radiation_w for wall in walls)
    openings = sum(wall.openings_w for wall in walls)
    mounting = sum(wall.mounting_w for wall in walls)
    cables = sum(wall.cables_w for wall in walls)
    return HeatBalance(
        generated,
        sun,
        convection,
        radiation,
        openings,
        mounting,
        cables,
        generated + sun - convection - radiation - openings - mounting - cables,
    )


def air_finding(solved: Solved, bands: Bands | None = None) -> AirFinding:
    """Give the inside air: its mean, and its nodes from the bottom up."""
    places = solved.network.places

    def band(node: int) -> float | None:
        return None if bands is None else bands.band_k(node)

    profile = tuple(
        AirLayer(millimetres(float(height)), solved.at(int(node)), band(int(node)))
        for height, node in zip(places.air_heights, places.air_nodes, strict=True)
    )
    top = profile[-1]
    return AirFinding(solved.at(places.air), band(places.air), top.air_c, top.band_k, profile)
