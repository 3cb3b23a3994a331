"""The page about the method: its tables are those the code gives, its laws those of the register."""

import importlib
import importlib.util
import math
import re
from dataclasses import dataclass

import numpy as np
import pytest

from enclosure_check.physics.air import air, rayleigh_number
from enclosure_check.physics.correlation import CORRELATIONS
from enclosure_check.physics.plates import (
    churchill_chu_laminar,
    fall_length,
    hot_side_up_laminar,
    inclined_plate,
    mcadams_down,
)

PAGE = "docs/method.md"
PRESSURE_PA = 101325.0


@pytest.fixture(scope="module")
def method(read_page):
    return read_page(PAGE)


@pytest.fixture(scope="module")
def experiments(root):
    """The module that holds the numerical experiments on boxes and our answers to them."""
    path = root / "tests" / "physics" / "test_box_experiments.py"
    spec = importlib.util.spec_from_file_location("box_experiments", path)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


# The register of laws -----------------------------------------------------------------------


def span(low, high, unit=""):
    if low <= 0 and high == math.inf:
        return "any"
    return f"from {low:g}{unit}" if high == math.inf else f"{low:g} to {high:g}{unit}"


def test_register_of_laws_is_complete(method):
    names = {
        "rayleigh": "Ra ",
        "elenbaas": "El ",
        "stratification": "S ",
        "temperature": "T ",
        "none": "",
    }
    expected = [
        [
            f"`{law.key}`",
            f"{law.name}: `{law.equation}`",
            law.characteristic_length,
            names[law.variable]
            + span(law.valid_from, law.valid_to, " K" if law.variable == "temperature" else ""),
            span(law.prandtl_from, law.prandtl_to),
            f"{law.accuracy_pct:g}, {law.accuracy_basis}",
            law.reference,
        ]
        for law in CORRELATIONS.values()
    ]
    assert method.table("key", "law", "length") == expected


def test_every_key_named_exists(method):
    stems = {key.partition("_")[0] for key in CORRELATIONS} - {"box", "air"}
    named = {
        word
        for word in re.findall(r"`([a-z_0-9]+)`", method.text)
        if word.partition("_")[0] in stems and "_" in word
    }
    assert named
    assert named <= set(CORRELATIONS)


def test_every_film_law_is_explained_before_the_register(method):
    prose = method.text.partition("## Register of laws")[0]
    for law in CORRELATIONS.values():
        year = re.search(r"\b(1[89]|20)\d\d\b", law.reference)
        if year is None or law.key == "churchill_chu_1975_cylinder":
            continue  # made for this project; or used by no part yet
        author = re.split(r", |\d", law.reference)[0].split()[-1]
        assert re.search(rf"{author}[^.]{{0,60}}{year.group()}", prose.replace("\n", " ")), law.key


def test_constants_are_those_of_the_code(method):
    rows = method.table("constant", "value", "unit")
    assert len(rows) > 15
    for name, value, *_ in rows:
        module, _, constant = name.strip("`").rpartition(".")
        assert getattr(importlib.import_module(f"enclosure_check.{module}"), constant) == float(
            value
        ), name


# Outside: boxes against the numerical experiments -------------------------------------------


