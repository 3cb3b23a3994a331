"""Plates on cells against exact solutions, and spreading counted once whatever the cells.

Exact numbers: the thin plate ``k t lap(theta) - h theta + q = 0`` with adiabatic edges by its double
cosine series, the disc source by Bessel functions (H. S. Carslaw, J. C. Jaeger, Conduction of Heat
in Solids, 2nd ed., 1959, from memory), and the fin of even section (any textbook).
"""

from pathlib import Path

import numpy as np
import pytest
from support.places import NO_PLACES
from support.plates import Plates, at_edge, flat, on_edges

from enclosure_check.description.load import load_document
from enclosure_check.network.build import build_network
from enclosure_check.network.grid import GridOptions, PlateGrid, cell_counts
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.walls import _join_corner
from enclosure_check.physics.conduction import plate_source_rise, spreading_resistance
from enclosure_check.physics.mutual import mutual_rise
from enclosure_check.solve.steady import solve_steady

# What the default cells may be off an exact solution, of the rise there. [-]
WITHIN = 0.01
ROUNDING = 1e-9

# A plate with a source -----------------------------------------------------------------------

# 100 x 100 mm, source 20 x 20 mm in the middle, 1 W; double series of 600 terms either way.
# kt, h; rise at the centre, in the middle of an edge, in a corner, mean [K].
CENTRAL = [
    (20.0 * 1.6e-3, 20.0, (11.244, 4.268, 3.633, 5.000)),
    (40.0 * 1.6e-3, 20.0, (8.256, 4.615, 4.247, 5.000)),
    (0.3 * 1.6e-3, 20.0, (96.99, 0.017, 0.0005, 5.000)),
    (205.0 * 2e-3, 12.0, (8.863, 8.270, 8.204, 8.333)),
]


@pytest.mark.parametrize(("kt", "film", "exact"), CENTRAL)
def test_central_source(kt, film, exact):
    plates = Plates()
    nodes = plates.add("plate", flat(0.1, 0.1, kt), film)
    spot = plates.heated("plate", (0.04, 0.04, 0.0), (0.02, 0.02, 0.0), 1.0)
    rise = plates.rise()
    centre, edge, corner, mean = exact
    even = float(spreading_resistance(0.02, 0.02, 0.05, 0.05, 0.1, 0.1, kt, film))
    assert rise[nodes.mean] == pytest.approx(mean, rel=1e-4)  # the digits printed
    assert rise[spot.node] == pytest.approx(even + 1 / (film * 0.01), rel=WITHIN)
    assert rise[spot.node] + spot.peak_k_per_w == pytest.approx(centre, rel=WITHIN)
    # Laminate without copper loses all heat around the source: a percent of next to nothing at
    # the edge is not what its cells, wider than the decay length, can give.
    least = WITHIN * mean if np.sqrt(kt / film) < 0.1 / 12 else 0.0
    assert on_edges(rise[nodes.cells]) == pytest.approx((edge, corner), rel=WITHIN, abs=least)


def test_offset_source():
    """20 x 10 mm, 2 W at (30, 25) mm, k 20, t 1.6 mm, h 20; the same series."""
    plates = Plates()
    nodes = plates.add("plate", flat(0.1, 0.1, 0.032), 20.0)
    spot = plates.heated("plate", (0.02, 0.02, 0.0), (0.02, 0.01, 0.0), 2.0)
    rise = plates.rise()
    assert rise[spot.node] + 2.0 * spot.peak_k_per_w == pytest.approx(28.900, rel=WITHIN)
    assert on_edges(rise[nodes.cells][::-1, ::-1])[1] == pytest.approx(3.938, rel=WITHIN)
    assert rise[nodes.mean] == pytest.approx(10.000, rel=1e-4)


@pytest.mark.parametrize(("k", "centre"), [(20.0, 13.439), (40.0, 7.574)])
def test_disc_on_a_plate_without_end(k, centre):
    """1 W on a disc of 5 mm radius, t 1.6 mm, h 20; here a square of its area on 600 x 600 mm.

    The mean over the disc, ``q/h (1 - 2 I1(z) K1(z))``, follows from the rise under it.
    """
    from scipy.special import i1, k1

    side, kt, film = np.sqrt(np.pi) * 5e-3, k * 1.6e-3, 20.0
    plates = Plates()
    plates.add("plate", flat(0.6, 0.6, kt), film)
    low = 0.3 - side / 2
    spot = plates.heated("plate", (low, low, 0.0), (side, side, 0.0), 1.0)
    rise = plates.rise()
    z = 5e-3 * np.sqrt(film / kt)
    mean = (1 - 2 * i1(z) * k1(z)) / (np.pi * 25e-6 * film)
    assert rise[spot.node] + spot.peak_k_per_w == pytest.approx(centre, rel=WITHIN)
    assert rise[spot.node] == pytest.approx(mean, rel=WITHIN)


