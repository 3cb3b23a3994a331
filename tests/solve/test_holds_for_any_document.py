"""Physics that must hold for any sealed box, whatever is in it.

Documents are made at random from a number; hypothesis chooses the numbers (the same in every run)
and shows the one that fails.
"""

import random
from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st
from support.cases import (
    COARSE,
    Data,
    board,
    box,
    case_of,
    network_of,
    part,
    patched,
    solved,
)
from support.mirrored import mirrored
from support.random_documents import random_document

from enclosure_check.description.frames import wall_pair
from enclosure_check.description.names import WALL_NAMES
from enclosure_check.findings.heat import heat_balance, wall_findings
from enclosure_check.findings.solved import Solved
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import solve_steady

seeds = st.integers(0, 2**32 - 1)
# A number is as good as another: there is nothing to make smaller in one that fails.
often = settings(
    max_examples=6,
    deadline=None,
    derandomize=True,
    database=None,
    phases=(Phase.generate,),
)
rarely = settings(often, max_examples=3)

# What the solver may leave: 1e-9 of the heat, over no less than a few milliwatts per kelvin.
SOLVED_K = 1e-5


def document(seed: int) -> Data:
    return random_document(random.Random(seed))


@often
@given(seeds)
def test_the_balance_of_the_whole_box_closes(seed):
    answer = solved(document(seed), COARSE)
    balance = heat_balance(answer, wall_findings(answer))
    flows = float(answer.solution.heat_w[0])
    # What the criterion allows: a millionth of the heat that flows.
    assert abs(balance.imbalance_w) <= 1e-6 * max(flows, 1e-4)
    put_in = balance.generated_w + balance.sun_w
    assert put_in == pytest.approx(sum(answer._sources.values()), rel=1e-12)


@rarely
@given(seeds, st.sampled_from([1.01, 1.3, 3.0]))
def test_more_watts_warm_their_own_part_and_leave_the_box(seed, factor):
    """Elsewhere they may cool: a hotter stream lifts its heat past a layer of air."""
    network = network_of(document(seed), COARSE)
    sources = network.sources
    junctions = {nodes.junction for nodes in network.places.parts.values()}
    own = [row for row, node in enumerate(sources.node) if node in junctions]
    if not own:
        return
    which = random.Random(seed).choice(own)
    power = sources.power.copy()
    power[which] *= factor
    hotter = replace(network, sources=replace(sources, power=power))
    less, more = solve_steady(network), solve_steady(hotter)
    assert less.converged
    if more.converged:
        node = sources.node[which]
        assert more.rise[node, 0] > less.rise[node, 0]
        extra = heat_put_in(hotter, more.rise) - heat_put_in(network, less.rise)
        gone = heat_gone_out(hotter, more.rise) - heat_gone_out(network, less.rise)
        assert extra > 0
        # A millionth of the heat that flows may be left, of each.
        assert gone == pytest.approx(extra, abs=2e-6 * max(float(more.heat_w[0]), 1e-4))


def heat_put_in(network: Network, rise: np.ndarray) -> float:
    return float(network.sources.heat(rise[network.sources.node], network.reference_k).sum())


def heat_gone_out(network: Network, rise: np.ndarray) -> float:
    """What enters nodes of given temperature, by every kind of link [W]."""
    total = 0.0
    for kind in network.kinds:
        heat = kind.evaluate(rise, network.reference_k)[:, 0]
        real = kind.b != network.nowhere
        total += heat[network.fixed[kind.b] & real].sum() - heat[network.fixed[kind.a]].sum()
    return float(total)


@often
@given(seeds, st.floats(0.5, 15))
def test_warmer_surroundings_warm_the_box_and_its_parts(seed, shift):
    """All surroundings as much; a layer of air here or there need not follow."""
    cool = document(seed)
    warm = patched(cool, {})
    around = warm["surroundings"]
    for key in ("air_c", "radiant_c", "sky_c"):
        if key in around:
            around[key] += shift
    for wall in warm["walls"].values():
        if "surface_c" in wall.get("mounting", {}):
            wall["mounting"]["surface_c"] += shift
    network = network_of(warm, COARSE)
    solution = solve_steady(network)
    if solution.converged:
        before = solved(cool, COARSE)
        after = solution.rise + network.reference_k
        gain = (after - before.solution.rise - before.network.reference_k)[:, 0]
        places = network.places
        surfaces = [*places.wall_outside.values(), *places.wall_inside.values()]
        nodes = [plate.mean for plate in [*surfaces, *places.boards.values()]]
        nodes += [part.junction for part in places.parts.values()]
        assert gain[nodes].min() > 0


