"""Exchange areas of rectangles: closed forms, algebra, ray counts, closure, degenerate layouts."""

import numpy as np
import pytest
from numpy.testing import assert_allclose, assert_array_equal
from support.rectangles import (
    COUNTED,
    EXACT,
    LAYOUTS,
    NONE,
    adjoining,
    boxes,
    faces,
    integrated,
    kernel,
    layout,
    opposed,
    patches,
    ray_count,
    spread,
)

from enclosure_check.physics.view_factors import (
    KOROBOV_MULTIPLIER,
    Boxes,
    Rectangles,
    consistent_exchange_areas,
    exchange_areas,
    exposed_areas,
    parallel_rectangles,
    perpendicular_rectangles,
    visible_exchange_areas,
)

# Closed forms


def test_unit_squares_meet_the_published_values():
    # Values tabulated for a cube in heat-transfer textbooks (from memory).
    assert parallel_rectangles([0, 0], [1, 1], [0, 0], [1, 1], 1.0) == pytest.approx(
        0.199825, abs=1e-6
    )
    assert perpendicular_rectangles([0, 1], [0, 1], [0, 1], [0, 1]) == pytest.approx(
        0.200044, abs=1e-6
    )


@pytest.mark.parametrize("a", [0.05, 0.7, 1.0, 20.0])
@pytest.mark.parametrize("b", [0.3, 1.0, 6.0])
def test_aligned_rectangles_meet_the_catalogue(a, b):
    parallel = parallel_rectangles([0, 0], [a, b], [0, 0], [a, b], 1.0) / (a * b)
    assert parallel == pytest.approx(opposed(a, b), rel=1e-9)
    corner = perpendicular_rectangles([0, 1], [0, a], [0, 1], [0, b]) / a
    assert corner == pytest.approx(adjoining(a, b), rel=1e-9)


def test_offset_rectangles_meet_view_factor_algebra():
    # Two by one squares over two by one squares: 2 F(2x1) = 2 F11 + 2 F12.
    aside = parallel_rectangles([0, 0], [1, 1], [1, 0], [2, 1], 1.0)
    assert aside == pytest.approx(opposed(2, 1) - opposed(1, 1), abs=1e-12)
    # Two by two: 4 F(2x2) = 4 F11 + 8 F(aside) + 4 F(diagonal).
    diagonal = parallel_rectangles([0, 0], [1, 1], [1, 1], [2, 2], 1.0)
    assert diagonal == pytest.approx(opposed(2, 2) - opposed(1, 1) - 2 * aside, abs=1e-12)
    # Away from the common edge: what the whole sees less what its near half sees.
    lifted = perpendicular_rectangles([0, 1], [1, 2], [0, 1], [0, 1])
    assert lifted == pytest.approx(2 * adjoining(2, 1) - adjoining(1, 1), abs=1e-12)
    # Beside each other along the edge: the double length sees 2 F11 + 2 F12.
    beside = perpendicular_rectangles([0, 1], [0, 1], [1, 2], [0, 1])
    assert beside == pytest.approx(adjoining(1, 1, 2) - adjoining(1, 1), abs=1e-12)


def test_arbitrary_pairs_meet_the_double_integral():
    pairs = patches(
        (2, 1, 0.0, (0.1, -0.4), (0.9, 0.3)), (2, -1, 1.3, (0.6, 0.2), (2.0, 0.5)),
        (0, 1, -0.6, (0.5, 0.7), (1.4, 1.2)), (1, -1, 1.9, (-0.2, 0.3), (1.1, 0.8)),
    )  # fmt: skip
    found = visible_exchange_areas(pairs, NONE)
    for i in range(4):
        for j in range(i):
            assert found[i, j] == pytest.approx(integrated(pairs, i, j), rel=1e-6, abs=1e-9)
    assert (found[np.triu_indices(4, 1)] > 0.0).sum() == 6


def test_pairs_come_vectorised_and_reciprocal():
    rng = np.random.default_rng(1)
    low = rng.random((2, 5, 2))
    high = low + rng.random((2, 5, 2))
    gap = rng.random(5)
    both = parallel_rectangles(low[0], high[0], low[1], high[1], gap)
    single = [
        parallel_rectangles(low[0, k], high[0, k], low[1, k], high[1, k], gap[k]) for k in range(5)
    ]
    assert_allclose(both, single, rtol=1e-13)
    assert_allclose(both, parallel_rectangles(low[1], high[1], low[0], high[0], gap), rtol=1e-12)
    ends = np.sort(rng.random((4, 5, 2)), axis=-1)
    corner = perpendicular_rectangles(*ends)
    assert corner.shape == (5,)
    assert_allclose(
        corner, perpendicular_rectangles(ends[2], ends[3], ends[0], ends[1]), rtol=1e-10
    )