def test_strip_is_the_exact_fin():
    """1 W into the end of a fin 50 x 100 x 1.6 mm, k 20, h 20: 14.736 K there, 7.803 K at the tip."""
    plates = Plates()
    nodes = plates.add("plate", flat(0.05, 0.1, 0.032), 20.0)
    spot = plates.heated("plate", (0.0, 0.0, 0.0), (1e-5, 0.1, 0.0), 1.0)
    rise = plates.rise()
    assert rise[spot.node] == pytest.approx(14.736, rel=WITHIN)
    tip = at_edge(rise[nodes.cells][::-1])
    np.testing.assert_allclose(tip, 7.803, rtol=WITHIN)
    np.testing.assert_allclose(tip, tip[0], rtol=ROUNDING)


SOURCE = (0.0137, 0.0211, 0.0), (0.0173, 0.0119, 0.0)


def cells_and_exact(count):
    """Rises of the cells of a plate with a source that fits no cells, and the exact ones."""
    kt, film, (low, size) = 0.032, 20.0, SOURCE
    grid = flat(0.1, 0.08, kt, (count, count))
    plates = Plates()
    nodes = plates.add("plate", grid, film)
    spot = plates.heated("plate", low, size, 1.0)
    rise = plates.rise()
    x, y = np.meshgrid(*grid.centres, indexing="ij")
    centre = [start + extent / 2 for start, extent in zip(low[:2], size[:2], strict=True)]
    exact = plate_source_rise(x, y, *size[:2], *centre, 0.1, 0.08, kt, film)
    away = np.hypot(x - centre[0], y - centre[1]) > 0.03
    return rise[nodes.cells][away], exact[away], rise[spot.node]


def test_observed_order_is_at_least_one():
    """Away from the source; a source that fits no cells has its heat shared out by overlap."""
    errors = []
    for count in (6, 12, 24, 48):
        cells, exact, _ = cells_and_exact(count)
        errors.append(float(np.sqrt(np.mean((cells - exact) ** 2))))
    orders = np.log2(np.divide(errors[:-1], errors[1:]))
    assert (orders >= 1.0).all(), (errors, orders)


@pytest.mark.parametrize("count", [2, 4, 12, 24])
def test_source_mean_is_exact_on_any_cells(count):
    """What cells do not resolve is added, what they resolve is not added again."""
    kt, film, (low, size) = 0.032, 20.0, SOURCE
    centre = [start + extent / 2 for start, extent in zip(low[:2], size[:2], strict=True)]
    alone = float(spreading_resistance(*size[:2], *centre, 0.1, 0.08, kt, film))
    _, _, mean = cells_and_exact(count)
    # At the film the spreading terms assume the sum is the exact one whatever the cells.
    assert mean == pytest.approx(alone + 1 / (film * 0.008), rel=1e-6)


def test_two_sources_add_up():
    """The second source adds what it makes at the first: told by the cells between them."""
    kt, film = 0.032, 20.0
    size = (0.012, 0.012, 0.0)
    lows = (0.02, 0.034, 0.0), (0.06, 0.034, 0.0)
    plates = Plates()
    plates.add("plate", flat(0.1, 0.08, kt), film)
    first, _ = (plates.heated("plate", low, size, 1.0) for low in lows)
    rise = plates.rise()
    place = np.linspace(0.0, 0.012, 13)[None, :] + np.array([[lows[0][0]], [lows[0][1]]])
    x, y = np.meshgrid(*place, indexing="ij")
    other = plate_source_rise(x, y, *size[:2], 0.066, 0.04, 0.1, 0.08, kt, film).mean()
    own = float(spreading_resistance(*size[:2], 0.026, 0.04, 0.1, 0.08, kt, film))
    assert rise[first.node] == pytest.approx(own + 1 / (film * 0.008) + other, rel=WITHIN)


# Low corners and sizes of two sources: in one cell of ten millimetres, in cells side by side, one over
# several cells beside the other, and on top of each other from both sides of a board.
PAIRS = [
    (((0.051, 0.041), (0.003, 0.004)), ((0.055, 0.046), (0.004, 0.003))),
    (((0.043, 0.033), (0.006, 0.006)), ((0.0505, 0.034), (0.007, 0.005))),
    (((0.02, 0.03), (0.018, 0.02)), ((0.039, 0.035), (0.004, 0.006))),
    (((0.042, 0.042), (0.012, 0.008)), ((0.044, 0.04), (0.005, 0.012))),
]


