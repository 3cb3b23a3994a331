"""The air inside as one kind of link: what its films, gaps and streams do, alone and in a box."""

from dataclasses import replace

import numpy as np
import pytest
from support.cases import COARSE, board, box, case_of, network_of, part
from support.inside import held, inside_air, roles, site_of

from enclosure_check.network.air import AIR_NODES
from enclosure_check.network.build import build_network
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.network import Network
from enclosure_check.network.site import AIR_SHARES
from enclosure_check.physics import cavity
from enclosure_check.physics.air import air
from enclosure_check.physics.plates import inclined_plate
from enclosure_check.solve.steady import Solution, solve_steady

REFERENCE_K = np.array([298.15])
WALLS = ("left", "right", "front", "back", "bottom", "top")
# Nothing radiates inside, so that view factors counted with rays do not come in.
MIRRORS = {
    "finishes": {"mirror": {"emissivity": 0.0}},
    "defaults": {"wall": {"finish_inside": "mirror"}, "board": {"finish": "mirror"}},
}


def boxed(**boards):
    return box(boards=boards, **MIRRORS)


def powered(power=12.0, **changes):
    return boxed(main=board(thickness_mm=1.6, other_power_w=power, **changes))


def solved(network: Network) -> Solution:
    solution = solve_steady(network)
    assert solution.converged
    return solution


def rises(network: Network) -> np.ndarray:
    return solved(network).rise[:, 0]


def tilted(document, up) -> Network:
    case = case_of(document)
    length = float(np.linalg.norm(up))
    return build_network(replace(case, up=tuple(float(x) / length for x in up)), COARSE)


def pair_between(kind: InsideAir, one: str, other: str) -> tuple[int, bool]:
    """Number of the pair of two surfaces, and whether they come the other way round."""
    names = kind.surfaces.names
    for number, (a, b) in enumerate(zip(kind.pairs.first, kind.pairs.second, strict=True)):
        if {names[a], names[b]} == {one, other}:
            return number, names[a] == other
    raise AssertionError(f"no gap between {one} and {other}")


def crossing(kind: InsideAir, network: Network, rise: np.ndarray, pair: int) -> tuple[float, float]:
    """Heat straight across a gap, and what its two faces give to the air out of it [W]."""
    heat = kind.evaluate(rise[:, None], REFERENCE_K)[:, 0]
    e = len(kind.cell)
    films = heat[:e] + heat[e : 2 * e]
    inside = np.isin(kind.side, np.flatnonzero(kind.side_pair == pair))
    return float(heat[2 * e : 2 * e + len(kind.pair)][kind.pair == pair].sum()), float(
        np.abs(films[inside]).sum()
    )


# Gaps ------------------------------------------------------------------------------------------


@pytest.mark.parametrize("gap_mm", [0.1, 0.3, 1.0])
@pytest.mark.parametrize(
    ("plane", "wall"), [("back", "back"), ("bottom", "bottom"), ("left", "left")]
)
def test_narrow_gap_is_conduction_straight_across(gap_mm, plane, wall):
    size = {"length_mm": 80, "width_mm": 80}
    document = boxed(main=board(parallel_to=plane, from_walls_mm={wall: gap_mm}, **size))
    network = network_of(document, COARSE)
    kind, places = inside_air(network), network.places
    rise = np.zeros(network.size)
    for node in (*places.boards["main"].cells.ravel(), places.boards["main"].mean):
        rise[node] = 20.0
    pair, _ = pair_between(kind, f"board main, {wall} side", f"wall {wall} inside")
    across, out = crossing(kind, network, rise, pair)
    k = float(air(REFERENCE_K[0] + 10.0, kind.pressure_pa).conductivity)
    assert abs(across) == pytest.approx(k * 0.080 * 0.080 / (gap_mm * 1e-3) * 20.0, rel=1e-3)
    assert out < 1e-3 * abs(across)


