"""Where the heat leaves: wall by wall, the balance of the whole box, and the inside air."""

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


def wall_findings(solved: Solved, ranges: tuple[RangeFinding, ...] = ()) -> tuple[WallFinding, ...]:
    """Give the six walls; what the wind does there is found in the ``ranges`` of its law."""
    regimes = {row.surface: row.regime for row in ranges}
    return tuple(
        _wall(solved, name, regimes.get(f"wall {name} outside in wind"))
        for name in solved.case.walls
    )


def _wall(solved: Solved, name: str, regime: Regime | None) -> WallFinding:
    wall = next(wall for key, wall in solved.case.walls.items() if key == name)
    places, owner = solved.network.places, f"wall:{name}"
    outside = solved.at(places.wall_outside[name].mean)
    hottest = float(solved.temperature_c[places.wall_outside[name].cells].max())
    touch = None if wall.touch_max_c is None else wall.touch_max_c - hottest
    return WallFinding(
        name=name,
        mounting=wall.mounting.kind,
        outside_c=outside,
        outside_max_c=hottest,
        inside_c=solved.at(places.wall_inside[name].mean),
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
        touch_verdict=None if touch is None else judge(touch, solved.case.margin_k or 0.0),
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


def air_finding(solved: Solved) -> AirFinding:
    """Give the inside air: its mean, and its nodes from the bottom up."""
    places = solved.network.places
    profile = tuple(
        AirLayer(millimetres(float(height)), solved.at(int(node)))
        for height, node in zip(places.air_heights, places.air_nodes, strict=True)
    )
    return AirFinding(solved.at(places.air), profile[-1].air_c, profile)