@pytest.mark.parametrize("pair", PAIRS)
@pytest.mark.parametrize("count", [4, 8, 10, 24])
def test_sources_close_by_warm_each_other_exactly(count, pair):
    """At the film the spreading terms assume, whatever the cells tell of the way between."""
    kt, film, watts = 0.032, 20.0, (1.0, 0.3)
    plates = Plates()
    plates.add("plate", flat(0.1, 0.08, kt, (count, count)), film)
    spots = [
        plates.heated("plate", (*low, 0.0), (*size, 0.0), each)
        for (low, size), each in zip(pair, watts, strict=True)
    ]
    rise = plates.rise()
    ends = [[(at, at + edge) for at, edge in zip(*each, strict=True)] for each in pair]
    for own, spot in enumerate(spots):
        exact = sum(watts) / (film * 0.008)
        for other in range(2):
            each = mutual_rise([ends[own]], [ends[other]], [(0.1, 0.08)], [kt], film)
            exact += watts[other] * float(each[0])
        apart = np.maximum(np.subtract(ends[0], np.flip(ends[1], axis=1)), 0)
        # Those further apart than a few cells know of each other by the cells alone.
        near = (apart < 3 * np.array([[0.1], [0.08]]) / count).all()
        assert rise[spot.node] == pytest.approx(exact, rel=1e-3 if near else WITHIN)


def test_contacts_of_a_plate_dissipate_together():
    """Tight contacts heaped on each other: what they add never makes heat flow uphill."""
    rng = np.random.default_rng(2)
    plates = Plates()
    plate = plates.add("plate", flat(0.1, 0.08, 0.01, (8, 8)), 20.0)
    grid, label = plates.grids["plate"], LinkLabel("part:S", "to_plate")
    nodes = []
    for low in rng.uniform(0.02, 0.06, (12, 2)):
        nodes.append(plates.builder.node("source"))
        size = (*rng.uniform(0.002, 0.02, 2), 0.0)
        plates.spots.add(nodes[-1], 1e-3, grid, plate, (*low, 0.0), size, label, "under it")
    plates.spots.join()
    network = plates.builder.finish(places=NO_PLACES)
    for _ in range(20):
        rise = np.zeros((network.size, 1))
        free = [*plate.cells.ravel(), *nodes]
        rise[free, 0] = rng.normal(size=len(free))
        (kind,) = network.kinds
        means = network.nowhere
        for node in sorted(set(kind.a[kind.b == means].tolist())):
            of = (kind.a == node) & (kind.b == means)
            rise[node] = np.sum(kind.conductance[of, 0] * rise[kind.y[of], 0])
        heat = kind.evaluate(rise, network.reference_k)[:, 0]
        mine = kind.label == list(network.labels).index(label)
        assert np.sum((heat * (rise[kind.a, 0] - rise[kind.b, 0]))[mine]) > 0


def test_conduction_without_bound_makes_one_node_of_a_plate():
    plates = Plates()
    nodes = plates.add("plate", flat(0.1, 0.08, 1e4), 20.0)
    spot = plates.heated("plate", *SOURCE, 1.0)
    rise = plates.rise()
    np.testing.assert_allclose(rise[nodes.cells], 1 / (20.0 * 0.008), rtol=1e-4)
    assert rise[spot.node] == pytest.approx(1 / (20.0 * 0.008), rel=1e-4)


def test_orthotropic_plate_is_a_stretched_isotropic_one():
    """Half as long with a quarter of the conductivity along, half the heat: the same rises."""
    kt, film, counts = 0.032, 20.0, (12, 12)
    found = []
    for length, along, watts in ((0.1, 1.0, 1.0), (0.05, 0.25, 0.5)):
        sheet = np.stack((np.full(counts, along * kt), np.full(counts, kt)))
        grid = PlateGrid((0, 1), (0.0, 0.0, 0.0), (length, 0.08, 0.0), counts, sheet)
        plates = Plates()
        nodes = plates.add("plate", grid, film)
        low, size = (0.2 * length, 0.02, 0.0), (0.13 * length, 0.01, 0.0)
        spot = plates.heated("plate", low, size, watts)
        rise = plates.rise()
        middle = rise[spot.node] + watts * spot.peak_k_per_w
        found.append([*rise[nodes.cells].ravel(), rise[spot.node], middle])
    np.testing.assert_allclose(found[0], found[1], rtol=1e-6)


# Corners -------------------------------------------------------------------------------------

LENGTHS, EDGE, FILM = (0.06, 0.04), 0.05, 20.0