def test_wide_gap_leaves_two_films():
    document = powered(from_walls_mm={"back": 500})
    document["box"] = {"width_mm": 1000, "height_mm": 1000, "depth_mm": 1000}
    network = network_of(document, COARSE)
    kind, rise = inside_air(network), np.zeros(network.size)
    plate = network.places.boards["main"]
    rise[plate.cells], rise[plate.mean] = 20.0, 20.0
    pair, _ = pair_between(kind, "board main, back side", "wall back inside")
    across, out = crossing(kind, network, rise, pair)
    surface = kind.surfaces.names.index("board main, back side")
    film = kind.audit(rise[:, None], REFERENCE_K).coefficient[surface, 0]
    assert out == pytest.approx(film * 0.120 * 0.100 * 20.0, rel=0.01)
    assert abs(across) < 0.01 * out


def test_gap_passes_from_one_limit_to_the_other_without_jumps():
    """Total heat of a warm board towards the wall behind it, 0.1 to 90 mm away, walls cold."""
    total, straight = [], []
    gaps = np.geomspace(0.1, 90, 60)
    for gap_mm in gaps:
        network = network_of(boxed(main=board(from_walls_mm={"back": float(gap_mm)})), COARSE)
        kind, rise = inside_air(network), np.zeros(network.size)
        plate = network.places.boards["main"]
        rise[plate.cells], rise[plate.mean] = 20.0, 20.0
        pair, _ = pair_between(kind, "board main, back side", "wall back inside")
        across, out = crossing(kind, network, rise, pair)
        total.append(abs(across) + out)
        straight.append(abs(across) / total[-1])
    steps = np.diff(np.log(total))
    # Never steeper than conduction, which goes as one over the width.
    assert (steps >= -1.001 * np.diff(np.log(gaps))).all()
    assert (steps <= 0.05).all()
    assert straight[0] > 0.999
    assert straight[-1] < 0.05
    assert (np.diff(straight) < 0.0).all()


# Conservation -----------------------------------------------------------------------------------


def busy():
    """Boards in two planes, parts on a board, on a wall and in the air."""
    document = box(
        boards={
            "main": board(thickness_mm=1.6, from_walls_mm={"back": 20}),
            "side": board(
                parallel_to="left", length_mm=50, width_mm=60, from_walls_mm={"left": 15}
            ),
        },
        parts={
            "U1": part(power_w=2.0, height_mm=9),
            "T1": {
                "place": "right",
                "at_mm": [50, 70],
                "length_mm": 30,
                "width_mm": 20,
                "height_mm": 15,
                "power_w": 2.0,
            },
        },
    )
    return document


def random_rises(network: Network, rng: np.random.Generator) -> np.ndarray:
    rise = rng.uniform(-25, 45, network.size)
    rise[network.places.air_nodes] = np.sort(rng.uniform(-10, 30, AIR_NODES)) + rng.uniform(
        -1, 1, AIR_NODES
    )
    return rise


@pytest.mark.parametrize("seed", range(5))
@pytest.mark.parametrize("up", [(0, 0, 1), (0, 0, -1), (1, 0, 0), (1, -2, 0.5)])
def test_every_watt_that_leaves_a_surface_arrives(seed, up):
    network = tilted(busy(), up)
    kind = inside_air(network)
    rise = random_rises(network, np.random.default_rng(seed))
    heat = kind.evaluate(rise[:, None], REFERENCE_K)[:, 0]
    net = np.zeros(network.size)
    np.subtract.at(net, kind.a, heat)
    np.add.at(net, kind.b, heat)
    air_nodes = network.places.air_nodes
    # What surfaces give away altogether is what the air takes up; means take part in nothing.
    surfaces = np.unique(np.concatenate((kind.cell, kind.cell_a, kind.cell_b)))
    assert not set(surfaces) & set(air_nodes)
    scale = np.abs(heat).sum()
    assert net[air_nodes].sum() == pytest.approx(-net[surfaces].sum(), abs=1e-12 * scale)
    others = np.setdiff1d(np.arange(network.size), np.concatenate((surfaces, air_nodes)))
    assert (net[others] == 0.0).all()
    # The two links of a film carry its whole heat, with the difference to the air at its height.
    e = len(kind.cell)
    film = (heat[:e] + heat[e : 2 * e]) / kind.area[:, 0]
    difference = rise[kind.cell] - kind.hat @ rise[air_nodes]
    assert (film * difference >= 0.0).all()
    near = np.isclose(kind.side_pair[kind.side], -1)
    own = kind.audit(rise[:, None], REFERENCE_K).coefficient[kind.side_surface[kind.side], 0]
    np.testing.assert_allclose(film[near], (own * difference)[near], rtol=1e-9)


