"""Power in against power out, beside the heat of all that is listed."""

import pytest
import yaml
from support.reports import SMALL

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.description.problems import DocumentError

# What SMALL's parts and boards turn to heat. [W]
POWER_W = 4.0


def document(tmp_path, budget, **more):
    board = {"parallel_to": "back", "length_mm": 80, "width_mm": 60, "other_power_w": POWER_W}
    data = {**SMALL, "parts": {}, "boards": {"only": board}, "power_budget": budget, **more}
    for key in ("conditions", "options", "measured"):
        if key not in more:
            data.pop(key, None)
    path = tmp_path / "box.yaml"
    path.write_text(yaml.safe_dump(data))
    return load_document(str(path))


def found(tmp_path, budget, **more):
    return check(document(tmp_path, budget, **more)).conditions


@pytest.mark.parametrize(
    ("power_in", "power_out", "tolerance", "agrees"),
    [
        (4, 0, 0, True),
        (10, 6, 0, True),
        (10, 5.5, 4.9, False),
        (10, 5.5, 5.1, True),
        (10, 6.6, 5.9, False),
        (10, 6.6, 6.1, True),
        (0, 0, 100, False),
    ],
)
def test_agrees_within_the_tolerance_of_the_power_in(
    tmp_path, power_in, power_out, tolerance, agrees
):
    budget = {"power_in_w": power_in, "power_out_w": power_out, "tolerance_pct": tolerance}
    (condition,) = found(tmp_path, budget)
    finding = condition.power_budget
    assert finding.generated_w == pytest.approx(POWER_W)
    assert finding.stays_w == pytest.approx(power_in - power_out)
    assert finding.unexplained_w == pytest.approx(power_in - power_out - POWER_W)
    assert finding.agrees is agrees
    assert any("power_budget" in line for line in condition.warnings) is not agrees


def test_the_warning_says_which_way(tmp_path):
    (condition,) = found(tmp_path, {"power_in_w": 10})
    assert any("6 W more stay in the box than" in line for line in condition.warnings)
    (condition,) = found(tmp_path, {"power_in_w": 1})
    assert any("turn 3 W more to heat than stay" in line for line in condition.warnings)


def test_nothing_stated_nothing_found(tmp_path):
    (condition,) = found(tmp_path, None)
    assert condition.power_budget is None


def test_modes_and_conditions(tmp_path):
    budget = {
        "power_in_w": 10,
        "power_out_w": 6,
        "power_in_by_mode_w": {"idle": 3},
        "power_out_by_mode_w": {"idle": 1},
    }
    conditions = {
        "full": {"mode": "full"},
        "half": {"mode": "half"},
        "idle": {"mode": "idle"},
        "other": {"mode": "full", "power_budget": {"power_out_w": 2}},
    }
    modes = {"full": {}, "half": {"power_pct": 50}, "idle": {"power_pct": 50}}
    stays = [
        each.power_budget.stays_w
        for each in found(tmp_path, budget, modes=modes, conditions=conditions)
    ]
    assert stays == pytest.approx([4, 2, 2, 8])


@pytest.mark.parametrize(
    ("budget", "field"),
    [
        ({"power_in_w": 3, "power_out_w": 4}, "power_budget.power_out_w"),
        ({"power_in_w": 3, "power_in_by_mode_w": {"no": 1}}, "power_budget.power_in_by_mode_w.no"),
        ({"power_out_w": 3}, "power_budget.power_in_w"),
    ],
)
def test_refused(tmp_path, budget, field):
    with pytest.raises(DocumentError) as caught:
        document(tmp_path, budget)
    assert [each.field for each in caught.value.problems] == [field]
