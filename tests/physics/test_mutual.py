"""Mutual rise of sources on a plate against the rise of one, averaged over the other."""

import numpy as np
import pytest

from enclosure_check.physics.conduction import plate_source_rise, spreading_resistance
from enclosure_check.physics.mutual import mutual_rise

PLATE, FILM = (0.1, 0.08), 20.0
SOURCE = ((0.01, 0.02), (0.03, 0.05))
OTHERS = {
    "beside": ((0.022, 0.034), (0.031, 0.047)),
    "touching": ((0.02, 0.03), (0.05, 0.06)),
    "far": ((0.06, 0.08), (0.06, 0.07)),
    "over each other": ((0.015, 0.03), (0.02, 0.035)),
    "narrow, beside": ((0.0205, 0.0215), (0.03, 0.04)),
    "narrow, inside": ((0.012, 0.018), (0.0395, 0.0405)),
    "at the edges": ((0.0, 0.01), (0.07, 0.08)),
}


def between(one, other, kt):
    return float(mutual_rise([one], [other], [PLATE], [kt], FILM)[0])


def averaged(one, other, kt, count=60):
    """Mean over one rectangle of the rise that the other makes, over the plate's own mean."""
    places = [low + (high - low) * (np.arange(count) + 0.5) / count for low, high in one]
    x, y = np.meshgrid(*places, indexing="ij")
    sizes, middles = np.diff(other)[:, 0], np.mean(other, axis=1)
    rise = plate_source_rise(x, y, *sizes, *middles, *PLATE, kt, FILM)
    return float(rise.mean()) - 1 / (FILM * PLATE[0] * PLATE[1])


@pytest.mark.parametrize("other", OTHERS.values(), ids=OTHERS)
@pytest.mark.parametrize("kt", [0.4, 0.032, 5e-4])
def test_mutual_rise_is_the_mean_of_the_rise(kt, other):
    exact = averaged(SOURCE, other, kt)
    # The mean of 60 x 60 points and both series truncated: 0.5 % is what the function promises.
    assert between(SOURCE, other, kt) == pytest.approx(exact, rel=5e-3)
    assert between(other, SOURCE, kt) == pytest.approx(between(SOURCE, other, kt), rel=1e-9)


@pytest.mark.parametrize("kt", [0.4, 0.032, 5e-4])
def test_rise_under_itself_is_the_spreading_resistance(kt):
    (low_x, high_x), (low_y, high_y) = SOURCE
    alone = spreading_resistance(
        high_x - low_x,
        high_y - low_y,
        0.5 * (low_x + high_x),
        0.5 * (low_y + high_y),
        *PLATE,
        kt,
        FILM,
    )
    assert between(SOURCE, SOURCE, kt) == pytest.approx(float(alone), rel=1e-3)


def test_no_difference_under_a_source_as_large_as_the_plate():
    whole = ((0.0, 0.1), (0.0, 0.08))
    assert between(SOURCE, whole, 0.032) == pytest.approx(0.0, abs=1e-6)


def test_far_apart_on_laminate_nothing_overflows():
    """Without the mean of the plate nothing is left: exp(-200) of it."""
    sources = ((0.0, 0.001), (0.0, 0.001)), ((0.999, 1.0), (0.999, 1.0))
    found = mutual_rise([sources[0]], [sources[1]], [(1.0, 1.0)], [5e-4], FILM)
    assert found == pytest.approx(-1 / FILM, rel=1e-6)
