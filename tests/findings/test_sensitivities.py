"""Sensitivities of the smallest margin against documents changed and solved again."""

from pathlib import Path

import pytest
import yaml
from support.cases import board, box, part

from enclosure_check.check import check
from enclosure_check.cli import main
from enclosure_check.description.load import load_document
from enclosure_check.findings.rebuilt import Rebuilding, step_of

DOCUMENT = box(
    finishes={"coat": {"emissivity": 0.85, "solar_absorptivity": 0.4}},
    defaults={"wall": {"finish_outside": "coat"}},
    surroundings={"air_c": 30, "sun_w_per_m2": {"top": 300}},
    boards={
        "main": board(
            other_power_w=3,
            from_walls_mm={"front": 30},
            copper={"one": {"thickness_um": 35, "coverage_pct": 50}},
        )
    },
    parts={
        # Off the middle of the board, where another patch begins.
        "U1": part(
            at_mm=[48, 42],
            power_w=2,
            theta_jc_top_k_per_w=5,
            theta_jb_k_per_w=8,
            limits={"junction": {"max_c": 110}},
        ),
        "U2": part(at_mm=[20, 20], power_w=1, theta_jb_k_per_w=10),
    },
)
RIVER = Path(__file__).parent.parent.parent / "sample_boards" / "river_gauge_station.yaml"
TWO_CONDITIONS = {
    **DOCUMENT,
    "conditions": {
        "noon": {"surroundings": {"air_c": 45}},
        "night": {"surroundings": {"air_c": 5}},
    },
}
AT_REST = box(
    boards={"main": board(other_power_w=0, from_walls_mm={"front": 30})},
    parts={"U1": part(at_mm=[48, 42], power_w=0, limits={"case": {"min_c": -10}})},
    surroundings={"air_c": -5},
)
POWERS = {"boards.main.other_power_w", "parts.U1.power_w"}
# Derivatives are exact but for the step of the rebuilt difference and second order.
TOLERANCE = 0.01


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    return tmp_path_factory.mktemp("sensitivities")


def written(folder, document=DOCUMENT):
    path = folder / "box.yaml"
    path.write_text(yaml.safe_dump(document, sort_keys=False), "utf-8")
    return path


@pytest.fixture(scope="module")
def found(folder):
    report = check(load_document(str(written(folder))), sensitivities=1000)
    assert report.sensitivities is not None
    return report


def first(report, most):
    """So many of all numbers, the most first, of either kind."""
    rows = report.sensitivities.numbers
    return [
        row
        for kind in (False, True)
        for row in [each for each in rows if each.installation is kind][:most]
    ]


def margin_with(folder, path, value):
    """The smallest margin with one number changed, from the document on [K]."""
    document = yaml.safe_load(yaml.safe_dump(DOCUMENT))
    here = document
    for step in path[:-1]:
        here = here[int(step)] if isinstance(here, list) else here[step]
    here[int(path[-1]) if isinstance(here, list) else path[-1]] = value
    return check(load_document(str(written(folder, document)))).conditions[0].parts[0].margin_k


def moved_by(row):
    """The step of rebuilt differences, which some lengths need; small for all others."""
    if row.margin_per_pct_k is None:
        return 0.05
    path = tuple(row.path.split("."))
    return step_of(path, row.value) if row.route == "rebuilt" else 0.002 * row.value


def test_every_sensitivity_is_that_of_checking_again(folder, found):
    rows = found.sensitivities.numbers
    assert len(rows) > 20
    largest = max(abs(row.margin_per_pct_k) for row in rows if row.margin_per_pct_k is not None)
    for row in rows:
        path = row.path.split(".")
        step = moved_by(row)
        high, low = (margin_with(folder, path, row.value + sign * step) for sign in (1, -1))
        by_checking = (high - low) / (2 * step)
        rounding = TOLERANCE * largest * 100 / abs(row.value or 1.0) / 10
        assert row.margin_per_unit_k == pytest.approx(
            by_checking, rel=2 * TOLERANCE, abs=rounding
        ), row.path
        if row.margin_per_pct_k is not None:
            per_pct = row.margin_per_unit_k * abs(row.value) / 100
            assert row.margin_per_pct_k == pytest.approx(per_pct)