def test_limits_of_the_closed_forms():
    # Planes that touch exchange the overlap; edge to edge and nothing left of a patch give zero.
    assert parallel_rectangles([0, 0], [1, 1], [0.5, 0.25], [2, 1], 0.0) == pytest.approx(
        0.375, abs=1e-15
    )
    assert parallel_rectangles([0, 0], [1, 1], [1, 0], [2, 1], 0.0) == pytest.approx(0.0, abs=1e-15)
    assert parallel_rectangles([0, 0], [1, 0], [0, 0], [1, 1], 1.0) == pytest.approx(0.0, abs=1e-15)
    assert perpendicular_rectangles([0, 1], [-1, 0], [0, 1], [0, 1]) == pytest.approx(
        0.0, abs=1e-15
    )
    assert perpendicular_rectangles([0, 1], [-1, 2], [0, 1], [-3, 1]) == perpendicular_rectangles(
        [0, 1], [0, 2], [0, 1], [0, 1]
    )
    # Narrow slot: all but what leaves at the edges, which Hottel's crossed strings give as 2 d / L.
    assert 1.0 - parallel_rectangles([0, 0], [1, 1], [0, 0], [1, 1], 1e-6) == pytest.approx(
        2e-6, rel=1e-4
    )
    # Far away: A1 A2 / (pi r^2).
    far = parallel_rectangles([0, 0], [1, 1], [0, 0], [1, 1], 100.0)
    assert far == pytest.approx(1.0 / (np.pi * 1e4), rel=1e-4)


# Enclosures without obstacles


@pytest.mark.parametrize("high", [(1, 1, 1), (3.0, 0.2, 1.0), (0.2, 0.12, 0.002)])
def test_rows_of_an_empty_box_sum_to_the_area_before_closure(high):
    box = patches(*faces((0, 0, 0), high, True, ((0.1, 0.7), (0.35,), (0.5, 0.501))))
    raw = visible_exchange_areas(box, NONE)
    assert_allclose(raw.sum(axis=1), box.area, rtol=EXACT)
    assert_array_equal(raw, raw.T)
    assert_allclose(exchange_areas(box, NONE), raw, atol=1e-9 * box.area.max())


def test_cube_faces():
    view = exchange_areas(patches(*faces((0, 0, 0), (1, 1, 1), True)), NONE)
    assert_allclose(view.sum(axis=1), 1.0, rtol=1e-12)
    assert_allclose(view[0, 1], opposed(1, 1), rtol=1e-9)
    assert_allclose(view[0, 2:], adjoining(1, 1), rtol=1e-9)


def test_faces_turned_away_do_not_see_each_other():
    outside = patches(*faces((0, 0, 0), (1, 2, 3), False))
    assert_array_equal(visible_exchange_areas(outside, NONE), np.zeros((6, 6)))
    assert_array_equal(exchange_areas(outside, NONE), np.zeros((6, 6)))


def test_size_and_place_do_not_matter():
    shape, obstacle = layout("two boards facing")
    moved = Rectangles(
        shape.axis,
        shape.sign,
        1e3 * shape.position + 7.0,
        1e3 * shape.low + 7.0,
        1e3 * shape.high + 7.0,
    )
    far = exchange_areas(moved, Boxes(1e3 * obstacle.low + 7.0, 1e3 * obstacle.high + 7.0))
    assert_allclose(1e-6 * far, exchange_areas(shape, obstacle), atol=1e-8 * shape.area.max())


# Obstacles


@pytest.mark.parametrize("name", LAYOUTS)
def test_obstructed_enclosures_meet_a_ray_count(name):
    shape, obstacle = layout(name)
    rng = np.random.default_rng(20)
    counted = np.array([ray_count(shape, obstacle, i, rng) for i in range(shape.axis.size)])
    raw, closed = visible_exchange_areas(shape, obstacle), exchange_areas(shape, obstacle)
    larger = np.maximum.outer(shape.area, shape.area)
    assert (np.abs(raw - shape.area[:, None] * counted) / larger).max() < COUNTED
    assert (np.abs(closed - shape.area[:, None] * counted) / larger).max() < COUNTED