@pytest.mark.parametrize("seed", range(4))
def test_streams_lift_no_more_than_they_pick_up(seed):
    network = network_of(busy(), COARSE)
    kind = inside_air(network)
    rise = random_rises(network, np.random.default_rng(seed))
    heat = kind.evaluate(rise[:, None], REFERENCE_K)[:, 0]
    e, q, n = len(kind.cell), len(kind.cell_a), AIR_NODES
    count = len(kind.surfaces.node)
    films = heat[:e] + heat[e : 2 * e]
    lifts = heat[2 * e + q : 2 * e + q + 2 * count * (n - 1)].reshape(2, count, n - 1)
    surface = kind.side_surface[kind.side]
    given = np.bincount(surface, np.maximum(films, 0.0), count)
    taken = np.bincount(surface, np.maximum(-films, 0.0), count)
    # A warm face lifts heat up; a cold one carries cold down, which is heat given up from below.
    assert (lifts >= 0.0).all()
    assert (lifts[0] <= given[:, None] + 1e-12).all()
    assert (lifts[1] <= taken[:, None] + 1e-12).all()
    assert lifts[0].max() > 0.1
    assert lifts[1].max() > 0.1
    # Labels tell them from films and from mixing.
    role = roles(network, kind)
    assert (role[2 * e + q : -(n - 1)] == "lift").all()
    assert (role[-(n - 1) :] == "mixing").all()
    assert not set(role[: 2 * e + q]) & {"lift", "mixing"}


# Rest -------------------------------------------------------------------------------------------


def test_even_temperatures_pass_nothing():
    network = network_of(busy(), COARSE)
    kind = inside_air(network)
    assert (kind.evaluate(np.zeros((network.size, 1)), REFERENCE_K) == 0.0).all()
    warm = kind.evaluate(np.full((network.size, 1), 17.0), REFERENCE_K)
    assert np.abs(warm).max() < 1e-12


@pytest.mark.parametrize("up", [(0, 0, 1), (1, 2, -1)])
def test_nothing_put_in_leaves_everything_at_rest(up):
    document = busy()
    for each in document["parts"].values():
        each["power_w"] = 0.0
    assert np.abs(rises(tilted(document, up))).max() < 1e-9


# Attitude ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("plane", ["back", "bottom"])
def test_symmetric_box_upside_down(plane):
    size = {"length_mm": 90, "width_mm": 80}
    document = powered(parallel_to=plane, **size)
    standing, turned = (tilted(document, (0, 0, sign)) for sign in (1, -1))
    one, other = rises(standing), rises(turned)
    a, b = standing.places, turned.places
    np.testing.assert_allclose(one[a.air_nodes], other[b.air_nodes], atol=1e-6)
    assert one[a.boards["main"].mean] == pytest.approx(other[b.boards["main"].mean], abs=1e-6)
    for wall, opposite in (("top", "bottom"), ("bottom", "top"), ("left", "left")):
        assert one[a.wall_inside[wall].mean] == pytest.approx(
            other[b.wall_inside[opposite].mean], abs=1e-6
        )
    np.testing.assert_allclose(a.air_heights, b.air_heights)


