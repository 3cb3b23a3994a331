"""What scaled links do to a temperature, against scaling them and solving again."""

import numpy as np
import pytest
from support.cases import COARSE, network_of
from support.explained import DOCUMENT, VENTED, scaled
from support.networks import LABEL, POWER, finished, started

from enclosure_check.network.vents import Vents
from enclosure_check.solve.levers import Bundle, Levers
from enclosure_check.solve.steady import SolveOptions, solve_steady

TIGHT = SolveOptions(node_tolerance=1e-11)
# Of a central difference over a thousandth, beside the largest slope.
SHARE, TOLERANCE = 1e-3, 1e-5
# Of the air itself, of radiation between patches, of means: nobody scales these.
_NO_CHOICE = ("lift", "mixing", "carried", "mean", "trace", "radiation")


@pytest.fixture(scope="module", params=[DOCUMENT, VENTED], ids=["sealed", "vented"])
def network(request):
    return network_of(request.param, COARSE)


@pytest.fixture(scope="module")
def levers(network):
    solution = solve_steady(network, options=TIGHT)
    assert solution.converged
    return Levers(network, solution.rise, network.places.parts["U1"].junction)


def bundles(network):
    """All links of one label and kind, the streams of the air left out."""
    found = []
    for number, kind in enumerate(network.kinds):
        for label in sorted(set(kind.label.tolist())):
            if network.labels[label].role in _NO_CHOICE:
                continue
            found.append(Bundle(number, np.flatnonzero(kind.label == label)))
    return found


def moved(levers, bundle, factor):
    """Change of the temperature when the bundle is scaled and all solved again [K]."""
    solution = solve_steady(scaled(levers.network, bundle, factor), options=TIGHT)
    assert solution.converged
    return float(solution.rise[levers.node, 0] - levers.rise[levers.node, 0])


def test_slopes_are_those_of_solving_again(network, levers):
    every = bundles(network)
    slopes = levers.slopes(every)
    assert len(every) > 40
    largest = max(map(abs, slopes))
    for bundle, slope in list(zip(every, slopes, strict=True))[:: max(len(every) // 12, 1)]:
        there, back = moved(levers, bundle, 1 + SHARE), moved(levers, bundle, 1 - SHARE)
        assert slope == pytest.approx((there - back) / (2 * SHARE), abs=TOLERANCE * largest)


def test_slope_of_the_openings_is_that_of_wider_ones():
    network = network_of(VENTED, COARSE)
    solution = solve_steady(network, options=TIGHT)
    levers = Levers(network, solution.rise, network.places.parts["U1"].junction)
    number = next(n for n, kind in enumerate(network.kinds) if isinstance(kind, Vents))
    roles = np.array([network.labels[each].role for each in network.kinds[number].label])
    bundle = Bundle(number, np.flatnonzero(roles == "openings"))
    (slope,) = levers.slopes([bundle])
    there, back = moved(levers, bundle, 1 + SHARE), moved(levers, bundle, 1 - SHARE)
    assert slope == pytest.approx((there - back) / (2 * SHARE), rel=1e-3)
    assert slope < 0


def test_heat_put_in_is_that_of_solving_again(network, levers):
    node = network.places.parts["U3"].junction
    own = network.sources.node == node
    assert own.sum() == 1
    by_power = levers.by_heat[node]
    # U1's own watt heats it more than one of U3, and the air's mean is no place for heat.
    assert levers.by_heat[levers.node] > by_power > 0
    assert levers.by_heat[network.places.ambient] == 0


def chain(first: float, second: float, beside: float = 0.0):
    """A source over two resistances in a row to the ambient, and one beside the second [K/W]."""
    builder, ambient = started()
    middle = builder.node("middle")
    node = builder.node("junction")
    builder.conduct(node, middle, 1 / first, LABEL)
    builder.conduct(middle, ambient, 1 / second, LABEL)
    if beside:
        builder.conduct(middle, ambient, 1 / beside, LABEL)
    builder.heat(node, 2.0, POWER)
    network = finished(builder)
    solution = solve_steady(network)
    assert solution.converged
    return Levers(network, solution.rise, node)


@pytest.mark.parametrize("factor", [0.2, 0.9, 1.5, 30.0])
@pytest.mark.parametrize("link", [0, 1, 2])
def test_one_link_of_a_linear_network_is_exact_however_far(factor, link):
    levers = chain(3.0, 5.0, beside=10.0)
    kind = next(n for n, each in enumerate(levers.network.kinds) if len(each.a))
    bundle = Bundle(kind, np.array([link]))
    (slope,) = levers.slopes([bundle])
    (bend,) = levers.bends([bundle], [slope])
    told = slope * (factor - 1) / (1 + bend * (factor - 1))
    assert told == pytest.approx(moved(levers, bundle, factor), rel=1e-6)


def test_bends_by_hand():
    levers = chain(3.0, 5.0, beside=10.0)
    every = [Bundle(0, np.array([link])) for link in range(3)]
    slopes = levers.slopes(every)
    # 2 W over 3 K/W; over 10/3 K/W shared 2 : 1 by two links, each slope P R^2 / R_link.
    assert slopes == pytest.approx([-6.0, -2 * (10 / 3) ** 2 / 5, -2 * (10 / 3) ** 2 / 10])
    # All heat passes the first; the others have two thirds and one third of what lies between.
    assert levers.bends(every, slopes) == pytest.approx([1.0, 2 / 3, 1 / 3], rel=1e-6)


def test_nothing_asked_nothing_told(levers):
    assert levers.slopes([]) == []
    assert levers.bends([], []) == []