@pytest.mark.parametrize("name", LAYOUTS)
def test_obstructed_enclosures_close_exactly(name):
    shape, obstacle = layout(name)
    raw, closed = visible_exchange_areas(shape, obstacle), exchange_areas(shape, obstacle)
    exposed = exposed_areas(shape, obstacle)
    sees = raw.sum(axis=1) > 0.0
    assert_allclose(raw.sum(axis=1)[sees], exposed[sees], rtol=0.02)
    assert_allclose(closed.sum(axis=1)[sees], exposed[sees], rtol=1e-12)
    assert_array_equal(closed, closed.T)
    assert (closed >= 0.0).all()
    assert_array_equal(closed[raw == 0.0], 0.0)
    assert_array_equal(closed, exchange_areas(shape, obstacle))
    if name not in ("two boards facing", "sheet without thickness", "bodies on floor and board"):
        assert_array_equal(exposed, shape.area)  # nothing touches a patch


def test_random_pairs_and_boxes_meet_the_weighted_double_integral():
    rng = np.random.default_rng(3)
    partly = untouched = 0
    for _ in range(400):
        low = rng.random((3, 3))
        high = low + rng.uniform(0.05, 0.8, (3, 3))
        axis, sign = rng.integers(0, 3, 2), rng.choice((-1, 1), 2)
        rest = [[m for m in range(3) if m != axis[k]] for k in range(2)]
        pair = patches(*(
            (axis[k], sign[k], low[k, axis[k]], low[k, rest[k]], high[k, rest[k]]) for k in range(2)
        ))  # fmt: skip
        u = rng.random((4, 20_000))
        start, end = spread(pair, 0, *u[:2]), spread(pair, 1, *u[2:])
        weight = kernel(pair, 0, 1, start, end)
        free = visible_exchange_areas(pair, NONE)[0, 1]
        found = visible_exchange_areas(pair, boxes((low[2], high[2])))[0, 1]
        if not weight.any():
            assert found == free == pytest.approx(0.0, abs=1e-6)  # too little for 20 000 points
            continue
        # Inside the box somewhere along the way: the intervals of the three slabs overlap.
        t = np.sort((np.stack((low[2], high[2]))[:, None] - start) / (end - start), axis=0)
        cut = np.maximum(t[0].max(axis=1), 0.0) < np.minimum(t[1].min(axis=1), 1.0)
        share = np.sum(weight * ~cut) / np.sum(weight)
        assert abs(found - free * share) < COUNTED * pair.area.max()
        partly += 0.05 < share < 0.95
        untouched += share == 1.0
        assert found == free or share < 1.0
    assert partly > 20
    assert untouched > 20


@pytest.mark.parametrize("height", [0.5, 0.65, 0.8, 1.0])
def test_barrier_between_long_walls_meets_the_crossed_strings(height):
    # Two strips of height 1 at a distance 1, a sheet standing midway on the floor: half of the
    # crossed less the uncrossed strings per length (Hottel 1954, from memory), exact in two
    # dimensions; the ends of strips this long matter below 0.1 %.
    length = 2000.0
    pair = patches((0, 1, 0, (0, 0), (length, 1)), (0, -1, 1, (0, 0), (length, 1)))
    sheet = boxes(((0.5, -1.0, 0.0), (0.5, length + 1.0, height)))
    crossed = 2.0 * (np.hypot(0.5, height) + np.hypot(0.5, 1.0 - height))  # over the edge
    uncrossed = 1.0 + 2.0 * np.hypot(0.5, height)
    found = visible_exchange_areas(pair, sheet)[0, 1]
    assert found == pytest.approx(length * 0.5 * (crossed - uncrossed), abs=COUNTED * length)
    free = visible_exchange_areas(pair, NONE)[0, 1]
    assert free == pytest.approx(length * (np.sqrt(2.0) - 1.0), rel=1e-3)


def test_partition_makes_two_closed_boxes():
    split = ((0.4,), (), ())
    rows = faces((0, 0, 0), (1, 0.5, 0.3), True, split)
    rows += [(0, 1, 0.4, (0, 0), (0.5, 0.3)), (0, -1, 0.4, (0, 0), (0.5, 0.3))]
    shape, wall = patches(*rows), boxes(((0.4, 0, 0), (0.4, 0.5, 0.3)))
    raw = visible_exchange_areas(shape, wall)
    centre = shape.corners.mean(axis=1)[:, 0]
    right = np.where(np.arange(len(centre)) >= len(centre) - 2, shape.sign > 0, centre > 0.4)
    assert_array_equal(raw[np.ix_(right, ~right)], 0.0)
    assert_allclose(raw.sum(axis=1), shape.area, rtol=EXACT)


