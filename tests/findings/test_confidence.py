"""Bands: derivatives against documents changed and solved again, and widths against Monte Carlo."""

import copy
from dataclasses import replace

import numpy as np
import pytest
from network.test_knobs import DOCUMENT as EVERYTHING
from support.cases import COARSE, board, box, case_of, part, patched, solved

from enclosure_check.description.case import ToleranceCase
from enclosure_check.description.document import Document
from enclosure_check.description.numbers import meaning, number_at, stated_tolerances
from enclosure_check.description.yaml_nodes import MappingNode, ScalarNode, SequenceNode
from enclosure_check.findings.assess import FAIR_SHARE, assess, reported_nodes
from enclosure_check.findings.causes import CAUSES
from enclosure_check.findings.confidence import Bands, bands, causes, unit_of
from enclosure_check.findings.quantities import quantities
from enclosure_check.findings.results import normal_quantile
from enclosure_check.network.build import build_network
from enclosure_check.solve.nearby import solve_nearby
from enclosure_check.solve.steady import SolveOptions

TIGHT = SolveOptions(node_tolerance=1e-11)


def as_node(data):
    """Plain data as nodes of a document, all at one place."""
    if isinstance(data, dict):
        entries = {key: as_node(value) for key, value in data.items()}
        return MappingNode(entries, dict.fromkeys(entries, (1, 1)), 1, 1)
    if isinstance(data, list):
        return SequenceNode(tuple(as_node(item) for item in data), 1, 1)
    return ScalarNode(data, 1, 1, str(data))


def changed(document, path, value):
    """A copy of a document with one number changed."""
    made = copy.deepcopy(document)
    here = made
    for step in path[:-1]:
        here = here[step]
    here[path[-1]] = value
    return made


def with_bands(answer) -> Bands:
    places = answer.network.places
    parts = [node for each in places.parts.values() for node in (each.junction, each.case)]
    found = bands(answer, [*reported_nodes(answer), *parts])
    assert found is not None
    return found


# Quantities ---------------------------------------------------------------------------------

RICH = patched(
    EVERYTHING,
    {
        "finishes": {"coat": {"emissivity": 0.9, "solar_absorptivity": 0.4}},
        "materials": {"resin": {"conductivity_w_per_mk": 0.25}},
        "defaults": {"wall": {"material": "resin", "finish_outside": "coat"}},
        "surroundings": {"sky": "given", "sky_c": 5},
        "boards": {
            "main": {
                "conductivity_in_plane_w_per_mk": 20,
                "copper": None,
                "zones": None,
                "shield_cans": None,
                "edge_clamps": None,
            }
        },
        "part_types": {"chip": {"theta_jc_top_k_per_w": 9, "theta_jb_k_per_w": 7}},
        "parts": {
            "U1": {"type": "chip"},
            "U2": {"theta_jb_k_per_w": 6},
            "U3": part(
                side="front",
                at_mm=[20, 20],
                power_w=1,
                theta_jc_bottom_k_per_w=3,
                bottom_contact_k_per_w=5,
                pad={"to": "front", "thickness_mm": 90, "conductivity_w_per_mk": 4},
            ),
            "U4": part(type="chip", side="front", at_mm=[75, 20], power_w=0.4, theta_jb_k_per_w=3),
        },
    },
)
# Each with how far derivatives may be off, of the largest temperature change: what is left out is
# named in the method (line resistances of clamps and frames, corners of two materials, the air's
# conductivity where it is taken at the surroundings).
NUMBERS = [
    (("parts", "U1", "power_w"), 0.002),
    (("parts", "R1", "power_w"), 0.002),
    (("part_types", "chip", "theta_jc_top_k_per_w"), 0.002),
    (("part_types", "chip", "theta_jb_k_per_w"), 0.002),
    (("parts", "U4", "theta_jb_k_per_w"), 0.002),
    (("parts", "U3", "theta_jc_bottom_k_per_w"), 0.002),
    (("parts", "U3", "bottom_contact_k_per_w"), 0.002),
    (("parts", "U3", "pad", "conductivity_w_per_mk"), 0.002),
    (("parts", "R1", "pad", "conductivity_w_per_mk"), 0.002),
    (("parts", "R1", "pad", "contact_mm2k_per_w"), 0.002),
    (("parts", "R1", "theta_jc_bottom_k_per_w"), 0.002),
    (("boards", "main", "other_power_w"), 0.002),
    (("boards", "main", "conductivity_in_plane_w_per_mk"), 0.05),
    (("finishes", "coat", "emissivity"), 0.002),
    (("finishes", "matt", "emissivity"), 0.002),
    (("finishes", "coat", "solar_absorptivity"), 0.002),
    (("materials", "resin", "conductivity_w_per_mk"), 0.05),
    (("walls", "bottom", "mounting", "contact_w_per_m2k"), 0.002),
    (("walls", "bottom", "mounting", "surface_c"), 0.002),
    (("walls", "back", "mounting", "surface_c"), 0.002),
    (("surroundings", "sun_w_per_m2", "top"), 0.002),
    (("surroundings", "radiant_c"), 0.002),
    (("surroundings", "sky_c"), 0.002),
    (("surroundings", "air_c"), 0.01),
]


