"""Every kind of link against five-point differences of its own heat, and against itself.

The links are those of random documents, so that their parameters are ones that occur. Kinds are
asked as the network asks them: `evaluate`, and `slopes` in the order of `pattern`.
"""

import random
from collections.abc import Callable

import numpy as np
import pytest
from support.cases import COARSE, network_of
from support.random_documents import random_document

from enclosure_check.network.films import DIFFERENCE_K, BoxFilm
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.network.links import Conduction, LinkKind, PatchExchange, Radiation
from enclosure_check.network.network import Network
from enclosure_check.network.outer_gap import OuterGap
from enclosure_check.network.wind import BoxFilmInWind

KINDS = (Conduction, Radiation, PatchExchange, BoxFilm, BoxFilmInWind, OuterGap, InsideAir)
# All of them tilted, with boards that face each other, so that every law has all its parts.
SEEDS = (12, 19, 53)
REFERENCE_K = np.array([253.15, 298.15, 340.15])

# Laws are differenced one-sidedly over 1e-4 K and so are off by half of that times their curvature;
# laws within laws by theirs each, of which the sum need not tell, and by rounding.
SLOPE_TOLERANCE, CURVED = 1e-4, 1.1 * DIFFERENCE_K / 2
# The same for parameters, differenced over a millionth.
PARAMETER_TOLERANCE = 2e-4
# Steps of the five-point differences: far above rounding, and fourth order.
STEP_K, STEP_SHARE = 0.002, 1e-3
NETWORKS = [network_of(random_document(random.Random(seed)), COARSE) for seed in SEEDS]

Case = tuple[Network, LinkKind]
CASES: list[Case] = [(network, kind) for network in NETWORKS for kind in network.kinds]
# Of boxes in wind the outside alone is another kind: where wind and buoyancy weigh about the same,
# and where the wind is turbulent along the longest faces.
for seed, wind_m_per_s, wind_from in ((12, 0.4, "any"), (53, 11.0, "left")):
    _made = random_document(random.Random(seed))
    _made["surroundings"] |= {"wind_m_per_s": wind_m_per_s, "wind_from": wind_from}
    _windy = network_of(_made, COARSE)
    CASES += [(_windy, kind) for kind in _windy.kinds if isinstance(kind, BoxFilm)]
IDS = [f"{type(kind).__name__}-{index}" for index, (_, kind) in enumerate(CASES)]
every_kind = pytest.mark.parametrize(("network", "kind"), CASES, ids=IDS)


def states(network: Network, variants: int, seed: int = 1) -> np.ndarray:
    """Rises of all nodes: of both signs, the inside air warmer towards its top by and large."""
    rng = np.random.default_rng(seed)
    rise = rng.uniform(-25, 45, (network.size, variants))
    air = network.places.air_nodes
    rise[air] = np.linspace(-8, 20, len(air))[:, None] + rng.uniform(-3, 3, (len(air), variants))
    return rise


def five_point(function: Callable[[float], np.ndarray], step: float) -> np.ndarray:
    """Fourth-order central difference of ``function`` of a shift."""
    near, far = function(step) - function(-step), function(2 * step) - function(-2 * step)
    return (8 * near - far) / (12 * step)


def summed(kind: LinkKind, size: int, slopes: np.ndarray) -> np.ndarray:
    """Slopes (d,) by link and node: shape (m, n)."""
    link, node = kind.pattern
    total = np.zeros((len(kind.a), size))
    np.add.at(total, (link, node), slopes)
    return total


def test_every_kind_is_tested():
    assert {type(kind) for _, kind in CASES} == set(KINDS)
    air = [kind for _, kind in CASES if isinstance(kind, InsideAir)]
    assert all(len(kind.pairs.first) for kind in air)
    assert any(len(kind.surfaces.body) for kind in air)


