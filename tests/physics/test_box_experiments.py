"""The box model beside numerical experiments made for this project.

Laminar free convection round isothermal boxes, solved on fine grids with a general-purpose flow
solver; not measurements. Their uncertainty: cube 4 %, other totals 6 %, top face alone 20 %.
Convection only, at sea level.
"""

import pytest
from published.experiments_outside import CASES, parts, table

TOTAL_TOLERANCE = 0.10  # what the model promises: 6 % of the experiments and its own form
FACE_TOLERANCE = 0.12  # sides, bottom
FACE_TOLERANCE_W = 0.3  # [W], for faces that carry little
TOP_TOLERANCE = 0.35  # 20 % of the experiments; spread of the share 0.28 to 0.48 about 0.33


@pytest.mark.parametrize("case", CASES, ids=lambda c: c.name)
def test_total(case):
    assert parts(case)["total"] == pytest.approx(case.total_w, rel=TOTAL_TOLERANCE)


@pytest.mark.parametrize("case", CASES, ids=lambda c: c.name)
def test_split_over_the_faces(case):
    ours = parts(case)
    allowed = max(FACE_TOLERANCE * case.sides_w, FACE_TOLERANCE_W)
    assert ours["sides"] == pytest.approx(case.sides_w, abs=allowed)
    if case.bottom_w is None:
        assert ours["bottom"] == 0.0
    else:
        allowed = max(FACE_TOLERANCE * case.bottom_w, FACE_TOLERANCE_W)
        assert ours["bottom"] == pytest.approx(case.bottom_w, abs=allowed)
    assert ours["top"] == pytest.approx(case.top_w, rel=TOP_TOLERANCE)


def test_plain_plate_sums_are_worse():
    """The experiments' plate sums are 16 to 57 % too high: the model has to beat every one."""
    plates = {"X1": 66.2, "X2": 20.0, "X3": 29.6, "X5": 22.0, "X6": 16.1}
    for case in CASES:
        ours = abs(parts(case)["total"] - case.total_w)
        assert ours < 0.5 * abs(plates[case.name[:2]] - case.total_w)


def test_table_is_complete():
    rows = table()
    assert [row["case"] for row in rows] == [case.name for case in CASES]
    assert all(abs(row["total_difference_pct"]) <= 100 * TOTAL_TOLERANCE for row in rows)
    assert rows[-1]["bottom_difference_pct"] is None