def plates_w(case):
    """Isolated-plate laws summed, as a hand calculation does it [W]."""
    width, depth, height = case.dims
    rise = case.surface_k - case.air_k
    properties = air(case.air_k + rise / 2, PRESSURE_PA)
    k, span_m = properties.conductivity, width * depth / (2 * (width + depth))
    side = (
        k
        / height
        * churchill_chu_laminar(rayleigh_number(rise, height, properties), properties.prandtl)
    )
    level = rayleigh_number(rise, span_m, properties)
    heat = 0.0
    for face in set(range(6)) - set(case.covered):
        if face < 4:
            heat += side * height * (depth, width)[face // 2] * rise
        else:
            law = hot_side_up_laminar if face == 5 else mcadams_down
            heat += k / span_m * law(level) * width * depth * rise
    return float(heat)


def test_table_of_boxes_is_current(method, experiments):
    rows = experiments.table()
    told = method.table("case", "width x depth x height mm")
    assert [row[0] for row in told] == [case.name for case in experiments.CASES]
    for cells, row, case in zip(told, rows, experiments.CASES, strict=True):
        plates = plates_w(case)
        assert cells == [
            case.name,
            " x ".join(f"{1000 * size:g}" for size in case.dims),
            f"{case.total_w:.1f}",
            f"{row['total_ours_w']:.1f}",
            f"{row['total_difference_pct']:+.1f}",
            f"{plates:.1f}",
            f"{100 * (plates / case.total_w - 1):+.1f}",
        ]


def test_plate_sums_are_those_made_with_the_experiments(experiments):
    """Numerical experiments made for this project: plate laws summed, face by face."""
    theirs = {"X1": 66.2, "X2": 20.0, "X3": 29.6, "X5": 22.0, "X6": 16.1}
    for case in experiments.CASES:
        assert plates_w(case) == pytest.approx(theirs[case.name[:2]], rel=0.01)


def test_table_of_faces_is_current(method, experiments):
    told = method.table("case", "top", "sides", "bottom")
    for cells, row in zip(told, experiments.table(), strict=True):
        expected = [row["case"]]
        for part in ("top", "sides", "bottom"):
            theirs, ours = row[f"{part}_experiment_w"], row[f"{part}_ours_w"]
            expected.append(
                "covered"
                if theirs is None
                else f"{theirs:.2f} / {ours:.2f}, {row[f'{part}_difference_pct']:+.0f}"
            )
        assert cells == expected


# Inside: sealed boxes against the numerical experiments -------------------------------------


@dataclass(frozen=True)
class Sealed:
    """A sealed box with one isothermal board; numerical experiment made for this project."""

    name: str
    about: str
    box: tuple[float, float, float]
    board: tuple[float, float, float]
    total_w: float
    ceiling: float
    floor: float


SEALED = (
    Sealed("B", "upright, gaps 49 mm", (0.2, 0.1, 0.2), (0.15, 0.002, 0.15), 3.69, 0.376, 0.005),
    Sealed("B20", "upright, gaps 20 mm", (0.2, 0.042, 0.2), (0.15, 0.002, 0.15), 3.35, 0.17, 0.002),
    Sealed("B10", "upright, gaps 10 mm", (0.2, 0.022, 0.2), (0.15, 0.002, 0.15), 3.24, 0.079, 0.006),
    Sealed("C", "flat, gaps 49 mm", (0.2, 0.2, 0.1), (0.15, 0.15, 0.002), 2.71, 0.583, 0.017),
    Sealed("D", "flat, 6 mm over the floor", (0.12, 0.08, 0.03), (0.1, 0.06, 0.0016), 1.182, 0.4, 0.442),
)  # fmt: skip
WALL_K, BOARD_K = 300.0, 320.0


def films(size, rise, film_k, inward):
    """Area, up-cosine and film coefficient of the six faces of a cuboid."""
    for axis in range(3):
        a, b = (size[other] for other in range(3) if other != axis)
        up_a, up_b = (float(other == 2) for other in range(3) if other != axis)
        for sign in (-1, 1):
            up_cosine = (-sign if inward else sign) * float(axis == 2)
            length = fall_length(a, b, up_a, up_b)
            film = inclined_plate(
                rise, film_k, PRESSURE_PA, length, a * b / (2 * (a + b)), up_cosine
            )
            yield axis, sign, a * b, float(film.coefficient)


def well_mixed(case):
    """Heat of the board and shares of ceiling and floor with one air node and plate laws."""
    thin = int(np.argmin(case.board))
    first, second = (case.board[axis] for axis in range(3) if axis != thin)
    rim = (first + second) * case.board[thin]

    def heats(air_k):
        board = sum(
            (area + rim) * h * (BOARD_K - air_k)
            for axis, _, area, h in films(
                case.board, BOARD_K - air_k, (BOARD_K + air_k) / 2, inward=False
            )
            if axis == thin
        )
        walls = {
            (axis, sign): area * h * (air_k - WALL_K)
            for axis, sign, area, h in films(
                case.box, WALL_K - air_k, (WALL_K + air_k) / 2, inward=True
            )
        }
        return board, walls

    low, high = WALL_K, BOARD_K
    for _ in range(50):
        middle = (low + high) / 2
        board, walls = heats(middle)
        low, high = (middle, high) if board > sum(walls.values()) else (low, middle)
    return board, walls[2, 1] / board, walls[2, -1] / board


def test_table_of_sealed_boxes_is_current(method):
    told = method.table("case", "inside mm, board")
    for cells, case in zip(told, SEALED, strict=True):
        total, ceiling, floor = well_mixed(case)
        size = " x ".join(f"{1000 * each:g}" for each in case.box)
        assert cells == [
            case.name,
            f"{size} high, {case.about}",
            f"{case.total_w:.2f}",
            f"{total:.2f}",
            f"{100 * (total / case.total_w - 1):+.0f}",
            f"{case.ceiling:.2f}",
            f"{ceiling:.2f}",
            f"{case.floor:.2f}",
            f"{floor:.2f}",
        ]


def test_well_mixed_misses_as_the_experiments_say():
    """Numerical experiment B: 2.8 W with a well-mixed node and ordinary films, for 3.7 W."""
    total, _, floor = well_mixed(SEALED[0])
    assert total == pytest.approx(2.8, abs=0.1)
    assert floor * total == pytest.approx(0.27, abs=0.06)
