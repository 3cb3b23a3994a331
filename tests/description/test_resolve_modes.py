"""Power in the mode that applies, what is passed on, and readings taken under a condition."""

import pytest
from support.cases import board, box, case_of, errors_of, part, patched


def assumptions(document) -> tuple[str, ...]:
    return case_of(document).assumptions


def with_part(**changes):
    return box(boards={"main": board()}, parts={"U1": part(**changes)})


TYPE = {"length_mm": 5, "width_mm": 4, "height_mm": 1, "power_w": 2}
TYPED = {"type": "kind", "place": "main", "side": "front", "at_mm": [60, 50]}


# Power by mode ------------------------------------------------------------------------------

MODES = {"typical": {"power_pct": 60}, "busy": {}, "off": {"power_pct": 0}}


@pytest.mark.parametrize(
    ("mode", "part_w", "board_w"),
    [(None, 2, 1), ("typical", 0.5, 0.6), ("busy", 2, 0.25), ("off", 0, 0)],
)
def test_power_by_mode(mode, part_w, board_w):
    document = box(
        modes=MODES,
        boards={"main": board(other_power_w=1, other_power_by_mode_w={"busy": 0.25})},
        parts={"U1": part(power_w=2, power_by_mode_w={"typical": 0.5})},
    )
    case = case_of(patched(document, {"mode": mode}))
    assert case.mode == mode
    assert case.parts["U1"].power_w == pytest.approx(part_w)
    assert case.boards["main"].other_power_w == pytest.approx(board_w)


def test_power_by_mode_of_a_type_and_of_its_part():
    document = box(
        modes=MODES,
        mode="typical",
        boards={"main": board()},
        part_types={"kind": {**TYPE, "power_by_mode_w": {"typical": 0.7, "busy": 3}}},
        parts={"U1": TYPED, "U2": patched(TYPED, {"power_by_mode_w": {"typical": 0.2}})},
    )
    parts = case_of(document).parts
    assert (parts["U1"].power_w, parts["U2"].power_w) == (0.7, 0.2)
    busy = case_of(patched(document, {"mode": "busy"})).parts
    assert (busy["U1"].power_w, busy["U2"].power_w) == (3, 3)


def test_a_part_with_power_by_mode_only_is_not_without_power():
    document = patched(with_part(power_by_mode_w={"busy": 1}), {"modes": MODES, "mode": "off"})
    assert errors_of(document) == {}
    assert "no power stated" not in " ".join(assumptions(document))


# Requirements and readings ------------------------------------------------------------------


def test_requirements_and_names_are_passed_on():
    document = box(requirements={"margin_k": 5, "confidence_pct": 90})
    case = case_of(document, "hot")
    assert (case.title, case.condition, case.option) == ("A box", "hot", None)
    assert (case.margin_k, case.confidence_pct) == (5, 90)
    assert (case_of(box()).margin_k, case_of(box()).confidence_pct) == (None, None)


def test_readings_belong_to_their_condition():
    run = {
        "parts": {"U1": {"case": 60, "junction": 70}},
        "walls": {"top": {"outside_c": 40}},
        "air_c": 45,
    }
    document = patched(
        with_part(), {"measured": {"a": {"condition": "hot", **run}, "b": {"air_c": 30}}}
    )
    hot = case_of(document, "hot").readings
    assert [(row.run, row.kind, row.name, row.point, row.measured_c) for row in hot] == [
        ("a", "part", "U1", "case", 60),
        ("a", "part", "U1", "junction", 70),
        ("a", "wall", "top", "outside", 40),
        ("a", "air", "air", "mean", 45),
    ]
    base = case_of(document).readings
    assert [(row.run, row.measured_c) for row in base] == [("b", 30)]