def without_sources(seed: int) -> Data:
    """The same box with nothing on and nothing around it warmer or colder than the air."""
    made = document(seed)
    around = made["surroundings"]
    made["surroundings"] = {"air_c": around["air_c"], "altitude_m": around["altitude_m"]}
    for wall in made["walls"].values():
        wall.get("mounting", {}).pop("surface_c", None)
    made["mode"] = "off"
    for row in [*made["boards"].values(), *made["parts"].values()]:
        row.pop("power_by_mode_w", None)
    return made


@often
@given(seeds)
def test_nothing_on_and_nothing_around_leaves_everything_at_ambient(seed):
    answer = solved(without_sources(seed), COARSE)
    assert np.abs(answer.solution.rise).max() == 0
    assert np.abs(answer.heat_w).max() == 0


@rarely
@given(seeds)
def test_an_outside_that_does_not_emit_does_not_radiate(seed):
    made = document(seed)
    made["finishes"]["mirror"] = {"emissivity": 0, "solar_absorptivity": 0.5}
    made["defaults"]["wall"]["finish_inside"] = made["defaults"]["wall"]["finish_outside"]
    made["defaults"]["wall"]["finish_outside"] = "mirror"
    for wall in made["walls"].values():
        wall["finish_outside"] = "mirror"
    answer = solved(made, COARSE)
    for name in WALL_NAMES:
        assert answer.flow(f"wall:{name}", "radiation_outside") == 0


@rarely
@given(seeds)
def test_a_little_emissivity_radiates_a_little(seed):
    """Radiation outside goes to nothing with the emissivity and does not jump there."""
    made = document(seed)
    found = []
    for emissivity in (0.0, 1e-6):
        made["finishes"]["own"] = {"emissivity": emissivity}
        for name in WALL_NAMES:
            made["walls"].setdefault(name, {})["finish_outside"] = "own"
            made["walls"][name]["finish_inside"] = "grey_paint"
        for row in made["parts"].values():
            row.pop("finish", None)
        found.append(solved(made, COARSE).solution.rise)
    # Rises up to some hundred kelvin, by a millionth of the radiation.
    assert np.abs(found[0] - found[1]).max() < 0.01


# Symmetry -----------------------------------------------------------------------------------


def swapped(names: dict[str, float], axis: int) -> dict[str, float]:
    first, second = wall_pair(axis)
    other = {first: second, second: first}
    return {
        " ".join(other.get(word, word) for word in key.split(" ")): value
        for key, value in names.items()
    }


def by_name(answer: Solved) -> dict[str, float]:
    """Temperatures of walls, boards, parts and the air by name; of plates their mean [C]."""
    places = answer.network.places
    nodes = {"air": places.air}
    for face, plates in (("outside", places.wall_outside), ("inside", places.wall_inside)):
        nodes |= {f"{name} {face}": plate.mean for name, plate in plates.items()}
    nodes |= {f"board {name}": plate.mean for name, plate in places.boards.items()}
    for name, own in places.parts.items():
        nodes |= {f"junction {name}": own.junction, f"case {name}": own.case}
    return {name: answer.at(node) for name, node in nodes.items()}


def dark(made: Data) -> Data:
    """Nothing radiates inside; rays round what stands between surfaces fall as the axes lie."""
    image = patched(made, {"finishes": {"mirror": {"emissivity": 0}}})
    image["defaults"]["wall"]["finish_inside"] = "mirror"
    image["defaults"]["board"] = {"finish": "mirror"}
    for wall in image["walls"].values():
        wall["finish_inside"] = "mirror"
    for row in image["parts"].values():
        row["finish"] = "mirror"
    return image