def test_facing_boards_keep_their_exact_exchange():
    shape, obstacle = layout("two boards facing")
    free = visible_exchange_areas(shape, NONE)
    seen = visible_exchange_areas(shape, obstacle)
    facing = [
        k
        for k in range(len(shape.axis))
        if shape.axis[k] == 1 and shape.position[k] in (0.0416, 0.06)
    ]
    assert len(facing) == 2
    assert seen[facing[0], facing[1]] == free[facing[0], facing[1]] > 0.0
    assert (seen <= free).all()


@pytest.mark.parametrize("rays", KOROBOV_MULTIPLIER)
def test_lattice_multipliers_minimise_the_error_they_are_chosen_by(rays):
    # P2 in four dimensions (Sloan & Joe 1994, from memory), over all odd multipliers.
    def error(multiplier):
        powers = [pow(multiplier, k, rays) for k in range(4)]
        x = np.outer(np.arange(rays), powers) % rays / rays
        return np.prod(1.0 + 2.0 * np.pi**2 * (x * x - x + 1.0 / 6.0), axis=1).mean() - 1.0

    errors = np.array([error(multiplier) for multiplier in range(1, rays, 2)])
    least = np.flatnonzero(errors <= errors.min() * (1.0 + 1e-9))[0]
    assert KOROBOV_MULTIPLIER[rays] == 2 * least + 1


# Degenerate layouts


def test_body_on_the_floor_covers_its_footprint():
    rows = faces((0, 0, 0), (1, 1, 1), True) + faces((0.2, 0.3, 0), (0.5, 0.7, 0.4), False)
    rows += [(2, 1, 0.0, (0.25, 0.35), (0.45, 0.6))]
    shape, body = patches(*rows), boxes(((0.2, 0.3, 0), (0.5, 0.7, 0.4)))
    floor, bottom, beneath = 4, 10, 12
    exposed = exposed_areas(shape, body)
    assert exposed[floor] == pytest.approx(1.0 - 0.3 * 0.4, rel=1e-12)
    assert exposed[beneath] == 0.0
    closed = exchange_areas(shape, body)
    assert_array_equal(closed[[bottom, beneath]], 0.0)
    assert closed[floor].sum() == pytest.approx(exposed[floor], rel=1e-12)


def test_box_across_a_patch_takes_its_strip_away():
    # A box that hardly rises above the plane of the first patch hides what it covers, no more.
    pair = patches((2, 1, 0.0, (1, 0), (2, 1)), (0, 1, 0.0, (0, 0), (1, 1)))
    bar = boxes(((1.4, -1.0, -1.0), (1.7, 2.0, 1e-6)))
    strip = perpendicular_rectangles([0, 1], [1.4, 1.7], [0, 1], [0, 1])
    free = perpendicular_rectangles([0, 1], [1, 2], [0, 1], [0, 1])
    assert visible_exchange_areas(pair, bar)[0, 1] == pytest.approx(free - strip, abs=0.02 * free)
    assert exposed_areas(pair, bar) == pytest.approx([0.7, 1.0], rel=1e-12)


def test_hidden_touching_coplanar_and_empty_patches():
    shape = patches(
        (2, 1, 0.0, (0.4, 0.4), (0.6, 0.6)), (2, -1, 1.0, (0.4, 0.4), (0.6, 0.6)),  # shielded
        (2, 1, 0.0, (0.6, 0.4), (0.8, 0.6)), (2, -1, 1e-17, (0.4, 0.4), (0.6, 0.6)),  # beside, on it
        (0, 1, 0.4, (0.4, 0.0), (0.6, 0.0)), (0, 1, 0.4, (0.4, -1.0), (0.6, 0.0)),  # no area, below
    )  # fmt: skip
    found = visible_exchange_areas(shape, boxes(((0.0, 0.0, 0.5), (1.0, 1.0, 0.5))))
    assert_array_equal(found[0], 0.0)
    assert_array_equal(found[4], 0.0)
    assert np.isfinite(found).all()
    assert visible_exchange_areas(shape, NONE)[0, 1] > 0.0