def test_both_routes_are_taken_where_they_belong(found):
    routes = {row.path: row.route for row in found.sensitivities.numbers}
    for path in ("parts.U1.power_w", "parts.U1.theta_jb_k_per_w", "finishes.coat.emissivity"):
        assert routes[path] == "adjoint"
    for path in ("box.width_mm", "boards.main.copper.one.coverage_pct", "boards.main.length_mm"):
        assert routes[path] == "rebuilt"


def test_installation_apart_and_most_first(found):
    rows = found.sensitivities.numbers
    apart = {row.path for row in rows if row.installation}
    assert {"surroundings.air_c", "surroundings.sun_w_per_m2.top"} <= apart
    assert not any(path.startswith(("parts", "box", "finishes")) for path in apart)
    design = [abs(row.margin_per_pct_k) for row in rows if not row.installation]
    assert design == sorted(design, reverse=True)
    assert not rows[0].installation
    limits = [row.path for row in rows if "limits" in row.path]
    assert limits == []


def test_so_many_as_asked_for(folder):
    document = load_document(str(written(folder)))
    few = check(document, sensitivities=2).sensitivities
    assert [row.installation for row in few.numbers] == [False, False, True, True]
    assert check(document).sensitivities is None


@pytest.mark.parametrize("most", [1, 3, 8])
def test_those_given_are_the_first_of_all(folder, found, most):
    document = load_document(str(written(folder)))
    assert list(check(document, sensitivities=most).sensitivities.numbers) == first(found, most)


def test_those_given_are_the_first_of_all_of_a_sample():
    document = load_document(str(RIVER))
    found = check(document, sensitivities=1000)
    assert list(check(document, sensitivities=5).sensitivities.numbers) == first(found, 5)


def test_as_many_processes_as_one_likes(folder, found):
    document = load_document(str(written(folder, TWO_CONDITIONS)))
    alone = check(document, sensitivities=4)
    assert check(document, sensitivities=4, processes=3) == alone


def test_where_all_is_at_rest_only_what_heats_or_cools_does_something(folder, monkeypatch):
    document = load_document(str(written(folder, AT_REST)))
    rows = check(document, sensitivities=50).sensitivities.numbers
    assert {row.path for row in rows} == {"surroundings.air_c", *POWERS}
    monkeypatch.setattr(Rebuilding, "_at_rest", False)
    assert check(document, sensitivities=50).sensitivities.numbers == rows


def test_command(folder, capsys):
    path = str(written(folder))
    assert main(["check", path, "--sensitivities", "9"]) in (0, 1)
    text = capsys.readouterr().out
    assert "does to the smallest margin of a part, U1 junction max under" in " ".join(text.split())
    assert "parts.U1.power_w" in text
    assert "surroundings.air_c" in text
    assert main(["check", path, "--sensitivities", "0"]) == 2
    assert "allowed: 1 to 1000" in capsys.readouterr().err
    assert main(["check", path, "--sensitivities", "2", "--quiet"]) == 2


# Tolerances of numbers that are shape -------------------------------------------------------


def test_a_tolerance_of_a_size_widens_the_band_by_what_the_size_does(folder, found):
    plain = check(load_document(str(written(folder)))).conditions[0].parts[0]
    per_mm = next(
        row.margin_per_unit_k for row in found.sensitivities.numbers if row.path == "box.width_mm"
    )
    stated = {**DOCUMENT, "tolerances": {"box.width_mm": {"plus_minus": 20}}}
    wide = check(load_document(str(written(folder, stated)))).conditions[0].parts[0]
    by = (wide.band_k**2 - plain.band_k**2) ** 0.5
    assert by == pytest.approx(abs(20 * per_mm), rel=1e-3)