@pytest.fixture(scope="module")
def rich():
    return solved(RICH, COARSE)


@pytest.fixture(scope="module")
def rich_bands(rich):
    return with_bands(rich)


def solved_again(answer, document):
    """The temperatures of a like document, all from the same start [C]."""
    network = build_network(case_of(document), COARSE)
    start = answer.solution.rise[network.unknown]
    solution = solve_nearby(network, start, answer.inverse, TIGHT)
    assert solution.converged
    return solution.rise[:, 0] + network.reference_k[0]


@pytest.mark.parametrize(("path", "tolerance"), NUMBERS, ids=lambda value: str(value))
def test_what_a_number_is_about_moves_temperatures_as_the_number_does(
    rich, rich_bands, path, tolerance
):
    value = number_at(as_node(RICH), path)
    step = 0.02 if path[-1].endswith("_c") else 0.002 * value
    high, low = (solved_again(rich, changed(RICH, path, value + sign * step)) for sign in (1, -1))
    nodes = rich_bands.adjoint.nodes
    by_solving = (high - low)[nodes] / (2 * step)
    about = meaning(Document.model_validate(RICH), path).about
    assert about
    tolerated = ToleranceCase(path, value, 1.0, None, about, about)
    (cause, *_) = causes(rich_bands.quantities, (tolerated,))
    assert cause.basis == "stated"
    turns = np.zeros(rich_bands.knobs.starts[-1])
    for knob, share in cause.turns:
        turns[knob] += share
    by_adjoint = turns @ rich_bands.gradient
    largest = np.abs(by_solving).max()
    assert largest > 0
    np.testing.assert_allclose(by_adjoint, by_solving, rtol=0, atol=tolerance * largest)


def test_every_quantity_has_a_default(rich_bands):
    assert {each.family for each in rich_bands.quantities} <= set(CAUSES)
    assert len({each.key for each in rich_bands.quantities}) == len(rich_bands.quantities)


# Causes -------------------------------------------------------------------------------------


def words(answer):
    return [cause.words for cause in causes(quantities(answer)[1], answer.case.tolerances)]