def bent(sheets):
    """A fin bent round the corner of two walls, 1 W even over the far row of the first.

    Gives the mean rise by rows of cells, along the one wall and then the other.
    """
    plates = Plates()
    inside = (LENGTHS[1], LENGTHS[0], EDGE)
    for name, axes, kt in (("left", (1, 2), sheets[0]), ("back", (0, 2), sheets[1])):
        counts = cell_counts(*(inside[axis] for axis in axes), 144)
        grid = PlateGrid(axes, (0.0, 0.0, 0.0), inside, counts, np.full((2, *counts), kt))
        for faces in (plates.wall_outside, plates.wall_inside):
            face = f"{name} {'out' if faces is plates.wall_outside else 'in'}"
            faces[name] = plates.add(face, grid, FILM, share=0.5)
        plates.grids[name] = grid
    first_row = plates.wall_outside["left"].cells[0], plates.wall_inside["left"].cells[0]
    plates.heat(np.concatenate(first_row), 0.5 / first_row[0].size)
    _join_corner("left", "back", plates)
    rise = plates.rise()
    for faces in (plates.wall_outside, plates.wall_inside):
        for wall in faces.values():
            rows = rise[wall.cells]
            np.testing.assert_allclose(rows, np.broadcast_to(rows[:, :1], rows.shape), rtol=1e-9)
    rows = [rise[plates.wall_inside[name].cells[:, 0]] for name in ("left", "back")]
    steps = [plates.grids[name].steps[0] for name in ("left", "back")]
    return rows, steps


def straight(sheets, at, x):
    """Rise along two fins end to end, 1 W at ``at`` of the first; x along both [m]."""
    (one, other), (k1, k2) = LENGTHS, sheets
    m1, m2 = (np.sqrt(FILM / kt) for kt in sheets)
    # From the end inwards: the other fin as a conductance, the first one beyond its source.
    end = EDGE * k2 * m2 * np.tanh(m2 * other)
    b = end / (EDGE * k1 * m1)

    def beyond(place):
        return np.cosh(m1 * (one - place)) + b * np.sinh(m1 * (one - place))

    flux = EDGE * k1 * m1 * (np.sinh(m1 * (one - at)) + b * np.cosh(m1 * (one - at)))
    before = EDGE * k1 * m1 * np.tanh(m1 * at) * beyond(at)
    scale = 1.0 / (flux + before)
    first = np.where(
        x < at, beyond(at) * np.cosh(m1 * np.minimum(x, at)) / np.cosh(m1 * at), beyond(x)
    )
    second = np.cosh(m2 * (one + other - x)) / np.cosh(m2 * other)
    return scale * np.where(x < one, first, second)


def test_straight_fins_solution_is_that_of_the_textbook():
    """``P cosh(m (L - x)) / (k t w m sinh(m L))`` for one fin heated at its end."""
    kt, length = 0.032, sum(LENGTHS)
    m, x = np.sqrt(FILM / kt), np.linspace(1e-9, length, 30)
    exact = np.cosh(m * (length - x)) / (kt * EDGE * m * np.sinh(m * length))
    np.testing.assert_allclose(straight((kt, kt), 0.0, x), exact, rtol=1e-6)


@pytest.mark.parametrize("sheets", [(0.032, 0.032), (0.032, 0.3), (0.3, 0.032), (0.01, 0.01)])
def test_fin_bent_round_a_corner_is_the_straight_fin(sheets):
    rows, steps = bent(sheets)
    x = [(np.arange(row.size) + 0.5) * step for row, step in zip(rows, steps, strict=True)]
    exact = straight(sheets, steps[0] / 2, np.concatenate((x[0], LENGTHS[0] + x[1])))
    np.testing.assert_allclose(np.concatenate(rows), exact, rtol=WITHIN)


# Whole boxes ---------------------------------------------------------------------------------

SAMPLES = sorted((Path(__file__).parents[2] / "sample_boards").glob("*.yaml"))
HALVED = GridOptions(
    board_cells=4 * GridOptions().board_cells, wall_cells=4 * GridOptions().wall_cells
)
# What halving the cells may move a part, of its rise. [-]
MOVED = 0.03


@pytest.mark.parametrize("path", SAMPLES, ids=[path.stem for path in SAMPLES])
def test_halving_the_cells_moves_no_part(path):
    """Spreading is counted once: less of it in the terms is more of it in the cells."""
    for case in load_document(str(path)).cases():
        found = []
        for options in (GridOptions(), HALVED):
            network = build_network(case, options)
            solution = solve_steady(network)
            assert solution.converged
            parts = network.places.parts.values()
            points = [(part.junction, part.case, part.board) for part in parts]
            found.append(
                [solution.rise[node, 0] for each in points for node in each if node is not None]
            )
        assert len(found[0]) > 6
        np.testing.assert_allclose(found[1], found[0], rtol=MOVED, atol=1e-6)