def test_few_patches():
    none = Rectangles(
        np.empty(0, dtype=int), np.empty(0), np.empty(0), np.empty((0, 2)), np.empty((0, 2))
    )
    wall = boxes(((0, 0, 0), (1, 1, 1)))
    assert exchange_areas(none, wall).shape == (0, 0)
    one = patches((0, 1, 2.0, (0, 0), (1, 1)))
    assert_array_equal(exchange_areas(one, wall), [[0.0]])


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"axis": np.array([3])}, "axis"),
        ({"sign": np.array([0.5])}, "sign"),
        ({"position": np.array([np.nan])}, "finite"),
        ({"low": np.array([[2.0, 0.0]])}, "low <= high"),
        ({"high": np.array([1.0])}, "shapes"),
    ],
)
def test_rectangles_refuse_what_they_are_not(change, message):
    fields = {"axis": np.array([0]), "sign": np.array([1.0]), "position": np.array([0.0]),
              "low": np.zeros((1, 2)), "high": np.ones((1, 2))}  # fmt: skip
    Rectangles(**fields)
    with pytest.raises(ValueError, match=message):
        Rectangles(**(fields | change))


@pytest.mark.parametrize(
    ("low", "high"), [((0, 0, 2), (1, 1, 1)), ((0, 0), (1, 1)), ((0, 0, 0), (1, 1, np.inf))]
)
def test_boxes_refuse_what_they_are_not(low, high):
    with pytest.raises(ValueError, match=r"shape \(m, 3\)|low <= high"):
        boxes((low, high))


# Closure


def inexact(n, spread, seed):
    """A consistent set of a box, every entry wrong by up to the spread, and its areas."""
    rng = np.random.default_rng(seed)
    cuts = tuple(np.linspace(0, 1, n + 1)[1:-1] for _ in range(3))
    box = patches(*faces((0, 0, 0), (1.0, 0.4, 0.7), True, cuts))
    exchange = visible_exchange_areas(box, NONE)
    return exchange * np.exp(spread * rng.standard_normal(exchange.shape)), box.area


@pytest.mark.parametrize(("n", "spread"), [(1, 0.02), (2, 0.1), (3, 0.5), (1, 3.0), (2, 2.0)])
def test_closure_is_exact(n, spread):
    exchange, area = inexact(n, spread, seed=n)
    closed = consistent_exchange_areas(exchange, area)
    assert_allclose(closed.sum(axis=1), area, rtol=1e-12)
    assert_array_equal(closed, closed.T)
    assert (closed >= 0.0).all()
    assert_array_equal(closed == 0.0, exchange == 0.0)
    assert_allclose(consistent_exchange_areas(closed, area), closed, rtol=1e-12)


def test_closure_is_the_least_squares_correction():
    # Against the stationary point of the Lagrange function, solved for all entries at once.
    exchange, area = inexact(1, 0.02, seed=9)
    start = 0.5 * (exchange + exchange.T)
    i, j = np.triu_indices(area.size, 1)
    entry = start[i, j]
    rows = (i == np.arange(area.size)[:, None]).astype(float) + (j == np.arange(area.size)[:, None])
    system = np.block([[np.diag(2.0 / entry), rows.T], [rows, np.zeros((area.size, area.size))]])
    right = np.concatenate((np.zeros(entry.size), area - start.sum(axis=1)))
    expected = entry + np.linalg.solve(system, right)[: entry.size]
    assert_allclose(consistent_exchange_areas(exchange, area)[i, j], expected, rtol=1e-9)


def test_closure_of_two_groups_that_see_only_each_other():
    wrong = np.array([[0, 0, 0.9, 0.3], [0, 0, 0.6, 1.2], [0.9, 0.6, 0, 0], [0.3, 1.2, 0, 0]])
    closed = consistent_exchange_areas(wrong, [1.0, 2.0, 1.6, 1.4])
    assert_allclose(closed.sum(axis=1), [1.0, 2.0, 1.6, 1.4], rtol=1e-12)
    assert_array_equal(closed == 0.0, wrong == 0.0)


def test_closure_keeps_rows_of_zeros():
    wrong = np.array([[0.0, 0.9, 0.0], [0.9, 0.0, 0.0], [0.0, 0.0, 0.0]])
    assert_allclose(
        consistent_exchange_areas(wrong, [1.0, 1.0, 5.0])[:2, :2], [[0, 1], [1, 0]], rtol=1e-12
    )
    assert_array_equal(consistent_exchange_areas(wrong, [1.0, 1.0, 5.0])[2], 0.0)


def test_what_cannot_close_is_refused():
    with pytest.raises(ValueError, match="do not enclose a space"):
        consistent_exchange_areas([[0.0, 0.9], [0.9, 0.0]], [1.0, 2.0])
    with pytest.raises(ValueError, match="without area"):
        consistent_exchange_areas([[0.0, 0.9], [0.9, 0.0]], [1.0, 0.0])
