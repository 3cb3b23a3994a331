"""Wind in the document: defaults, bounds, sides it cannot come from, and what is said of it."""

import pytest
from support.cases import box, case_of, errors_of, patched

MOUNTED = box(
    walls={
        "back": {"mounting": {"kind": "against_surface"}},
        "left": {"mounting": {"kind": "insulated"}},
    }
)


def in_wind(*, document=MOUNTED, **surroundings):
    return patched(document, {"surroundings": surroundings})


def said(document) -> list[str]:
    return [line for line in case_of(document).assumptions if "wind" in line]


def test_still_air_unless_given():
    around = case_of(MOUNTED).surroundings
    assert (around.wind_m_per_s, around.wind_from) == (0.0, None)
    assert said(MOUNTED) == []
    assert said(in_wind(wind_m_per_s=0, wind_from="front")) == []


def test_wind_from_any_side():
    document = in_wind(wind_m_per_s=2.5)
    around = case_of(document).surroundings
    assert (around.wind_m_per_s, around.wind_from) == (2.5, None)
    first, second = said(document)
    assert first == (
        "wind of 2.5 m/s past the box, from any side, each wall counting with its longer edge; "
        "still air is the hot case"
    )
    assert second == "no wind at walls that are not in open air (left, back)"


def test_wind_from_one_side():
    document = in_wind(wind_m_per_s=2, wind_from="front")
    assert case_of(document).surroundings.wind_from == "front"
    assert said(document)[0].startswith("wind of 2 m/s past the box, from the front, along that")
    free = in_wind(wind_m_per_s=2, wind_from="top", document=box())
    assert len(said(free)) == 1


def test_no_wind_comes_through_what_a_wall_is_mounted_on():
    errors = errors_of(in_wind(wind_m_per_s=2, wind_from="back"))
    assert set(errors) == {"surroundings.wind_from"}
    assert errors["surroundings.wind_from"].startswith(
        "given 'back', but the back wall has its mounting against_surface there"
    )
    assert errors_of(in_wind(wind_m_per_s=2, wind_from="left")) == {}


@pytest.mark.parametrize("speed", [-0.1, 60.5, float("nan"), "strong"])
def test_speeds_out_of_sense_are_refused(speed):
    with pytest.raises(ValueError, match="wind_m_per_s"):
        case_of(in_wind(wind_m_per_s=speed))


def test_sides_that_are_none_are_refused():
    with pytest.raises(ValueError, match="wind_from"):
        case_of(in_wind(wind_m_per_s=1, wind_from="north"))


def test_wind_does_not_drive_openings_and_says_so():
    slot = {"kind": "hole", "width_mm": 40, "height_mm": 5}
    openings = {"low": slot, "shut": {**slot, "blocked_pct": 100, "at_mm": [100, 100]}}
    vented = patched(box(), {"walls": {"front": {"openings": openings}}})
    assert "wind" not in " ".join(case_of(vented).assumptions)
    assert said(in_wind(wind_m_per_s=2, document=vented))[1:] == [
        "wind neither drives nor hinders the flow through openings, though it may (front/low)"
    ]
