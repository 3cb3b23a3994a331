"""Lines along plates against the exact fins on both sides of them."""

from types import SimpleNamespace

import numpy as np
import pytest
from support.features import flat_grid
from support.places import NO_PLACES

from enclosure_check.network.builder import NetworkBuilder
from enclosure_check.network.lines import (
    join_pieces,
    line_held,
    line_segments,
    outline_segments,
)
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.site import Site
from enclosure_check.solve.steady import solve_steady

LABELS = LinkLabel("can:p/c", "frame"), LinkLabel("board:p", "along")


def test_outline_of_a_rectangle_in_pieces():
    """Cells of 10 mm: lines at x 13 and 60, at y 21 and 38.3 mm."""
    grid = flat_grid((12, 6), kt=0.02)
    pieces = list(outline_segments(grid, (0.013, 0.021, 0.0), (0.047, 0.0173, 0.0)))
    assert sum(piece.length for piece in pieces) == pytest.approx(2 * (0.047 + 0.0173))
    first = next(piece for piece in pieces if piece.places == ((0, 2), (1, 2)))
    # At x = 13 mm, 8 of the 10 mm between the first two rows; from y = 21 to 30 mm.
    assert first.length == pytest.approx(0.009)
    assert first.shares == pytest.approx((0.2, 0.8))
    assert first.held == line_held(0.02, 0.01, 0.8, 20.0)
    assert first.between == pytest.approx(0.02 * 0.009 / 0.01)
    (upper,) = (piece for piece in pieces if piece.places == ((3, 3), (3, 4)))
    assert upper.length == pytest.approx(0.01)
    assert upper.shares == pytest.approx((1 - 0.33, 0.33))


def test_outline_along_the_edges_is_fed_from_inside():
    pieces = list(outline_segments(flat_grid((12, 6), kt=0.02), (0, 0, 0), (0.12, 0.06, 0)))
    assert sum(piece.length for piece in pieces) == pytest.approx(0.36)
    for piece in pieces:
        assert sorted(piece.shares) == pytest.approx([0, 1])
        assert piece.held == pytest.approx(line_held(0.02, 0.01, 0.0, 20.0, 0.5))


def rows_beside(kt, step, film, place, count=2000):
    """Rise of a line on a long plate over its rows as they tell it, both reckoned in full.

    ``place`` is counted from an edge, in steps. Returns it with the share and what lies beyond.
    """
    from scipy.linalg import solve_banded

    first = max(int(np.floor(place - 0.5)), 0)
    share = max(place - 0.5 - first, 0.0)
    heat = np.zeros(count)
    heat[first], heat[first + 1] = 1.0 - share, share
    banded = np.full((3, count), -kt / step)
    banded[1] = film * step + 2 * kt / step
    banded[1, [0, -1]] -= kt / step
    rows = solve_banded((1, 1), banded, heat)
    m, x, length = np.sqrt(film / kt), place * step, count * step
    line = 1 / (kt * m * (np.tanh(m * x) + np.tanh(m * (length - x))))
    told = (1.0 - share) * rows[first] + share * rows[first + 1]
    return line - told, share, max(0.5 - place, 0.0)


@pytest.mark.parametrize("place", [0.0, 0.2, 0.43, 1000.5, 1000.7, 1001.0])
@pytest.mark.parametrize(("kt", "step"), [(0.4, 0.025), (0.03, 0.01), (4e-4, 0.0125), (4e-4, 0.05)])
def test_what_rows_do_not_tell_of_a_line(kt, step, place):
    """On copper planes, a common board, and plastic whose rows lie many decay lengths apart."""
    exact, share, beyond = rows_beside(kt, step, 20.0, place)
    assert line_held(kt, step, share, 20.0, beyond) == pytest.approx(exact, rel=1e-6)


def test_line_without_a_film():
    assert line_held(0.02, 0.01, 0.3, 0.0) == pytest.approx(0.3 * 0.7 * 0.01 / 0.02)
    assert line_held(0.02, 0.01, 0.0, 0.0, 0.3) == pytest.approx(0.3 * 0.01 / 0.02)
    assert line_held(0.02, 0.01, 1.0, 0.0) == 0.0


@pytest.mark.parametrize("at", [0.0, 0.003, 0.031, 0.035, 0.0417, 0.0551, 0.12])
@pytest.mark.parametrize("per_metre", [0.1, 20.0, 1e4])
def test_line_is_met_where_it_lies(at, per_metre):
    """1 W from the first row of a plate without film to a line across it: a slab, and the joint."""
    kt, width, counts = 0.02, 0.06, (12, 6)
    grid = flat_grid(counts, kt=kt)
    builder, cells, cold = plate_on(grid)
    pieces = list(line_segments(grid, 0, at, 0.0, width, film=0.0))
    join_pieces(builder, cells, pieces, cold, per_metre, LABELS)
    builder.heat(cells[0], 1.0 / counts[1], LinkLabel("plate:p", "power"))
    rise = solve_steady(builder.finish(places=NO_PLACES)).rise[cells[0], 0]
    exact = abs(at - 0.005) / (kt * width) + 1 / (per_metre * width)
    np.testing.assert_allclose(rise, exact, rtol=1e-6)


@pytest.mark.parametrize("at", [0.0, 0.003, 0.031, 0.035, 0.0417, 0.0551])
@pytest.mark.parametrize(("kt", "cells_along"), [(0.4, 4), (0.032, 12), (0.005, 12)])
def test_line_between_two_fins(at, kt, cells_along):
    """A plate that loses heat by 20 W/m2K, warmed along a line by a joint of 20 W/mK from 10 K."""
    width, length, film, per_metre = 0.06, 0.12, 20.0, 20.0
    grid = flat_grid((cells_along, 6), kt=kt)
    builder, cells, cold = plate_on(grid)
    warm = builder.node("warm", 310.0)
    builder.conduct(cells, cold, film * grid.cell_area, LinkLabel("plate:p", "loss"))
    pieces = list(line_segments(grid, 0, at, 0.0, width))
    join_pieces(builder, cells, pieces, warm, per_metre, LABELS)
    network = builder.finish(places=NO_PLACES)
    heat = network.heat(solve_steady(network).rise)[:, 0]
    frame = list(network.labels).index(LABELS[0])
    found = float(heat[network.link_label == frame].sum())
    m = np.sqrt(film / kt)
    fins = kt * m * width * (np.tanh(m * at) + np.tanh(m * (length - at)))
    assert found == pytest.approx(10.0 / (1 / fins + 1 / (per_metre * width)), rel=0.01)


def test_a_joint_never_takes_more_than_the_plate_conducts_between_rows():
    grid = flat_grid((12, 6), kt=4e-4)
    pieces = list(line_segments(grid, 0, 0.04, 0.0, 0.06))
    builder, cells, cold = plate_on(grid)
    join_pieces(builder, cells, pieces, cold, 1e4, LABELS, share=0.5)
    network = builder.finish(places=NO_PLACES)
    (kind,) = network.kinds
    least = kind.conductance.min()
    assert least == pytest.approx(-0.5 * 4e-4)


def plate_on(grid):
    """A builder with a plate on it and a node at 300 K."""
    builder = NetworkBuilder(300.0, 101325.0)
    cold, cells = builder.node("cold", 300.0), builder.nodes("plate", grid.counts)
    site = SimpleNamespace(builder=builder)
    Site.conduct_along(site, cells, grid, 1.0, LinkLabel("plate:p", "along"))
    return builder, cells, cold