def test_tilt_changes_everything_continuously():
    document = powered(from_walls_mm={"back": 30})

    def at(degrees: float) -> np.ndarray:
        turn = np.radians(degrees)
        network = tilted(document, (0.0, np.sin(turn), np.cos(turn)))
        found = rises(network)
        return found[[network.places.boards["main"].mean, network.places.air]]

    degrees = np.linspace(0.0, 180.0, 31)
    found = np.array([at(each) for each in degrees])
    jumps = np.abs(np.diff(found, axis=0)).max(axis=1)
    # The steepest of the steps falls apart into smaller ones: it is a slope and not a jump.
    worst = int(jumps.argmax())
    finer = np.array([at(each) for each in np.linspace(*degrees[worst : worst + 2], 13)])
    assert np.abs(np.diff(finer, axis=0)).max() < 0.3 * jumps[worst]
    assert jumps[worst] < 0.15 * found[:, 0].min()


@pytest.mark.parametrize("plane", ["back", "bottom"])
def test_cold_bodies_mirror_warm_ones(plane):
    """A board as much colder as warmer: the profile stands on its head.

    To the change of the air's properties over the rise, here of a board 6 K off: 6/300 of them.
    """
    network = network_of(powered(0.4, parallel_to=plane, length_mm=90, width_mm=80), COARSE)
    places = network.places
    warm = rises(network)
    sources = replace(network.sources, power=-network.sources.power)
    cold = rises(replace(network, sources=sources))
    board_rise = warm[places.boards["main"].mean]
    assert 3.0 < board_rise < 12.0
    tolerance = 0.02 * board_rise
    assert cold[places.boards["main"].mean] == pytest.approx(-board_rise, abs=tolerance)
    np.testing.assert_allclose(
        cold[places.air_nodes], -warm[places.air_nodes][::-1], atol=tolerance
    )


def test_air_warms_upwards_and_stays_cool_below_its_source():
    network = network_of(powered(parallel_to="bottom", length_mm=150, width_mm=80), COARSE)
    profile = rises(network)[network.places.air_nodes]
    walls = rises(network)[[network.places.wall_inside[name].mean for name in WALLS]]
    assert (np.diff(profile) > -1e-6).all()
    over = (profile - walls.mean()) / (profile @ AIR_SHARES - walls.mean())
    assert over[0] < 0.5
    assert over[-1] > 1.3


# Stirred ----------------------------------------------------------------------------------------


def test_stirring_takes_the_layers_away():
    """A stream still lifts all its heat: mixing by a share of the films must carry it back."""
    network = network_of(powered(), COARSE)
    spread = []
    for share in (0.0, 0.03, 0.3, 3.0, 30.0, 1000.0):
        profile = rises(network.stirred(share))[network.places.air_nodes]
        spread.append(np.ptp(profile) / profile.mean())
    assert (np.diff(spread) < 0).all()
    assert spread[0] > 1.0
    assert spread[3] < 0.7
    assert spread[5] < 0.01


def test_stirred_hard_it_is_one_node_with_plain_films():
    """Every film on its own again: plate laws to one air temperature, and a balance of them all."""
    document = boxed()
    document["walls"] = {
        "bottom": {"mounting": {"kind": "bolted_to", "surface_c": 60, "contact_w_per_m2k": 1e4}}
    }
    network = network_of(document, COARSE).stirred(1e4)
    rise = rises(network)
    profile = rise[network.places.air_nodes]
    assert np.ptp(profile) < 1e-3
    kind = inside_air(network)
    site = site_of(document)
    heat = []
    inside = np.array([0.2, 0.1, 0.15])
    for film in site.air_site.films:
        wall = film.name.split()[1]
        plate = network.places.wall_inside[wall]
        difference = float(rise[plate.mean] - profile.mean())
        own = inclined_plate(
            difference,
            REFERENCE_K[0] + profile.mean() + 0.5 * difference,
            kind.pressure_pa,
            film.face.fall_length,
            film.face.area_perimeter_length,
            film.face.up_cosine,
        ).coefficient
        k = air(REFERENCE_K[0] + profile.mean() + 0.5 * difference, kind.pressure_pa).conductivity
        edges = np.delete(
            inside, {"l": 0, "r": 0, "f": 1, "t": 2}.get(wall[0], 1 + (wall == "bottom"))
        )
        plain = float(own * cavity.corner_factor(own, k, *edges))
        surface = kind.surfaces.names.index(film.name)
        found = kind.audit(rise[:, None], REFERENCE_K).coefficient[surface, 0]
        assert found == pytest.approx(plain, rel=2e-3), wall
        heat.append(plain * film.area.sum() * difference)
    assert len(heat) == 6
    # Walls so far apart keep all but a percent of their films to the air.
    assert abs(sum(heat)) < 0.02 * np.abs(heat).sum()