@pytest.mark.parametrize("axis", [0, 1, 2], ids=["left-right", "front-back", "bottom-top"])
@rarely
@given(seed=seeds)
def test_the_mirror_image_of_a_box_has_the_mirror_image_of_its_temperatures(axis, seed):
    made = dark(document(seed))
    found = by_name(solved(made, COARSE))
    image = by_name(solved(mirrored(made, axis), COARSE))
    assert swapped(image, axis) == pytest.approx(found, rel=0, abs=SOLVED_K)


@pytest.mark.parametrize("axis", [0, 1, 2], ids=["left-right", "front-back", "bottom-top"])
def test_with_radiation_inside_the_mirror_image_is_as_near_as_rays(axis):
    made = document(8)
    found = by_name(solved(made, COARSE))
    image = swapped(by_name(solved(mirrored(made, axis), COARSE)), axis)
    assert image.keys() == found.keys()
    hottest = max(found.values()) - made["surroundings"]["air_c"]
    assert hottest > 100
    assert max(abs(image[name] - value) for name, value in found.items()) < 0.003 * hottest


@pytest.mark.parametrize("axis", [0, 1, 2])
def test_a_mirror_image_is_another_document_and_its_own_mirror_image_the_first(axis):
    made = document(8)
    once = mirrored(made, axis)
    assert case_of(once).parts != case_of(made).parts
    again = case_of(mirrored(once, axis))
    for name, row in case_of(made).parts.items():
        assert again.parts[name].low_mm == pytest.approx(row.low_mm, abs=1e-9)
    assert again.up == pytest.approx(case_of(made).up, abs=1e-12)


def symmetric(**changes) -> Data:
    """A box that is its own mirror image left to right and front to back."""
    return box(
        boards={"main": board(parallel_to="bottom", length_mm=80, width_mm=80, other_power_w=5)},
        parts={"U1": part(side="top", at_mm=[40, 40], power_w=3)},
        **changes,
    )


def test_a_symmetric_box_has_a_symmetric_answer():
    # By rays round the board 0.03 K apart, without radiation inside exactly alike.
    for made, near in ((symmetric(), 0.05), (dark({"walls": {}, **symmetric()}), SOLVED_K)):
        names = by_name(solved(made))
        for one, other in (("left", "right"), ("front", "back")):
            for face in ("inside", "outside"):
                assert names[f"{one} {face}"] == pytest.approx(names[f"{other} {face}"], abs=near)
        assert names["left outside"] != pytest.approx(names["front outside"], abs=near)
        assert names["top outside"] != pytest.approx(names["bottom outside"], abs=0.2)


CUBE = {
    "title": "A cube",
    "defaults": {"wall": {"material": "pc_abs", "thickness_mm": 3, "finish_outside": "grey_paint"}},
    "box": {"width_mm": 120, "height_mm": 120, "depth_mm": 120},
    "surroundings": {"air_c": 20},
    "parts": {
        "B1": {
            "place": "air",
            "length_mm": 40,
            "width_mm": 40,
            "height_mm": 40,
            "power_w": 6,
        }
    },
}
# Which wall of a turned cube takes the place of which of an upright one.
TURNS = {
    (180, 0): {"top": "bottom", "bottom": "top", "front": "back", "back": "front"},
    (0, 180): {"top": "bottom", "bottom": "top", "left": "right", "right": "left"},
    (90, 0): {"top": "front", "front": "bottom", "bottom": "back", "back": "top"},
    (0, 90): {"top": "left", "left": "bottom", "bottom": "right", "right": "top"},
    (0, -90): {"top": "right", "right": "bottom", "bottom": "left", "left": "top"},
}


@pytest.mark.parametrize("turn", TURNS, ids=str)
def test_a_cube_gives_the_same_numbers_on_whichever_face_it_stands(turn):
    upright = by_name(solved(CUBE, COARSE))
    tilt = {"lean_back_deg": turn[0], "roll_right_deg": turn[1]}
    turned = by_name(solved(patched(CUBE, {"box": {"tilt": tilt}}), COARSE))
    assert upright["top outside"] - upright["bottom outside"] > 0.1
    # The body in the middle stands in the way of rays, which fall as the axes lie.
    near = 0.01
    for name in WALL_NAMES:
        stands_for = TURNS[turn].get(name, name)
        for face in ("inside", "outside"):
            expected = upright[f"{name} {face}"]
            assert turned[f"{stands_for} {face}"] == pytest.approx(expected, abs=near)
    assert turned["junction B1"] == pytest.approx(upright["junction B1"], abs=near)
    assert turned["air"] == pytest.approx(upright["air"], abs=near)


