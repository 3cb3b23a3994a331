"""Causes that rest on our own forms: what they move, and where there is none of them."""

import numpy as np
import pytest
from support.cases import COARSE, board, box, part, patched, solved

from enclosure_check.findings.causes import CAUSES
from enclosure_check.findings.confidence import bands
from enclosure_check.findings.quantities import quantities
from enclosure_check.network.inside_air import InsideAir
from enclosure_check.records import replace

UPRIGHT = box(
    boards={"main": board(other_power_w=4)},
    parts={"U1": part(power_w=2), "U2": part(power_w=1, at_mm=[20, 20])},
)
FLAT = box(boards={"main": board(parallel_to="bottom", other_power_w=4)})
AIR = {"air_below", "air_above"}


def families(answer):
    return {each.family for each in quantities(answer)[1]}


def film_knob(answer, family):
    """Row of film knobs that a family turns, and the knobs."""
    knobs, found = quantities(answer)
    knob, _ = next(each for each in found if each.family == family).effects[0]
    return knob - knobs.starts[1], knobs


def inside(answer):
    return next(kind for kind in answer.network.kinds if isinstance(kind, InsideAir))


# Faces of boards ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("document", "family", "largest"),
    [(UPRIGHT, "board_rim", "rim"), (FLAT, "board_rim", "rim"), (FLAT, "board_top", "top side")],
)
def test_what_one_face_gains_the_others_give_up(document, family, largest):
    answer = solved(document, COARSE)
    row, knobs = film_knob(answer, family)
    kind, names = inside(answer), inside(answer).surfaces.names
    turned = knobs.films[row]
    assert names[int(np.argmax(turned))] == f"board main, {largest}"
    assert turned.max() == 1.0
    assert all(name.startswith("board main") for name, by in zip(names, turned, strict=True) if by)
    # All faces together give off what they did.
    count = len(kind.cell)
    more = replace(kind, factor=kind.factor * (1.0 + 1e-4 * turned[:, None]))
    rise, reference = answer.solution.rise, answer.network.reference_k
    change = (more.evaluate(rise, reference) - kind.evaluate(rise, reference))[: 2 * count, 0]
    by_face = np.bincount(np.tile(kind.side_surface[kind.side], 2), change, len(names))
    gained = by_face[int(np.argmax(turned))]
    assert gained > 0
    assert abs(by_face.sum()) < 0.02 * gained


def test_upright_boards_have_no_upper_side():
    found = families(solved(UPRIGHT, COARSE))
    assert "board_rim" in found
    assert "board_top" not in found


# Gaps -----------------------------------------------------------------------------------------


def test_close_faces_are_known_less_than_far_ones():
    def filled(distance):
        document = patched(UPRIGHT, {"boards": {"main": {"from_walls_mm": {"front": distance}}}})
        answer = solved(document, COARSE)
        row, knobs = film_knob(answer, "gap_films")
        return knobs.films[row][inside(answer).surfaces.names.index("board main, front side")]

    near, middle, far = (filled(distance) for distance in (5, 15, 45))
    assert 1.0 >= near > middle > far > 0.0
    assert far < 0.3


# Air at a height ------------------------------------------------------------------------------


def test_readings_of_the_air_shift_as_the_rule_says():
    answer = solved(UPRIGHT, COARSE)
    nodes = answer.network.places.air_nodes.tolist()
    found = bands(answer, [*nodes, answer.network.places.air])
    words = [cause.words for cause in found.causes]
    row, knobs = film_knob(answer, "air_above")
    difference = knobs.offsets[row].max()
    kind, rise = inside(answer), answer.solution.rise
    warmest, coldest = (pick(rise[kind.surfaces.node]) for pick in (np.max, np.min))
    assert 0.1 * (warmest - coldest) < difference < warmest - coldest
    for family, low, high in (("air_below", 1, 0), ("air_above", 0, 1)):
        cause, effects = CAUSES[family], found.effects[words.index(CAUSES[family].words)]
        shift = cause.half_width / 100 * difference
        by_node = [effects[found.adjoint.nodes.tolist().index(node)] for node in nodes]
        np.testing.assert_allclose(by_node, [low * shift] * 4 + [high * shift] * 4, atol=1e-9)
        mean = effects[found.adjoint.nodes.tolist().index(answer.network.places.air)]
        assert 0.4 * shift < mean < 0.6 * shift


def test_no_such_cause_in_stirred_air_or_where_all_is_as_warm():
    assert families(solved(UPRIGHT, COARSE)) >= AIR
    stirred = patched(UPRIGHT, {"stirred": True})
    assert not families(solved(stirred, COARSE)) & AIR
    cold = patched(UPRIGHT, {"boards": {"main": {"other_power_w": 0}}})
    cold["parts"] = {}
    answer = solved(cold, COARSE)
    found = bands(answer, answer.network.places.air_nodes.tolist())
    own = [
        number
        for number, cause in enumerate(found.causes)
        if cause.words in {CAUSES[family].words for family in AIR}
    ]
    assert np.abs(found.effects[own]).max(initial=0.0) < 1e-6


# Laminar or turbulent -------------------------------------------------------------------------

TALL = box(box={"width_mm": 600, "depth_mm": 400, "height_mm": 1000})
TALL["boards"] = {"main": board(other_power_w=250)}


def test_small_boxes_are_in_no_doubt_and_tall_ones_are():
    assert "transition" not in families(solved(UPRIGHT, COARSE))
    answer = solved(TALL, COARSE)
    assert "transition" in families(answer)
    node = answer.network.places.wall_outside["left"].mean
    found = bands(answer, [node])
    effect = found.effects[[each.words for each in found.causes].index(CAUSES["transition"].words)]
    assert abs(effect[0]) > 0.3
    assert found.band_k(node) > abs(effect[0])


def test_wind_leaves_less_of_the_doubt():
    def doubt(wind):
        document = patched(TALL, {"surroundings": {"wind_m_per_s": wind}})
        answer = solved(document, COARSE)
        found = next(each for each in quantities(answer)[1] if each.family == "transition")
        return max(
            abs(share) for knob, share in found.effects if knob < quantities(answer)[0].count
        )

    assert doubt(3.0) < 0.5 * doubt(0.0)
