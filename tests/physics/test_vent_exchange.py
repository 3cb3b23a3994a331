"""Two-way exchange through a level opening: the published regimes, and limits."""

import numpy as np
import pytest

from enclosure_check.physics.air import GRAVITY
from enclosure_check.physics.vent_exchange import exchange_flow


def factor(slender):
    """Flow over ``sqrt(g' D^5)`` of an opening of a length over diameter [-]."""
    diameter, light = 0.05, 0.05
    found = exchange_flow(diameter, slender * diameter, light)
    return float(found.exchange / np.sqrt(GRAVITY * light * diameter**5))


def test_thin_opening():
    """Epstein (1988), regime I: 0.055 for L/D below 0.15 (from memory)."""
    assert factor(0.01) == pytest.approx(0.055, rel=0.02)


def test_most_is_exchanged_where_length_and_diameter_are_alike():
    """His data peak about 0.1 near L/D = 0.6 (from memory)."""
    slender = np.geomspace(0.01, 10, 60)
    flows = np.array([factor(each) for each in slender])
    assert 0.3 < slender[flows.argmax()] < 1.2
    assert flows.max() == pytest.approx(0.1, rel=0.15)


def test_long_opening_exchanges_by_turbulent_diffusion():
    """His regime IV: ``0.32 (D/L)^(3/2)`` (from memory)."""
    assert factor(20.0) == pytest.approx(0.32 * 20**-1.5, rel=0.05)


def test_heavier_air_below_stays_there():
    np.testing.assert_array_equal(exchange_flow(0.05, 0.002, np.array([-0.1, 0.0])).exchange, 0.0)


def test_grows_with_the_root_of_the_difference_and_is_rounded_near_none():
    light = np.array([1e-6, 1e-4, 1e-2, 4e-2])
    flows = exchange_flow(0.05, 0.002, light).exchange
    assert flows[3] / flows[2] == pytest.approx(2.0, rel=1e-3)
    assert (flows <= exchange_flow(0.05, 0.002, 1.0).exchange * np.sqrt(light)).all()
    assert flows[0] > 0