@pytest.mark.parametrize(
    ("mounted", "lean", "roll"),
    [("bottom", 0, 0), ("back", 0, 0), ("back", 45, 0), ("left", -40, 50), ("right", 10, 60)],
)
def test_a_cold_box_is_a_warm_one_upside_down(mounted, lean, roll):
    """With small differences: the film temperatures differ by them, and so the properties."""

    def rises(surface_c: float, lean: float, roll: float) -> np.ndarray:
        mounting = {"kind": "bolted_to", "contact_w_per_m2k": 30, "surface_c": surface_c}
        tilt = {"lean_back_deg": lean, "roll_right_deg": roll}
        made = patched(
            CUBE,
            {
                "parts": None,
                "box": {"depth_mm": 70, "width_mm": 160, "tilt": tilt},
                "walls": {mounted: {"mounting": mounting}},
            },
        )
        answer = solved(made, COARSE)
        plates = answer.network.places.wall_outside.values()
        cells = np.concatenate([plate.cells.ravel() for plate in plates])
        return answer.solution.rise[[*cells, answer.network.places.air], 0]

    warm = rises(20.5, lean, roll)
    # Up is (-sin roll, -sin lean cos roll, cos lean cos roll); this turns it round.
    cold = rises(19.5, lean - 180 if lean > 0 else lean + 180, -roll)
    assert np.abs(warm).max() > 0.15
    # 1 K at 293 K: 0.3 % of viscosity and expansion and of the fourth powers of radiation, of which
    # the rises see a part.
    np.testing.assert_allclose(cold, -warm, rtol=4e-3, atol=1e-6)
    # And it is not so the same way up: warm air rises, cold air falls.
    same_way = rises(19.5, lean, roll)
    assert np.abs(same_way + warm).max() > 2 * np.abs(cold + warm).max()


# Names and order ----------------------------------------------------------------------------


def reordered(made: Data, order: Callable[[list[str]], list[str]]) -> Data:
    """The same document with its boards, parts and walls in another order."""
    image = dict(made)
    for key in ("boards", "parts", "walls"):
        rows = made.get(key, {})
        image[key] = {name: rows[name] for name in order(list(rows))}
    return image


@rarely
@given(seeds)
def test_the_order_of_a_document_does_not_matter(seed):
    made = document(seed)
    # The order of rays and of what they meet shows in the fifth digit.
    hottest = max(by_name(solved(made, COARSE)).values()) - made["surroundings"]["air_c"]
    for each, near in ((dark(made), SOLVED_K), (made, SOLVED_K + 3e-5 * abs(hottest))):
        found = by_name(solved(each, COARSE))
        shuffled = by_name(solved(reordered(each, lambda names: names[::-1]), COARSE))
        assert shuffled == pytest.approx(found, rel=0, abs=near)


@rarely
@given(seeds)
def test_names_do_not_matter(seed):
    made = document(seed)
    boards = {name: f"sheet {index}" for index, name in enumerate(made["boards"])}
    parts = {name: f"thing {index}" for index, name in enumerate(made["parts"])}
    image = dict(made)
    image["boards"] = {boards[name]: row for name, row in made["boards"].items()}
    image["parts"] = {
        parts[name]: {**row, "place": boards.get(row["place"], row["place"])}
        for name, row in made["parts"].items()
    }
    found, renamed = solved(made, COARSE), solved(image, COARSE)
    for name, other in parts.items():
        for point in ("junction", "case"):
            node = getattr(found.network.places.parts[name], point)
            twin = getattr(renamed.network.places.parts[other], point)
            assert renamed.temperature_c[twin] == pytest.approx(
                found.temperature_c[node], abs=SOLVED_K
            )