def test_what_moves_together_is_one_cause():
    pad = {"to": "front", "thickness_mm": 50, "conductivity_w_per_mk": 4}
    document = box(
        surroundings={"sun_w_per_m2": {"top": 500, "left": 200}},
        boards={"main": board(other_power_w=2)},
        parts={
            "U1": part(power_w=1, pad=pad),
            "U2": part(power_w=1, at_mm=[20, 20], pad=pad),
            "U3": part(power_w=1, at_mm=[90, 20], pad={**pad, "conductivity_w_per_mk": 2}),
        },
    )
    found = words(solved(document, COARSE))
    assert found.count("sun") == 1
    assert "conductivity of the pad of U1, U2" in found
    assert "conductivity of the pad of U3" in found
    assert {f"power of {name}" for name in ("U1", "U2", "U3")} <= set(found)
    # One paint on six walls.
    assert found.count("emissivity of grey_paint") == 1
    # Air, radiant surroundings: one, as long as they are as warm.
    assert "surrounding air" in found
    assert "radiant surroundings" not in found
    warmer = patched(document, {"surroundings": {"radiant_c": 30}})
    assert "radiant surroundings" in words(solved(warmer, COARSE))


def toleranced(document, tolerances):
    """A solved document with tolerances, as loading one fills them in."""
    answer = solved(document, COARSE)
    made = Document.model_validate({**document, "tolerances": tolerances})
    stated = stated_tolerances(as_node(document), made)
    return patched_case(answer, stated)


def patched_case(answer, stated):
    return replace(answer, case=replace(answer.case, tolerances=stated))


SMALL = box(
    boards={"main": board(other_power_w=2)},
    parts={"U1": part(power_w=1.5, theta_jb_k_per_w=10), "U2": part(power_w=1, at_mm=[20, 20])},
)


def test_a_tolerance_stated_goes_before_the_default():
    answer = toleranced(
        SMALL, {"parts.*.power_w": {"pct": 30}, "parts.U2.power_w": {"plus_minus": 0.0}}
    )
    found = causes(quantities(answer)[1], answer.case.tolerances)
    by_words = {cause.words: cause for cause in found}
    assert "power of U1" not in by_words
    assert by_words["parts.U1.power_w"].half_width == "30 %"
    # The pattern with fewer stars counts.
    assert by_words["parts.U2.power_w"].half_width == "0 W"
    assert by_words["parts.U2.power_w"].turns[0][1] == 0
    assert by_words["parts.U1.power_w"].turns[0][1] == pytest.approx(0.3)


def test_a_wider_tolerance_widens_the_band_by_what_it_adds():
    answer, wide = (toleranced(SMALL, {"parts.U1.power_w": {"pct": pct}}) for pct in (0, 30))
    node = answer.network.places.parts["U1"].junction
    narrow, wider = with_bands(answer), with_bands(wide)
    effect = 0.3 * 1.5 * unit_power(answer, node)
    assert wider.band_k(node) ** 2 - narrow.band_k(node) ** 2 == pytest.approx(effect**2, rel=1e-4)


def unit_power(answer, node):
    """Rise of a node per watt in U1, by solving again [K/W]."""
    high, low = (
        solved_again(answer, changed(SMALL, ("parts", "U1", "power_w"), 1.5 + step))[node]
        for step in (1e-3, -1e-3)
    )
    return (high - low) / 2e-3


@pytest.mark.parametrize(
    ("path", "unit"),
    [
        (("parts", "U1", "power_w"), "W"),
        (("parts", "U1", "power_by_mode_w", "busy"), "W"),
        (("surroundings", "air_c"), "K"),
        (("walls", "top", "mounting", "contact_w_per_m2k"), "W/m2K"),
        (("finishes", "a", "emissivity"), ""),
        (("parts", "U1", "pad", "contact_mm2k_per_w"), "mm2K/W"),
    ],
)
def test_units_of_tolerances(path, unit):
    assert unit_of(path) == unit


# Monte Carlo --------------------------------------------------------------------------------


# Draws solved together, which saves time; those among which one is far off are solved alone.
TOGETHER = 20
# Draws without a balance may be left out: air seen off by kelvins has corners where films turn round.
LEFT_OUT = 0.01


