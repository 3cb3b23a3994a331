"""The air in steel cabinets beside two methods of practice, which differ by a third themselves."""

import pytest
from published.cabinets import BARE, CABINETS, PAINTED, RISE_K, Cabinet, iec_rise_k, ours

named = pytest.mark.parametrize("cabinet", CABINETS, ids=[each.name for each in CABINETS])


@pytest.mark.parametrize(
    ("cabinet", "area"),
    [
        # Worked numbers of trade publications for DIN 57660-500 / VDE 0660-500.
        (Cabinet(2.0, 1.2, 0.6, True), 6.528),
        (Cabinet(2.0, 0.6, 0.5, False), 4.38),
        (Cabinet(2.0, 0.8, 0.6, False), 5.712),
    ],
)
def test_effective_area(cabinet, area):
    assert cabinet.effective_area == pytest.approx(area, abs=1e-9)


@pytest.mark.parametrize(
    ("area", "power", "rise"), [(0.396, 40, 23.7), (0.444, 40, 21.8), (6.528, 500, 19.9)]
)
def test_iec_method_as_recalled(area, power, rise):
    """Recomputed by hand from the constants recalled."""
    assert iec_rise_k(area, power) == pytest.approx(rise, abs=0.15)


@named
def test_air_lies_between_the_methods(cabinet):
    """When little is radiated straight to the walls, as both methods take the heat to go.

    From the area method's rise to 5 % above that of IEC TR 60890.
    """
    found = ours(cabinet, BARE)
    assert found.straight < 0.25
    assert RISE_K <= found.middle_k <= 1.05 * iec_rise_k(cabinet.effective_area, cabinet.power_w)


@named
def test_what_is_radiated_straight_does_not_warm_the_air(cabinet):
    radiant, convective = ours(cabinet, PAINTED), ours(cabinet, BARE)
    assert 0.6 < radiant.straight < 0.8
    assert radiant.middle_k < 0.85 * convective.middle_k
    assert radiant.top_k < convective.top_k