def assert_slopes(network: Network, kind: LinkKind, rise: np.ndarray, reference) -> None:
    """Compare slopes by link and node with five-point differences, shifts on the trailing axis."""
    found = kind.slopes(rise, reference)
    assert found.shape == (len(kind.pattern[0]), 1)
    assert np.isfinite(found).all()
    found = summed(kind, network.size, found[:, 0])
    n = network.size
    expected, curvature = np.zeros((2, len(kind.a), n))
    for part in np.array_split(np.arange(n), max(n // 60, 1)):
        columns = np.arange(len(part))

        def heat(step: float, part=part, columns=columns) -> np.ndarray:
            moved = np.repeat(rise, len(part), axis=1)
            moved[part, columns] += step
            return kind.evaluate(moved, np.repeat(reference, len(part)))

        expected[:, part] = five_point(heat, STEP_K)
        bend = heat(DIFFERENCE_K * 4) + heat(-DIFFERENCE_K * 4) - 2 * heat(0.0)
        curvature[:, part] = bend / (4 * DIFFERENCE_K) ** 2
    # Each link against its largest slope, and none against less than rounding leaves of the kind's.
    own = np.abs(expected).max(axis=1, keepdims=True)
    allowed = SLOPE_TOLERANCE * np.maximum(own, 1e-6 * own.max()) + CURVED * np.abs(curvature)
    assert own.max() > 0
    assert (np.abs(found - expected) <= allowed).all()


@every_kind
@pytest.mark.parametrize("seed", [1, 2])
def test_derivative_by_every_temperature(network, kind, seed):
    assert_slopes(network, kind, states(network, 1, seed), REFERENCE_K[seed : seed + 1])


@every_kind
def test_derivative_of_a_weighted_sum_by_every_parameter(network, kind):
    """Of the inside air, whose films feel each other through streams, see the tests of knobs."""
    if isinstance(kind, InsideAir):
        return
    rise, reference = states(network, 1, seed=2), REFERENCE_K[:1]
    rng = np.random.default_rng(3)
    weight = rng.uniform(-1, 1, len(kind.a))
    for name in kind.PARAMETERS:
        value = getattr(kind, name)
        own = weight * kind.heat_by_parameter(rise[kind.stencil], reference, name)[:, 0]
        found = np.bincount(kind.parameter_of(name), own)
        assert found.shape == (len(value),), name
        assert np.isfinite(found).all(), name
        places = sorted({*range(0, len(value), max(len(value) // 40, 1)), len(value) - 1})
        expected = np.zeros(len(places))
        for row, place in enumerate(places):
            step = STEP_SHARE * max(abs(float(value[place, 0])), 1e-3)

            def total(shift: float, name=name, value=value, place=place) -> np.ndarray:
                moved = value.copy()
                moved[place] += shift
                return weight @ kind.with_parameter(name, moved).evaluate(rise, reference)

            expected[row] = five_point(total, step)[0]
        scale = np.abs(expected).max()
        assert scale > 0, name
        # The sum is rounded in its last digits: 1e-16 of it, over steps of a thousandth.
        rounding = 1e-12 * float(np.abs(kind.evaluate(rise, reference)).max())
        rounding /= STEP_SHARE * float(np.abs(value[places]).min() + 1e-3)
        off = np.abs(found[places] - expected).max()
        assert off < PARAMETER_TOLERANCE * scale + rounding, name


def test_every_parameter_is_reached():
    """What the parameters are is part of the contract; a new one must come with its test."""
    assert {kind.__name__: kind.PARAMETERS for kind in KINDS} == {
        "Conduction": ("conductance",),
        "Radiation": ("area", "exchange_area", "share", "emissivity"),
        "PatchExchange": ("exchange_area", "emissivity_a", "emissivity_b"),
        "BoxFilm": ("area", "factor"),
        "BoxFilmInWind": ("area", "factor", "wind_factor"),
        "OuterGap": ("area",),
        "InsideAir": ("factor",),
    }


@every_kind
@pytest.mark.parametrize("level", [-40.0, 0.0, 1e-7, 55.0])
def test_no_difference_no_heat(network, kind, level):
    heat = kind.evaluate(np.full((network.size, 3), level), REFERENCE_K)
    if isinstance(kind, InsideAir):
        # Air between two nodes is interpolated: the last digit of the level may be left.
        some = kind.evaluate(states(network, 3), REFERENCE_K)
        assert np.abs(heat).max() <= 1e-15 * abs(level) * np.abs(some).max()
    else:
        assert (heat == 0.0).all()


@every_kind
def test_heat_goes_from_warm_to_cold(network, kind):
    rise = states(network, 3, seed=4)
    heat = kind.evaluate(rise, REFERENCE_K)
    assert heat.any()
    if isinstance(kind, Conduction | Radiation):
        difference = rise[kind.x] - rise[kind.y]
        # Contacts close by on a plate take from each other: all of them dissipate, not each.
        mutual = (kind.a != kind.x) | ((kind.b != kind.y) & (kind.b != network.nowhere))
        difference[mutual] = 0.0
    elif isinstance(kind, BoxFilm | OuterGap):
        difference = rise[kind.a] - rise[kind.b]
    elif isinstance(kind, PatchExchange):
        absolute = rise + REFERENCE_K
        sent = [
            (1 - e) * absolute[h] ** 4 + e * absolute[t] ** 4
            for e, h, t in (
                (kind.emissivity_a, kind.a, kind.c),
                (kind.emissivity_b, kind.b, kind.d),
            )
        ]
        difference = sent[0] - sent[1]
    else:
        # Films by their own air, straight heat by its cells, streams upwards if they are warm.
        films, straights = len(kind.cell), len(kind.cell_a)
        film = rise[kind.cell] - kind.hat @ rise[kind.air]
        straight = rise[kind.cell_a] - rise[kind.cell_b]
        lifts = (len(kind.air) - 1) * len(kind.surfaces.node)
        # A rising stream carries heat up; a falling one takes cold down, which is heat up too.
        up = np.ones((2 * lifts, 3))
        mixed = rise[kind.air[:-1]] - rise[kind.air[1:]]
        difference = np.concatenate((film, film, straight, up, mixed))
        assert len(difference) == 2 * films + straights + 2 * lifts + len(kind.air) - 1
    assert (heat * difference >= 0).all()


@every_kind
def test_slopes_stay_finite_where_the_difference_vanishes(network, kind):
    for level in (0.0, 1e-9, 1e-3, 0.02):
        rise = np.zeros((network.size, 1))
        rise[::2] = level
        slope = kind.slopes(rise, REFERENCE_K[:1])
        assert np.isfinite(slope).all()
        assert (np.abs(slope) < 1e9).all()


def assert_one_by_one(network: Network, together: LinkKind, alone: list[LinkKind], rise) -> None:
    heat, slopes = together.evaluate(rise, REFERENCE_K), together.slopes(rise, REFERENCE_K)
    for index, kind in enumerate(alone):
        one, reference = rise[:, index : index + 1], REFERENCE_K[index : index + 1]
        single = kind.evaluate(one, reference)
        # Rounding of the last digits may differ with the length of an array.
        np.testing.assert_allclose(
            heat[:, index : index + 1], single, rtol=1e-12, atol=1e-14 * np.abs(single).max()
        )
        np.testing.assert_allclose(
            slopes[:, index : index + 1],
            kind.slopes(one, reference),
            rtol=1e-7,
            atol=1e-9 * np.abs(slopes).max(),
        )


@every_kind
def test_variants_together_are_the_variants_alone(network, kind):
    assert_one_by_one(network, kind, [kind] * 3, states(network, 3, seed=5))


@every_kind
def test_parameters_that_differ_by_variant(network, kind):
    rise = states(network, 3, seed=6)
    for name in kind.PARAMETERS:
        value = getattr(kind, name) * np.array([0.8, 1.0, 1.1])
        together = kind.with_parameter(name, value)
        alone = [kind.with_parameter(name, value[:, index : index + 1]) for index in range(3)]
        assert_one_by_one(network, together, alone, rise)


@every_kind
def test_a_parameter_that_does_not_exist(network, kind):
    with pytest.raises(KeyError, match="colour"):
        kind.with_parameter("colour", np.ones((1, 1)))


@every_kind
def test_links_end_at_what_they_name(network, kind):
    ends = np.concatenate((kind.a, kind.b, kind.pattern[1]))
    assert ends.min() >= 0
    assert ends.max() < network.size
    assert len(kind.a) == len(kind.b) == len(kind.label)
    assert kind.label.max() < len(network.labels)
    assert set(kind.pattern[0].tolist()) <= set(range(len(kind.a)))


@every_kind
def test_nominal_factors_belong_to_the_pattern(network, kind):
    factors = kind.nominal(network.reference_k[:1])
    assert factors.shape == (len(kind.pattern[0]), 1)
    # All nodes alike: no heat.
    each = np.bincount(kind.pattern[0], factors[:, 0], len(kind.a))
    assert np.abs(each).max() <= 1e-12 * np.abs(factors).max()


@every_kind
def test_stirring_touches_the_inside_air_alone(network, kind):
    rise = states(network, 1)
    stirred, still = (each.evaluate(rise, REFERENCE_K[:1]) for each in (kind.stirred(0.5), kind))
    change = stirred - still
    if isinstance(kind, InsideAir):
        mixing = len(kind.air) - 1
        assert (change[:-mixing] == 0).all()
        assert (change[-mixing:] != 0).all()
        assert_slopes(network, kind.stirred(0.5), rise, REFERENCE_K[:1])
    else:
        assert (change == 0).all()


def test_faces_that_are_not_open_carry_no_heat():
    closed = 0
    for network, kind in CASES:
        if isinstance(kind, BoxFilm):
            heat = kind.evaluate(states(network, 2), REFERENCE_K[:2])
            is_open = kind.geometry.open_faces[kind.surface]
            assert (heat[~is_open] == 0).all()
            assert (heat[is_open] != 0).all()
            closed += int((~is_open).sum())
    assert closed > 0


def test_radiation_vanishes_with_the_emissivity():
    for network, kind in CASES:
        if isinstance(kind, Radiation):
            dark = kind.with_parameter("emissivity", np.zeros_like(kind.emissivity))
            assert (dark.evaluate(states(network, 2), REFERENCE_K[:2]) == 0).all()