def spread(answer, found, draws, seed):
    """Half-widths at k = 2 of temperatures with every cause drawn, from the full network [K]."""
    random = np.random.default_rng(seed)
    # Half-widths are two standard deviations.
    amounts = found.turns.T @ random.normal(0.0, 0.5, (len(found.causes), draws))

    def read(some):
        network = found.knobs.moved(some)
        start = np.repeat(answer.solution.rise[network.unknown], some.shape[1], axis=1)
        solution = solve_nearby(network, start, answer.inverse)
        if some.shape[1] > 1 and not solution.converged:
            return np.concatenate([read(one[:, None]) for one in some.T], axis=1)
        own = solution.rise[found.adjoint.nodes] + found.readings.T @ some
        return np.where(solution.each_converged, own + network.reference_k, np.nan)

    every = [read(some) for some in np.split(amounts, draws // TOGETHER, axis=1)]
    found_any = np.concatenate(every, axis=1)
    assert np.isnan(found_any[0]).mean() <= LEFT_OUT
    return 2.0 * np.nanstd(found_any, axis=1)


MONTE_CARLO = patched(
    SMALL,
    {
        "surroundings": {"sky": "clear", "sun_w_per_m2": {"top": 600}},
        "walls": {"back": {"mounting": {"kind": "against_surface", "gap_mm": 10, "surface_c": 30}}},
        "parts": {"U2": {"theta_jb_k_per_w": 8, "theta_jc_top_k_per_w": 20}},
    },
)


def test_bands_are_those_of_a_monte_carlo_run_of_the_network():
    """600 draws tell a half-width to 6 % at 95 %."""
    answer = solved(MONTE_CARLO, COARSE)
    found = with_bands(answer)
    drawn = spread(answer, found, 600, 1)
    first_order = np.array([found.band_k(int(node)) for node in found.adjoint.nodes])
    assert first_order.min() > 0.5
    np.testing.assert_allclose(drawn, first_order, rtol=0.1)


def test_bands_of_stated_numbers_are_those_of_drawn_documents():
    """The document itself is drawn, built and solved again, 150 times; 12 % at 95 %."""
    tolerances = {
        "parts.*.power_w": {"pct": 10},
        "parts.*.theta_jb_k_per_w": {"pct": 20},
        "boards.main.other_power_w": {"pct": 20},
        "finishes.coat.emissivity": {"plus_minus": 0.05},
        "surroundings.air_c": {"plus_minus": 1},
    }
    document = patched(
        MONTE_CARLO,
        {
            "finishes": {"coat": {"emissivity": 0.9}},
            "defaults": {"wall": {"finish_outside": "coat"}},
        },
    )
    answer = toleranced(document, tolerances)
    found = with_bands(answer)
    stated = [cause.basis == "stated" for cause in found.causes]
    assert sum(stated) == 7
    first_order = np.sqrt((found.effects[stated] ** 2).sum(axis=0))
    random, drawn = np.random.default_rng(2), []
    for _ in range(150):
        made = document
        for tolerance in answer.case.tolerances:
            by = random.normal(0.0, tolerance.half_width / 2)
            made = changed(made, tolerance.path, tolerance.value + by)
        drawn.append(solved_again(answer, made)[found.adjoint.nodes])
    np.testing.assert_allclose(2 * np.std(drawn, axis=0), first_order, rtol=0.12)


# First order --------------------------------------------------------------------------------

# The joint under the part, and with it most of its rise, is known to half of it.
UNCERTAIN = box(
    boards={"main": board()},
    parts={
        "U1": part(length_mm=6, width_mm=6, power_w=1, limits={"case": {"max_c": 200}}),
    },
)

# Leakage on the way to runaway: every watt more makes more.
GROWING = patched(
    UNCERTAIN,
    {"parts": {"U1": {"power_w": 0.3, "power_doubling_k": 60, "bottom_contact_k_per_w": 30}}},
)


@pytest.mark.parametrize(
    "document", [UNCERTAIN, GROWING, MONTE_CARLO], ids=["uncertain", "growing", "usual"]
)
def test_ends_of_a_band_to_second_order_are_those_of_solving_there(document):
    answer = solved(document, COARSE)
    found = with_bands(answer)
    node = answer.network.places.parts["U1"].case
    found = bands(answer, [node])
    band = found.band_k(node)
    low, high = found.ends(node)
    direction = found.turns.T @ (found.effects[:, 0] / band)
    network = found.knobs.moved(direction[:, None] * np.array([-1.0, 1.0]))
    start = np.repeat(answer.solution.rise[network.unknown], 2, axis=1)
    moved = solve_nearby(network, start, answer.inverse)
    assert moved.converged
    exact = moved.rise[node] + network.reference_k - answer.solution.rise[node, 0]
    exact = exact - answer.network.reference_k
    # What the first order leaves is found to a half.
    assert low == pytest.approx(exact[0], abs=abs(exact[0] + band) / 2 + 0.02 * band)
    assert high == pytest.approx(exact[1], abs=abs(exact[1] - band) / 2 + 0.02 * band)


def test_the_check_says_where_first_order_is_not_fair():
    finding = assess(solved(GROWING, COARSE))
    check = finding.band_check
    assert check is not None
    assert not check.fair
    assert check.upper_k > 1.1 * check.band_k
    assert any(line.startswith("the band of U1 case, +-") for line in finding.warnings)
    steady = patched(GROWING, {"parts": {"U1": {"power_doubling_k": None}}})
    finding = assess(solved(steady, COARSE))
    assert finding.band_check is not None
    assert finding.band_check.fair
    ends = -finding.band_check.lower_k, finding.band_check.upper_k
    assert ends == pytest.approx([finding.band_check.band_k] * 2, rel=FAIR_SHARE)
    assert not any("to first order" in line for line in finding.warnings)


def test_contributions_add_up_to_the_band():
    found = with_bands(solved(SMALL, COARSE))
    node = found.solved.network.places.parts["U1"].junction
    rows = found.contributions(node)
    sizes = [abs(row.effect_k) for row in rows]
    assert sizes == sorted(sizes, reverse=True)
    assert sum(size**2 for size in sizes) <= found.band_k(node) ** 2 * (1 + 1e-12)
    assert sum(size**2 for size in sizes) > 0.8 * found.band_k(node) ** 2
    assert rows[0].cause in {"power of U1", "theta_jb of U1"}


# Worth having -------------------------------------------------------------------------------


@pytest.mark.parametrize("emissivity", [0.9])
def test_band_of_a_sealed_painted_box_with_known_powers(emissivity):
    """Of parts at most a tenth of the rise, of the mean air a quarter; wanted are at most 30 %."""
    document = patched(
        SMALL,
        {
            "finishes": {"paint": {"emissivity": emissivity}},
            "defaults": {"wall": {"finish_outside": "paint"}},
            "boards": {"main": {"other_power_w": 8}},
            "parts": {"U2": {"bottom_contact_k_per_w": 10}},
        },
    )
    known = {
        "parts.*.power_w": {"pct": 2},
        "boards.*.other_power_w": {"pct": 2},
        "surroundings.air_c": {"plus_minus": 0.5},
    }
    answer = toleranced(document, known)
    found = with_bands(answer)
    places = answer.network.places
    for node in (places.air, *(each.junction for each in places.parts.values())):
        rise = answer.solution.rise[node, 0]
        assert rise > 10
        assert 0.05 * rise < found.band_k(node) < (0.25 if node == places.air else 0.1) * rise
    # A single height of the air is told worse: that is what the experiments say of ours.
    shares = [found.band_k(node) / answer.solution.rise[node, 0] for node in places.air_nodes]
    assert 0.2 < min(shares) < max(shares) < 0.45


def test_quantiles_are_those_of_printed_tables():
    for share, z in (
        (0.5, 0.0),
        (0.75, 0.67449),
        (0.9, 1.28155),
        (0.95, 1.64485),
        (0.999, 3.09023),
    ):
        assert normal_quantile(share) == pytest.approx(z, abs=1e-5)