def test_stirring_keeps_the_answer_of_a_box_without_layers():
    """Held at even temperatures the air has no profile, so stirring it changes no heat."""
    network = network_of(busy(), COARSE)
    rise = np.random.default_rng(2).uniform(-20, 40, network.size)
    rise[network.places.air_nodes] = 11.0
    kind = inside_air(network)
    plain = kind.evaluate(rise[:, None], REFERENCE_K)
    np.testing.assert_array_equal(plain, kind.stirred(7.0).evaluate(rise[:, None], REFERENCE_K))
    assert (plain[-(AIR_NODES - 1) :] == 0.0).all()


def test_air_alone_finds_its_balance_between_held_surfaces():
    network = network_of(busy(), COARSE)
    rise = np.zeros((network.size, 1))
    for node in (*network.places.boards["main"].cells.ravel(), network.places.boards["main"].mean):
        rise[node] = 20.0
    free = np.append(network.places.air_nodes, network.places.air)
    alone = held(network, free, rise)
    found = solved(alone).rise
    profile = found[network.places.air_nodes, 0]
    # No air is colder than the coldest surface or warmer than the warmest, but for the rounding of
    # a stream's last step.
    assert (profile > -cavity.STEP_WIDTH_K).all()
    assert (profile < 20).all()
    kind = inside_air(network)
    heat = kind.evaluate(found, REFERENCE_K)[:, 0]
    net = np.zeros(network.size)
    np.subtract.at(net, kind.a, heat)
    np.add.at(net, kind.b, heat)
    assert np.abs(net[network.places.air_nodes]).max() < 1e-6 * np.abs(heat).sum()


def test_the_shelter_of_a_level_side_does_not_jump_where_it_is_as_warm_as_the_air():
    """Kept of the upper side: a third when warm, nearly all when cold; between them no jump."""
    network = network_of(boxed(flat=board(parallel_to="bottom", width_mm=80)), COARSE)
    kind = inside_air(network)
    surface = int(np.flatnonzero(kind.surfaces.warm_factor < 0.5)[0])
    warm, cold = (
        float(factor[surface, 0])
        for factor in (kind.surfaces.warm_factor, kind.surfaces.cold_factor)
    )
    assert cold > 2 * warm
    over = np.linspace(-0.3, 0.3, 121)
    rise = np.full((network.size, len(over)), 5.0)
    rise[kind.surfaces.node[surface]] += over
    reference = np.repeat(REFERENCE_K, len(over))
    ones = np.ones_like(kind.surfaces.warm_factor)
    bare = replace(kind.surfaces, warm_factor=ones, cold_factor=ones)
    alone = replace(kind, surfaces=bare).audit(rise, reference).coefficient[surface]
    kept = kind.audit(rise, reference).coefficient[surface] / alone
    # 5 mK are a little of the way from cold to warm, not most of it.
    assert kept[0] - kept[-1] > 0.8 * (cold - warm)
    assert (np.diff(kept) < 0).all()
    assert np.abs(np.diff(kept)).max() < 0.02 * (cold - warm)
